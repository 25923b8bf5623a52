/**
 * The star on a line fixed in body and world (edge, floating roll), where most rigs spend their lives. The base has one
 * angle, so everything a gyro does to it is a scalar: with base angle q and tilt t the gyro's kinetic energy is
 * (M11(t) q'^2 + 2 M12(t) q' t' + D t'^2) / 2, M11 and M12 trigonometric polynomials of its tilt, its potential is
 * bilinear in (1, cos q, sin q) and (1, cos t, sin t), and its wheel adds h times d(p(t) q' + z t')/dt, p the spin axis
 * along the line. Lagrange's equations then give the accelerations in a quarter of the work of the general kernel, which
 * stays the authority: the two are compared to rounding.
 */
import { axialMomentum } from './arrayLaw';
import type { FootingModel } from './footing';
import { rightingArm } from './footingFloat';
import { gimbalFrictionTorque, wheelDragTorque } from './losses';
import { cross3, dot3, type Sym3, scale3, subtract3, symmetricTimes3, type Vec3 } from './spatial';
import { gimbalIsDynamic, gimbalIsLocked, type StarModel } from './starModel';

/**
 * Numbers per gyro in `gyro`: M11 5, M12 5, p 3, z 1, potential 9, Js, 1 / hinge inertia, stiffness, rest tilt, damping,
 * mode, held, 1 / Js (0 for a wheel that has none).
 */
const stride = 31;

export interface FixedLineModel {
  /** stride x n. */
  readonly gyro: Float64Array;
  /** Base: inertia about the line, then the cosine and sine shares of its weight's energy. */
  readonly base: Float64Array;
  /** The same two shares of the whole rig at rest, which a righting curve already holds; zero on an edge. */
  readonly rest: Float64Array;
  /** 6: moment and force of a wrench to torque about the line. */
  readonly project: Float64Array;
  /** Weight of the whole rig, N. */
  readonly weight: number;
}

type Parts = Pick<
  StarModel,
  | 'gimbals'
  | 'array'
  | 'gravity_W'
  | 'base'
  | 'restRig'
  | 'hinge'
  | 'mass'
  | 'momentSeries'
  | 'inertiaSeries'
  | 'hingeInertia'
  | 'spring'
  | 'gimbalMode'
  | 'isHeld'
>;

const vector = (a: ArrayLike<number>, at: number): Vec3 => [a[at]!, a[at + 1]!, a[at + 2]!];

/** Compiles the scalars; null when the footing is not a fixed line. O(n). */
export function compileFixedLine(parts: Parts, footing: FootingModel): FixedLineModel | null {
  if (footing.pose !== 'angle' || footing.radius !== 0) return null;
  const e = vector(footing.axis, 0);
  const P = vector(footing.point, 0);
  const v = cross3(P, e);
  const G = vector(parts.gravity_W, 0);
  /** Inertia about the line of a body about O. */
  const about = (m: number, c: Vec3, I: Sym3): number =>
    dot3(e, symmetricTimes3(I, e)) + 2 * dot3(v, cross3(e, c)) + m * dot3(v, v);
  /** Gravity times R(q) d: constant, cosine and sine shares. */
  const lift = (d: Vec3): [number, number, number] => {
    const along = dot3(G, e) * dot3(e, d);
    return [along, dot3(G, d) - along, dot3(G, cross3(e, d))];
  };
  const sym = (a: Float64Array, at: number): Sym3 => Array.from(a.subarray(at, at + 6)) as unknown as Sym3;
  const gyro = new Float64Array(stride * parts.gimbals);
  for (let i = 0; i < parts.gimbals; i++) {
    const a = vector(parts.hinge, 6 * i);
    const b = vector(parts.hinge, 6 * i + 3);
    const m = parts.mass[i]!;
    for (let k = 0; k < 5; k++) {
      const c = k < 3 ? vector(parts.momentSeries, 9 * i + 3 * k) : ([0, 0, 0] as const);
      const I = sym(parts.inertiaSeries, 30 * i + 6 * k);
      const mass = k === 0 ? m : 0;
      const crossed =
        dot3(e, symmetricTimes3(I, a)) + dot3(e, cross3(c, b)) + dot3(v, cross3(a, c)) + mass * dot3(v, b);
      gyro[stride * i + k] = about(mass, c, I);
      gyro[stride * i + 5 + k] = crossed;
      if (k > 2) continue;
      gyro[stride * i + 10 + k] = dot3(e, vector(parts.array.spinSeries, 9 * i + 3 * k));
      gyro.set(lift(k === 0 ? subtract3(c, scale3(P, m)) : c), stride * i + 14 + 3 * k);
    }
    gyro[stride * i + 13] = dot3(a, vector(parts.array.spinSeries, 9 * i));
    gyro[stride * i + 23] = parts.array.axialInertia[i]!;
    gyro[stride * i + 24] = 1 / parts.hingeInertia[i]!;
    gyro.set(parts.spring.subarray(3 * i, 3 * i + 3), stride * i + 25);
    gyro[stride * i + 28] = parts.gimbalMode[i]!;
    gyro[stride * i + 29] = parts.isHeld[i]!;
    const Js = parts.array.axialInertia[i]!;
    gyro[stride * i + 30] = Js > 0 ? 1 / Js : 0;
  }
  const arm = (body: Float64Array): Vec3 => subtract3(vector(body, 1), scale3(P, body[0]!));
  const added = footing.floats?.addedInertia ?? 0;
  const inertia = about(parts.base[0]!, vector(parts.base, 1), sym(parts.base, 4)) + added;
  return {
    gyro,
    base: Float64Array.from([inertia, ...lift(arm(parts.base)).slice(1)]),
    rest: Float64Array.from(footing.floats === null ? [0, 0] : lift(arm(parts.restRig)).slice(1)),
    project: Float64Array.from([...e, ...v]),
    weight: parts.restRig[0]! * Math.sqrt(dot3(G, G)),
  };
}

/** Water's torque about the line beyond the rig's weight: righting and damping. */
function waterTorque(
  model: StarModel,
  line: FixedLineModel,
  angle: number,
  rate: number,
  c: number,
  s: number,
): number {
  const floats = model.footing.floats!;
  const roll = angle > -3 && angle < 3 ? angle : Math.atan2(s, c);
  const righting = -line.weight * rightingArm(floats.righting, roll);
  return righting - floats.linearDamping * rate - floats.quadraticDamping * rate * Math.abs(rate);
}

/**
 * Accelerations of a star on a fixed line: as starAcceleration, for a base and line that do not move by prescription.
 *
 * @param pull  5n, scratch: coupling M12, rate of wheel momentum, spin axis along the line, its slope, torque left
 * @param out   accelerations, from index `at` on
 *
 * O(n), allocates nothing. Source: Lagrange's equations; Routh's treatment of a cyclic angle.
 */
export function accelerateOnLine(
  model: StarModel,
  line: FixedLineModel,
  pull: Float64Array,
  state: Float64Array,
  effort: Float64Array,
  out: Float64Array,
  at: number,
): void {
  const n = model.gimbals;
  const angle = state[0]!;
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  const baseRate = state[1 + n]!;
  const B = line.base;
  const T = line.project;
  const w = 2 * n;
  let M = B[0]!;
  // Cosine and sine shares of all weight that lifts with the angle; the torque is their slope.
  let cosine = B[1]! - line.rest[0]!;
  let sine = B[2]! - line.rest[1]!;
  let force =
    T[0]! * effort[w]! +
    T[1]! * effort[w + 1]! +
    T[2]! * effort[w + 2]! +
    T[3]! * effort[w + 3]! +
    T[4]! * effort[w + 4]! +
    T[5]! * effort[w + 5]!;
  if (model.footing.floats !== null) force += waterTorque(model, line, angle, baseRate, c, s);
  const g = line.gyro;
  const hasDrag = model.hasDrag;
  const hasFriction = model.hasFriction;
  for (let i = 0; i < n; i++) {
    const k = stride * i;
    const tilt = state[1 + i]!;
    const rate = state[2 + n + i]!;
    const speed = state[2 + 2 * n + i]!;
    const c1 = Math.cos(tilt);
    const s1 = Math.sin(tilt);
    const c2 = c1 * c1 - s1 * s1;
    const s2 = 2 * s1 * c1;
    const M12 = g[k + 5]! + g[k + 6]! * c1 + g[k + 7]! * s1 + g[k + 8]! * c2 + g[k + 9]! * s2;
    const M11slope = g[k + 2]! * c1 - g[k + 1]! * s1 + 2 * (g[k + 4]! * c2 - g[k + 3]! * s2);
    const M12slope = g[k + 7]! * c1 - g[k + 6]! * s1 + 2 * (g[k + 9]! * c2 - g[k + 8]! * s2);
    const p = g[k + 10]! + g[k + 11]! * c1 + g[k + 12]! * s1;
    const pSlope = g[k + 12]! * c1 - g[k + 11]! * s1;
    const z = g[k + 13]!;
    M += g[k]! + g[k + 1]! * c1 + g[k + 2]! * s1 + g[k + 3]! * c2 + g[k + 4]! * s2;
    cosine += g[k + 15]! + g[k + 18]! * c1 + g[k + 21]! * s1;
    sine += g[k + 16]! + g[k + 19]! * c1 + g[k + 22]! * s1;
    const weight =
      (g[k + 20]! + g[k + 21]! * c + g[k + 22]! * s) * c1 -
      (g[k + 17]! + g[k + 18]! * c + g[k + 19]! * s) * s1;
    let hRate = 0;
    let h: number;
    if (g[k + 29] === 1) h = axialMomentum(g[k + 23]!, speed, 0);
    else {
      h = axialMomentum(g[k + 23]!, speed, p * baseRate + z * rate);
      hRate = effort[n + i]!;
      if (hasDrag) {
        const D = model.drag;
        hRate += wheelDragTorque(D[3 * i]!, D[3 * i + 1]!, D[3 * i + 2]!, speed);
      }
    }
    const l = 5 * i;
    pull[l] = M12;
    pull[l + 1] = hRate;
    pull[l + 2] = p;
    pull[l + 3] = pSlope;
    force -= rate * (M11slope * baseRate + M12slope * rate + h * pSlope) + hRate * p;
    if (g[k + 28] === gimbalIsDynamic) {
      let torque = effort[i]! + weight - hRate * z + baseRate * (0.5 * M11slope * baseRate + h * pSlope);
      torque -= g[k + 25]! * (tilt - g[k + 26]!) + g[k + 27]! * rate;
      if (hasFriction) {
        const F = model.friction;
        const q = 5 * i;
        torque += gimbalFrictionTorque(F[q]!, F[q + 1]!, F[q + 2]!, F[q + 3]!, F[q + 4]!, rate);
      }
      const share = M12 * g[k + 24]!;
      pull[l + 4] = torque;
      M -= share * M12;
      force -= share * torque;
    } else {
      const prescribed = g[k + 28] === gimbalIsLocked ? 0 : effort[i]!;
      pull[l + 4] = prescribed;
      force -= M12 * prescribed;
    }
  }
  const baseAcceleration = (force + sine * c - cosine * s) / M;
  out[at] = baseAcceleration;
  for (let i = 0; i < n; i++) {
    const k = stride * i;
    const l = 5 * i;
    let acceleration = pull[l + 4]!;
    if (g[k + 28] === gimbalIsDynamic) {
      acceleration = (acceleration - pull[l]! * baseAcceleration) * g[k + 24]!;
    }
    out[at + 1 + i] = acceleration;
    let spinning = 0;
    if (g[k + 29] === 0) {
      spinning = pull[l + 1]! * g[k + 30]!;
      spinning -= pull[l + 2]! * baseAcceleration + g[k + 13]! * acceleration;
      spinning -= pull[l + 3]! * state[2 + n + i]! * baseRate;
    }
    out[at + 1 + n + i] = spinning;
  }
}
