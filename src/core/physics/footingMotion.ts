/** Places the base: its attitude, its motion subspace, and the acceleration it has before any speed changes. */
import { rightingArm } from './footingFloat';
import type { StarModel } from './starModel';

/** What the footing gives the kernel at one state. */
export interface BasePlace {
  /** 9, row-major: body components to world components. */
  readonly R_WB: Float64Array;
  /** 3, gravity in body components, m/s^2. */
  readonly gravity_B: Float64Array;
  /** 6 x speeds, column after column: base velocity (rotation, then that of O) per unit of each base speed. */
  readonly subspace: Float64Array;
  /** 6, base velocity in body components. */
  readonly velocity: Float64Array;
  /** 6, rate of the components of the velocity when every base speed is constant. */
  readonly bias: Float64Array;
  /** 9, the planted point in the body frame: place, rate, second rate; a leg that stretches moves it. */
  readonly planted: Float64Array;
}

export function createBasePlace(model: StarModel): BasePlace {
  const planted = new Float64Array(9);
  planted.set(model.footing.point);
  return {
    R_WB: new Float64Array([1, 0, 0, 0, 1, 0, 0, 0, 1]),
    gravity_B: new Float64Array(model.gravity_W),
    subspace: new Float64Array(36),
    velocity: new Float64Array(6),
    bias: new Float64Array(6),
    planted,
  };
}

function placeAttitude(model: StarModel, place: BasePlace, state: Float64Array): void {
  const R = place.R_WB;
  const pose = model.footing.pose;
  if (pose === 'angle') {
    const c = Math.cos(state[0]!);
    const s = Math.sin(state[0]!);
    const k = 1 - c;
    const x = model.footing.axis[0]!;
    const y = model.footing.axis[1]!;
    const z = model.footing.axis[2]!;
    R[0] = c + k * x * x;
    R[1] = k * x * y - s * z;
    R[2] = k * x * z + s * y;
    R[3] = k * x * y + s * z;
    R[4] = c + k * y * y;
    R[5] = k * y * z - s * x;
    R[6] = k * x * z - s * y;
    R[7] = k * y * z + s * x;
    R[8] = c + k * z * z;
  } else if (pose !== 'none') {
    const w = state[0]!;
    const x = state[1]!;
    const y = state[2]!;
    const z = state[3]!;
    const k = 2 / (w * w + x * x + y * y + z * z);
    R[0] = 1 - k * (y * y + z * z);
    R[1] = k * (x * y - w * z);
    R[2] = k * (x * z + w * y);
    R[3] = k * (x * y + w * z);
    R[4] = 1 - k * (x * x + z * z);
    R[5] = k * (y * z - w * x);
    R[6] = k * (x * z - w * y);
    R[7] = k * (y * z + w * x);
    R[8] = 1 - k * (x * x + y * y);
  }
}

/** Column j of a subspace about `point`: unit rotation e seen at O, plus rolling of radius r on normal n. */
function placeColumn(
  S: Float64Array,
  j: number,
  e: Float64Array,
  ex: number,
  ey: number,
  ez: number,
  r: number,
  n: Float64Array,
): void {
  const k = 6 * j;
  S[k] = ex;
  S[k + 1] = ey;
  S[k + 2] = ez;
  S[k + 3] = e[1]! * ez - e[2]! * ey + r * (ey * n[8]! - ez * n[7]!);
  S[k + 4] = e[2]! * ex - e[0]! * ez + r * (ez * n[6]! - ex * n[8]!);
  S[k + 5] = e[0]! * ey - e[1]! * ex + r * (ex * n[7]! - ey * n[6]!);
}

/**
 * Places the base at a state: attitude, gravity in body components, subspace, velocity and bias.
 *
 * Rolling without slipping on z = const: the centre moves at r w x n, n the ground's normal in body components
 * (the last row of R_WB), so the subspace turns with the body and r w x (n x w) is left as bias. A planted point
 * that moves in the body frame at P' carries O at -P'. Allocates nothing.
 */
export function placeBase(model: StarModel, place: BasePlace, state: Float64Array): void {
  placeAttitude(model, place, state);
  const R = place.R_WB;
  const S = place.subspace;
  const V = place.velocity;
  const bias = place.bias;
  const footing = model.footing;
  const G = model.gravity_W;
  const at = model.baseSpeedAt;
  for (let j = 0; j < 3; j++) {
    place.gravity_B[j] = R[j]! * G[0]! + R[3 + j]! * G[1]! + R[6 + j]! * G[2]!;
  }
  const p = place.planted;
  if (footing.pose === 'free') {
    S.fill(0);
    for (let j = 0; j < 6; j++) {
      S[7 * j] = 1;
      V[j] = state[at + j]!;
      bias[j] = 0;
    }
    return;
  }
  let wx = 0;
  let wy = 0;
  let wz = 0;
  if (footing.pose === 'angle') {
    const a = footing.axis;
    placeColumn(S, 0, p, a[0]!, a[1]!, a[2]!, footing.radius, R);
    wx = a[0]! * state[at]!;
    wy = a[1]! * state[at]!;
    wz = a[2]! * state[at]!;
  } else if (footing.pose !== 'none') {
    placeColumn(S, 0, p, 1, 0, 0, footing.radius, R);
    placeColumn(S, 1, p, 0, 1, 0, footing.radius, R);
    placeColumn(S, 2, p, 0, 0, 1, footing.radius, R);
    wx = state[at]!;
    wy = state[at + 1]!;
    wz = state[at + 2]!;
  }
  V[0] = wx;
  V[1] = wy;
  V[2] = wz;
  const r = footing.radius;
  const nx = R[6]!;
  const ny = R[7]!;
  const nz = R[8]!;
  // Velocity of O: P x w - P' + r w x n; the rest of its rate: P' x w - P'' + r w x (n x w).
  V[3] = p[1]! * wz - p[2]! * wy - p[3]! + r * (wy * nz - wz * ny);
  V[4] = p[2]! * wx - p[0]! * wz - p[4]! + r * (wz * nx - wx * nz);
  V[5] = p[0]! * wy - p[1]! * wx - p[5]! + r * (wx * ny - wy * nx);
  const ww = wx * wx + wy * wy + wz * wz;
  const wn = wx * nx + wy * ny + wz * nz;
  bias[0] = 0;
  bias[1] = 0;
  bias[2] = 0;
  bias[3] = p[4]! * wz - p[5]! * wy - p[6]! + r * (nx * ww - wx * wn);
  bias[4] = p[5]! * wx - p[3]! * wz - p[7]! + r * (ny * ww - wy * wn);
  bias[5] = p[3]! * wy - p[4]! * wx - p[8]! + r * (nz * ww - wz * wn);
}

/**
 * Adds the water's wrench on the base, moment about O then force, body components. The righting curve is that of
 * the whole rig with its gimbals at rest, so the weight of the rig at rest is taken out again here; what a gimbal
 * that has swung adds comes from its own weight. Allocates nothing.
 *
 * @param height  m, rise of the float's point above its place at zero pose (freedoms 'all')
 */
export function addWaterWrench(
  model: StarModel,
  place: BasePlace,
  height: number,
  wrench: Float64Array,
): void {
  const floats = model.footing.floats!;
  const rest = model.restRig;
  const g = place.gravity_B;
  const V = place.velocity;
  const a = model.footing.axis;
  const R = place.R_WB;
  const G = model.gravity_W;
  const weight = rest[0]! * Math.sqrt(G[0]! * G[0]! + G[1]! * G[1]! + G[2]! * G[2]!);
  const p = V[0]! * a[0]! + V[1]! * a[1]! + V[2]! * a[2]!;
  const damping = -floats.linearDamping * p - floats.quadraticDamping * p * Math.abs(p);
  // World's up in body components: roll and pitch are read from it.
  const nx = R[6]!;
  const ny = R[7]!;
  const nz = R[8]!;
  const level = ny * ny + nz * nz;
  const righting = -weight * rightingArm(floats.righting, Math.atan2(ny, nz));
  wrench[0] = wrench[0]! + righting + a[0]! * damping - (rest[2]! * g[2]! - rest[3]! * g[1]!);
  wrench[1] = wrench[1]! + a[1]! * damping - (rest[3]! * g[0]! - rest[1]! * g[2]!);
  wrench[2] = wrench[2]! + a[2]! * damping - (rest[1]! * g[1]! - rest[2]! * g[0]!);
  wrench[3] = wrench[3]! - rest[0]! * g[0]!;
  wrench[4] = wrench[4]! - rest[0]! * g[1]!;
  wrench[5] = wrench[5]! - rest[0]! * g[2]!;
  if (model.footing.pose !== 'free') return;
  const root = Math.sqrt(level);
  // sin(pitch) = -nx; the moments are the gradients of their energies in attitude, so nothing is made or lost.
  const pitching = weight * floats.pitchHeight * nx;
  wrench[1] =
    wrench[1]! - (righting * nx * ny) / level + (pitching * nz) / root - floats.pitchDamping * V[1]!;
  wrench[2] = wrench[2]! - (righting * nx * nz) / level - (pitching * ny) / root;
  const q = model.footing.point;
  const vx = V[3]! + V[1]! * q[2]! - V[2]! * q[1]!;
  const vy = V[4]! + V[2]! * q[0]! - V[0]! * q[2]!;
  const vz = V[5]! + V[0]! * q[1]! - V[1]! * q[0]!;
  const lift = -floats.heaveStiffness * height - floats.heaveDamping * (vx * nx + vy * ny + vz * nz);
  wrench[0] = wrench[0]! + lift * (q[1]! * nz - q[2]! * ny);
  wrench[1] = wrench[1]! + lift * (q[2]! * nx - q[0]! * nz);
  wrench[2] = wrench[2]! + lift * (q[0]! * ny - q[1]! * nx);
  wrench[3] = wrench[3]! + lift * nx;
  wrench[4] = wrench[4]! + lift * ny;
  wrench[5] = wrench[5]! + lift * nz;
}

/** Rise of the float's point above its place at zero pose, m, for the pose with a free origin. */
export function floatHeight(model: StarModel, place: BasePlace, state: Float64Array): number {
  const R = place.R_WB;
  const q = model.footing.point;
  return state[6]! + R[6]! * q[0]! + R[7]! * q[1]! + R[8]! * q[2]! - q[2]!;
}

/** Rates of the pose numbers; a quaternion's is half q times (0, w). Allocates nothing. */
export function placePoseRate(
  model: StarModel,
  place: BasePlace,
  state: Float64Array,
  out: Float64Array,
): void {
  const pose = model.footing.pose;
  if (pose === 'none') return;
  if (pose === 'angle') {
    out[0] = state[model.baseSpeedAt]!;
    return;
  }
  const V = place.velocity;
  const R = place.R_WB;
  const w = state[0]!;
  const x = state[1]!;
  const y = state[2]!;
  const z = state[3]!;
  out[0] = -0.5 * (x * V[0]! + y * V[1]! + z * V[2]!);
  out[1] = 0.5 * (w * V[0]! + y * V[2]! - z * V[1]!);
  out[2] = 0.5 * (w * V[1]! + z * V[0]! - x * V[2]!);
  out[3] = 0.5 * (w * V[2]! + x * V[1]! - y * V[0]!);
  if (pose === 'free') {
    out[4] = R[0]! * V[3]! + R[1]! * V[4]! + R[2]! * V[5]!;
    out[5] = R[3]! * V[3]! + R[4]! * V[4]! + R[5]! * V[5]!;
    out[6] = R[6]! * V[3]! + R[7]! * V[4]! + R[8]! * V[5]!;
  } else if (pose === 'rolling-ball') {
    // r w x n in world components, n = world's up: (r w_y, -r w_x) with w in world components.
    const r = model.footing.radius;
    out[4] = r * (R[3]! * V[0]! + R[4]! * V[1]! + R[5]! * V[2]!);
    out[5] = -r * (R[0]! * V[0]! + R[1]! * V[1]! + R[2]! * V[2]!);
  }
}

/**
 * Pose of the base in the world: quaternion w first, then the place of O, m. For feet that move in the body
 * frame, the planted point stays where it stood at zero pose.
 *
 * @param out  7
 */
export function basePose(model: StarModel, place: BasePlace, state: Float64Array, out: Float64Array): void {
  placeBase(model, place, state);
  const footing = model.footing;
  const R = place.R_WB;
  const p = place.planted;
  const c = footing.point;
  if (footing.pose === 'angle') {
    const half = state[0]! / 2;
    const s = Math.sin(half);
    out[0] = Math.cos(half);
    for (let j = 0; j < 3; j++) out[1 + j] = footing.axis[j]! * s;
  } else if (footing.pose === 'none') {
    out[0] = 1;
    out[1] = out[2] = out[3] = 0;
  } else {
    const k = 1 / Math.sqrt(state[0]! ** 2 + state[1]! ** 2 + state[2]! ** 2 + state[3]! ** 2);
    for (let j = 0; j < 4; j++) out[j] = state[j]! * k;
  }
  if (footing.pose === 'free') {
    for (let j = 0; j < 3; j++) out[4 + j] = state[4 + j]!;
    return;
  }
  for (let j = 0; j < 3; j++) {
    out[4 + j] = c[j]! - (R[3 * j]! * p[0]! + R[3 * j + 1]! * p[1]! + R[3 * j + 2]! * p[2]!);
  }
  if (footing.pose === 'rolling-ball') {
    out[4] = out[4]! + state[4]!;
    out[5] = out[5]! + state[5]!;
  } else if (footing.pose === 'angle') {
    out[4] = out[4]! + footing.radius * state[0]! * footing.axis[1]!;
    out[5] = out[5]! - footing.radius * state[0]! * footing.axis[0]!;
  }
}
