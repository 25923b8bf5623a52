/**
 * Forward dynamics of the star by the articulated-body method, specialised: one parent, every inertia already
 * seen from O in body components, wheels' angles eliminated. O(n), no garbage.
 *
 * Source: Featherstone, Rigid Body Dynamics Algorithms (2008), ch. 7; gyrostat momentum per the array law.
 */
import { axialMomentum, placeSpinAxis } from './arrayLaw';
import { solveBase } from './baseSolve';
import { accelerateOnLine } from './fixedLine';
import { addWaterWrench, floatHeight, placeBase, placePoseRate } from './footingMotion';
import { gimbalFrictionTorque, wheelDragTorque } from './losses';
import { gimbalIsDynamic, gimbalIsLocked, type StarModel } from './starModel';
import type { StarWork } from './starWork';

/**
 * Accelerations of the star.
 *
 * @param model   compiled star of n gyros
 * @param work    work space of this caller; its base and planted point may have been set for this instant
 * @param state   model.stateSize, see starModel
 * @param effort  model.effortSize, see starModel
 * @param out     model.accelerationSize: base speeds' rates, tilt accelerations, wheel speed rates; no alias
 *
 * O(n), allocates nothing. Source: Featherstone (2008), ch. 7.
 */
export function starAcceleration(
  model: StarModel,
  work: StarWork,
  state: Float64Array,
  effort: Float64Array,
  out: Float64Array,
): void {
  const n = model.gimbals;
  const nb = model.footing.speeds;
  const place = work.place;
  placeBase(model, place, state);
  const S = place.subspace;
  const V = place.velocity;
  const wrench = work.wrench;
  for (let k = 0; k < 6; k++) wrench[k] = effort[2 * n + k]!;
  if (model.footing.floats !== null) {
    addWaterWrench(
      model,
      place,
      model.footing.pose === 'free' ? floatHeight(model, place, state) : 0,
      wrench,
    );
  }
  const vx = V[3]!;
  const vy = V[4]!;
  const vz = V[5]!;
  const wx = V[0]!;
  const wy = V[1]!;
  const wz = V[2]!;

  // Rigid composite and bias of the base, gravity entering as an acceleration of O the other way.
  const b = work.base;
  let M = b[0]!;
  let cx = b[1]!;
  let cy = b[2]!;
  let cz = b[3]!;
  let xx = b[4]!;
  let yy = b[5]!;
  let zz = b[6]!;
  let xy = b[7]!;
  let xz = b[8]!;
  let yz = b[9]!;
  const ux = b[10]!;
  const uy = b[11]!;
  const uz = b[12]!;
  let px = M * vx + wy * cz - wz * cy + ux;
  let py = M * vy + wz * cx - wx * cz + uy;
  let pz = M * vz + wx * cy - wy * cx + uz;
  let lx = xx * wx + xy * wy + xz * wz + cy * vz - cz * vy + b[13]!;
  let ly = xy * wx + yy * wy + yz * wz + cz * vx - cx * vz + b[14]!;
  let lz = xz * wx + yz * wy + zz * wz + cx * vy - cy * vx + b[15]!;
  let f0 = wy * lz - wz * ly + vy * pz - vz * py + uy * vz - uz * vy + b[25]!;
  let f1 = wz * lx - wx * lz + vz * px - vx * pz + uz * vx - ux * vz + b[26]!;
  let f2 = wx * ly - wy * lx + vx * py - vy * px + ux * vy - uy * vx + b[27]!;
  f0 += b[16]! * wx + b[19]! * wy + b[20]! * wz;
  f1 += b[19]! * wx + b[17]! * wy + b[21]! * wz;
  f2 += b[20]! * wx + b[21]! * wy + b[18]! * wz;
  let f3 = wy * pz - wz * py + wy * uz - wz * uy + b[22]!;
  let f4 = wz * px - wx * pz + wz * ux - wx * uz + b[23]!;
  let f5 = wx * py - wy * px + wx * uy - wy * ux + b[24]!;
  const drive = work.drive;
  const B = place.bias;
  const g = place.gravity_B;
  drive[0] = B[0]!;
  drive[1] = B[1]!;
  drive[2] = B[2]!;
  drive[3] = B[3]! - g[0]!;
  drive[4] = B[4]! - g[1]!;
  drive[5] = B[5]! - g[2]!;
  const d0 = drive[0]!;
  const d1 = drive[1]!;
  const d2 = drive[2]!;
  const d3 = drive[3]!;
  const d4 = drive[4]!;
  const d5 = drive[5]!;

  const array = model.array;
  const hinge = model.hinge;
  const moment = model.momentSeries;
  const inertia = model.inertiaSeries;
  const U = work.hingeForce;
  const rest = work.hingeRest;
  const spin = work.spin;
  const hRate = work.momentumRate;
  const K = work.articulated;
  const single = nb === 1;
  let reduction = 0;
  let pull = 0;
  if (nb > 1) K.fill(0);
  for (let i = 0; i < n; i++) {
    const tilt = state[model.tiltAt + i]!;
    const rate = state[model.rateAt + i]!;
    const speed = state[model.wheelSpeedAt + i]!;
    const c1 = Math.cos(tilt);
    const s1 = Math.sin(tilt);
    const c2 = c1 * c1 - s1 * s1;
    const s2 = 2 * s1 * c1;
    placeSpinAxis(array, i, c1, s1, spin, 3 * i);
    const sx = spin[3 * i]!;
    const sy = spin[3 * i + 1]!;
    const sz = spin[3 * i + 2]!;
    const a = 6 * i;
    const ax = hinge[a]!;
    const ay = hinge[a + 1]!;
    const az = hinge[a + 2]!;
    const bx = hinge[a + 3]!;
    const by = hinge[a + 4]!;
    const bz = hinge[a + 5]!;
    const m = model.mass[i]!;
    const e = 9 * i;
    const mx = moment[e]! + moment[e + 3]! * c1 + moment[e + 6]! * s1;
    const my = moment[e + 1]! + moment[e + 4]! * c1 + moment[e + 7]! * s1;
    const mz = moment[e + 2]! + moment[e + 5]! * c1 + moment[e + 8]! * s1;
    const t = 30 * i;
    const Ixx =
      inertia[t]! +
      inertia[t + 6]! * c1 +
      inertia[t + 12]! * s1 +
      inertia[t + 18]! * c2 +
      inertia[t + 24]! * s2;
    const Iyy =
      inertia[t + 1]! +
      inertia[t + 7]! * c1 +
      inertia[t + 13]! * s1 +
      inertia[t + 19]! * c2 +
      inertia[t + 25]! * s2;
    const Izz =
      inertia[t + 2]! +
      inertia[t + 8]! * c1 +
      inertia[t + 14]! * s1 +
      inertia[t + 20]! * c2 +
      inertia[t + 26]! * s2;
    const Ixy =
      inertia[t + 3]! +
      inertia[t + 9]! * c1 +
      inertia[t + 15]! * s1 +
      inertia[t + 21]! * c2 +
      inertia[t + 27]! * s2;
    const Ixz =
      inertia[t + 4]! +
      inertia[t + 10]! * c1 +
      inertia[t + 16]! * s1 +
      inertia[t + 22]! * c2 +
      inertia[t + 28]! * s2;
    const Iyz =
      inertia[t + 5]! +
      inertia[t + 11]! * c1 +
      inertia[t + 17]! * s1 +
      inertia[t + 23]! * c2 +
      inertia[t + 29]! * s2;

    // Gimbal's motion, and its wheel's momentum by the array law.
    const gx = wx + ax * rate;
    const gy = wy + ay * rate;
    const gz = wz + az * rate;
    const qx = vx + bx * rate;
    const qy = vy + by * rate;
    const qz = vz + bz * rate;
    const held = model.isHeld[i] === 1;
    const along = held ? 0 : sx * gx + sy * gy + sz * gz;
    const h = axialMomentum(array.axialInertia[i]!, speed, along);
    const k3 = 3 * i;
    let hDot = 0;
    if (!held) {
      hDot = effort[n + i]!;
      if (model.hasDrag) {
        const D = model.drag;
        hDot += wheelDragTorque(D[k3]!, D[k3 + 1]!, D[k3 + 2]!, speed);
      }
    }
    hRate[i] = hDot;
    px = m * qx + gy * mz - gz * my;
    py = m * qy + gz * mx - gx * mz;
    pz = m * qz + gx * my - gy * mx;
    lx = Ixx * gx + Ixy * gy + Ixz * gz + my * qz - mz * qy + h * sx;
    ly = Ixy * gx + Iyy * gy + Iyz * gz + mz * qx - mx * qz + h * sy;
    lz = Ixz * gx + Iyz * gy + Izz * gz + mx * qy - my * qx + h * sz;
    // Acceleration from the hinge turning with the base: V x (hinge rate).
    const ex = (wy * az - wz * ay) * rate;
    const ey = (wz * ax - wx * az) * rate;
    const ez = (wx * ay - wy * ax) * rate;
    const hx = (wy * bz - wz * by + vy * az - vz * ay) * rate;
    const hy = (wz * bx - wx * bz + vz * ax - vx * az) * rate;
    const hz = (wx * by - wy * bx + vx * ay - vy * ax) * rate;
    const r0 =
      gy * lz - gz * ly + qy * pz - qz * py + hDot * sx + Ixx * ex + Ixy * ey + Ixz * ez + my * hz - mz * hy;
    const r1 =
      gz * lx - gx * lz + qz * px - qx * pz + hDot * sy + Ixy * ex + Iyy * ey + Iyz * ez + mz * hx - mx * hz;
    const r2 =
      gx * ly - gy * lx + qx * py - qy * px + hDot * sz + Ixz * ex + Iyz * ey + Izz * ez + mx * hy - my * hx;
    const r3 = gy * pz - gz * py + m * hx + ey * mz - ez * my;
    const r4 = gz * px - gx * pz + m * hy + ez * mx - ex * mz;
    const r5 = gx * py - gy * px + m * hz + ex * my - ey * mx;

    const U0 = Ixx * ax + Ixy * ay + Ixz * az + my * bz - mz * by;
    const U1 = Ixy * ax + Iyy * ay + Iyz * az + mz * bx - mx * bz;
    const U2 = Ixz * ax + Iyz * ay + Izz * az + mx * by - my * bx;
    const U3 = m * bx + ay * mz - az * my;
    const U4 = m * by + az * mx - ax * mz;
    const U5 = m * bz + ax * my - ay * mx;
    U[a] = U0;
    U[a + 1] = U1;
    U[a + 2] = U2;
    U[a + 3] = U3;
    U[a + 4] = U4;
    U[a + 5] = U5;

    M += m;
    cx += mx;
    cy += my;
    cz += mz;
    xx += Ixx;
    yy += Iyy;
    zz += Izz;
    xy += Ixy;
    xz += Ixz;
    yz += Iyz;
    let carried: number;
    if (model.gimbalMode[i] === gimbalIsDynamic) {
      const k5 = 3 * i;
      let torque =
        effort[i]! - model.spring[k5]! * (tilt - model.spring[k5 + 1]!) - model.spring[k5 + 2]! * rate;
      if (model.hasFriction) {
        const F = model.friction;
        const q = 5 * i;
        torque += gimbalFrictionTorque(F[q]!, F[q + 1]!, F[q + 2]!, F[q + 3]!, F[q + 4]!, rate);
      }
      const D = model.hingeInertia[i]!;
      const left = torque - (ax * r0 + ay * r1 + az * r2 + bx * r3 + by * r4 + bz * r5);
      rest[i] = left;
      carried = (left - (U0 * d0 + U1 * d1 + U2 * d2 + U3 * d3 + U4 * d4 + U5 * d5)) / D;
      if (single) {
        const k = U0 * S[0]! + U1 * S[1]! + U2 * S[2]! + U3 * S[3]! + U4 * S[4]! + U5 * S[5]!;
        reduction += (k * k) / D;
        pull += k * carried;
      } else if (nb > 1) {
        for (let r = 0; r < 6; r++) {
          const u = U[a + r]! / D;
          for (let c = 0; c <= r; c++) K[6 * r + c] = K[6 * r + c]! - u * U[a + c]!;
        }
      }
    } else {
      carried = model.gimbalMode[i] === gimbalIsLocked ? 0 : effort[i]!;
      rest[i] = carried;
      if (single) {
        pull += (U0 * S[0]! + U1 * S[1]! + U2 * S[2]! + U3 * S[3]! + U4 * S[4]! + U5 * S[5]!) * carried;
      }
    }
    f0 += r0;
    f1 += r1;
    f2 += r2;
    f3 += r3;
    f4 += r4;
    f5 += r5;
    if (!single) {
      f0 += U0 * carried;
      f1 += U1 * carried;
      f2 += U2 * carried;
      f3 += U3 * carried;
      f4 += U4 * carried;
      f5 += U5 * carried;
    }
  }

  // What the base has to carry at zero speed rates: composite times drive, plus bias, less the wrench.
  f0 += xx * d0 + xy * d1 + xz * d2 + cy * d5 - cz * d4 - wrench[0]!;
  f1 += xy * d0 + yy * d1 + yz * d2 + cz * d3 - cx * d5 - wrench[1]!;
  f2 += xz * d0 + yz * d1 + zz * d2 + cx * d4 - cy * d3 - wrench[2]!;
  f3 += M * d3 + d1 * cz - d2 * cy - wrench[3]!;
  f4 += M * d4 + d2 * cx - d0 * cz - wrench[4]!;
  f5 += M * d5 + d0 * cy - d1 * cx - wrench[5]!;
  if (single) {
    const a0 = S[0]!;
    const a1 = S[1]!;
    const a2 = S[2]!;
    const b0 = S[3]!;
    const b1 = S[4]!;
    const b2 = S[5]!;
    const whole =
      a0 * (xx * a0 + 2 * (xy * a1 + xz * a2)) +
      a1 * (yy * a1 + 2 * yz * a2) +
      a2 * a2 * zz +
      M * (b0 * b0 + b1 * b1 + b2 * b2) +
      2 * (b0 * (a1 * cz - a2 * cy) + b1 * (a2 * cx - a0 * cz) + b2 * (a0 * cy - a1 * cx));
    const asked = a0 * f0 + a1 * f1 + a2 * f2 + b0 * f3 + b1 * f4 + b2 * f5 + pull;
    const gain = -asked / (whole - reduction);
    out[0] = gain;
    drive[0] = d0 + a0 * gain;
    drive[1] = d1 + a1 * gain;
    drive[2] = d2 + a2 * gain;
    drive[3] = d3 + b0 * gain;
    drive[4] = d4 + b1 * gain;
    drive[5] = d5 + b2 * gain;
  } else if (nb > 1) {
    K[0] = K[0]! + xx;
    K[6] = K[6]! + xy;
    K[7] = K[7]! + yy;
    K[12] = K[12]! + xz;
    K[13] = K[13]! + yz;
    K[14] = K[14]! + zz;
    K[18] = K[18]!;
    K[19] = K[19]! + cz;
    K[20] = K[20]! - cy;
    K[21] = K[21]! + M;
    K[24] = K[24]! - cz;
    K[26] = K[26]! + cx;
    K[28] = K[28]! + M;
    K[30] = K[30]! + cy;
    K[31] = K[31]! - cx;
    K[35] = K[35]! + M;
    const force = work.right;
    force[0] = -f0;
    force[1] = -f1;
    force[2] = -f2;
    force[3] = -f3;
    force[4] = -f4;
    force[5] = -f5;
    solveBase(work, nb, out);
  }
  const w0 = drive[0]!;
  const w1 = drive[1]!;
  const w2 = drive[2]!;
  for (let i = 0; i < n; i++) {
    const a = 6 * i;
    let acceleration = rest[i]!;
    if (model.gimbalMode[i] === gimbalIsDynamic) {
      acceleration -=
        U[a]! * w0 +
        U[a + 1]! * w1 +
        U[a + 2]! * w2 +
        U[a + 3]! * drive[3]! +
        U[a + 4]! * drive[4]! +
        U[a + 5]! * drive[5]!;
      acceleration /= model.hingeInertia[i]!;
    }
    out[nb + i] = acceleration;
    const sx = spin[3 * i]!;
    const sy = spin[3 * i + 1]!;
    const sz = spin[3 * i + 2]!;
    const ax = hinge[a]!;
    const ay = hinge[a + 1]!;
    const az = hinge[a + 2]!;
    const rate = state[model.rateAt + i]!;
    // Rate of the gimbal's turning along the spin axis: s . w' + s' . w, the tilt's own share included.
    const turning =
      sx * (w0 + ax * acceleration) +
      sy * (w1 + ay * acceleration) +
      sz * (w2 + az * acceleration) +
      rate * ((ay * sz - az * sy) * wx + (az * sx - ax * sz) * wy + (ax * sy - ay * sx) * wz);
    const Js = array.axialInertia[i]!;
    if (model.isHeld[i] === 1) {
      out[nb + n + i] = 0;
      hRate[i] = Js * turning;
    } else {
      out[nb + n + i] = (Js > 0 ? hRate[i]! / Js : 0) - turning;
    }
  }
}

/**
 * Rate of the whole state: pose rate, tilt rate, accelerations, in the state's own layout. A base on a fixed line goes
 * by the quick route, and `work.place` is then left alone.
 *
 * @param out  model.stateSize; may not alias an input
 *
 * O(n), allocates nothing.
 */
export function starDerivative(
  model: StarModel,
  work: StarWork,
  state: Float64Array,
  effort: Float64Array,
  out: Float64Array,
): void {
  const n = model.gimbals;
  if (model.line !== null && !work.isMoving) {
    out[0] = state[1 + n]!;
    for (let i = 0; i < n; i++) out[1 + i] = state[2 + n + i]!;
    accelerateOnLine(model, model.line, work.hingeForce, state, effort, out, 1 + n);
    return;
  }
  const a = work.acceleration;
  starAcceleration(model, work, state, effort, a);
  placePoseRate(model, work.place, state, out);
  for (let i = 0; i < n; i++) out[model.tiltAt + i] = state[model.rateAt + i]!;
  const from = model.baseSpeedAt;
  for (let k = 0; k < a.length; k++) out[from + k] = a[k]!;
}

/** Brings a drifted quaternion back to unit length; call it between steps. */
export function settleState(model: StarModel, state: Float64Array): void {
  if (model.footing.poseSize < 4) return;
  const w = state[0]!;
  const x = state[1]!;
  const y = state[2]!;
  const z = state[3]!;
  const k = 1 / Math.sqrt(w * w + x * x + y * y + z * z);
  state[0] = w * k;
  state[1] = x * k;
  state[2] = y * k;
  state[3] = z * k;
}
