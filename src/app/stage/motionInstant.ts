import type { Motion } from '../../core/trial';

/** One instant of a motion, read between two of its samples. Frames and units as in Motion. */
export interface Instant {
  time: number;
  readonly pose: Float64Array;
  readonly tilt: Float64Array;
  readonly tiltRate: Float64Array;
  readonly plannedTilt: Float64Array;
  readonly feet: Float64Array;
  readonly isFootDown: Uint8Array;
  readonly centreOfMass: Float64Array;
  readonly centreOfPressure: Float64Array;
  readonly momentum: Float64Array;
  readonly torque: Float64Array;
  demand: number;
  /** m, world z; NaN on land. */
  water: number;
  waterSlope: number;
}

/** Room for one instant of any motion with these many gyros and legs. */
export const createInstant = (gyros: number, legs: number): Instant => ({
  time: 0,
  pose: Float64Array.of(0, 0, 0, 1, 0, 0, 0),
  tilt: new Float64Array(gyros),
  tiltRate: new Float64Array(gyros),
  plannedTilt: new Float64Array(gyros).fill(Number.NaN),
  feet: new Float64Array(3 * legs),
  isFootDown: new Uint8Array(legs),
  centreOfMass: new Float64Array(3),
  centreOfPressure: new Float64Array(2).fill(Number.NaN),
  momentum: new Float64Array(3),
  torque: new Float64Array(3),
  demand: 0,
  water: Number.NaN,
  waterSlope: 0,
});

/** Between two values; beside a value that is not a number the nearer of the two stands as it is. */
function between(a: number, b: number, share: number): number {
  if (Number.isNaN(a) || Number.isNaN(b)) return share < 0.5 ? a : b;
  return a + (b - a) * share;
}

function blend(column: Float64Array, width: number, i: number, j: number, share: number, out: Float64Array) {
  for (let k = 0; k < width; k++) out[k] = between(column[i * width + k], column[j * width + k], share);
}

/** Blends two attitudes (w first) the short way round and makes the result a unit quaternion. */
function blendAttitude(pose: Float64Array, i: number, j: number, share: number, out: Float64Array) {
  const a = 7 * i + 3;
  const b = 7 * j + 3;
  let dot = 0;
  for (let k = 0; k < 4; k++) dot += pose[a + k] * pose[b + k];
  const sign = dot < 0 ? -1 : 1;
  let square = 0;
  for (let k = 0; k < 4; k++) {
    const q = pose[a + k] * (1 - share) + sign * pose[b + k] * share;
    out[3 + k] = q;
    square += q * q;
  }
  const size = Math.sqrt(square) || 1;
  for (let k = 0; k < 4; k++) out[3 + k] /= size;
}

/**
 * Reads a motion at any time into `out`: straight lines between the two samples beside it, attitudes along the
 * chord of the unit quaternions (samples lie close enough that the chord and the arc cannot be told apart).
 * A time before the first or after the last sample reads that sample. O(gyros + legs), allocates nothing.
 */
export function readInstant(motion: Motion, time: number, out: Instant): void {
  const last = motion.samples - 1;
  const interval = last > 0 ? (motion.time[last] - motion.time[0]) / last : 1;
  const place = Math.min(last, Math.max(0, (time - motion.time[0]) / interval)) || 0;
  const i = Math.min(last, Math.floor(place));
  const j = Math.min(last, i + 1);
  const share = place - i;
  out.time = time;
  blend(motion.pose, 7, i, j, share, out.pose);
  blendAttitude(motion.pose, i, j, share, out.pose);
  blend(motion.tilt, motion.gyros, i, j, share, out.tilt);
  blend(motion.tiltRate, motion.gyros, i, j, share, out.tiltRate);
  blend(motion.plannedTilt, motion.gyros, i, j, share, out.plannedTilt);
  blend(motion.feet, 3 * motion.legs, i, j, share, out.feet);
  const nearer = share < 0.5 ? i : j;
  for (let k = 0; k < motion.legs; k++) out.isFootDown[k] = motion.isFootDown[nearer * motion.legs + k];
  blend(motion.centreOfMass, 3, i, j, share, out.centreOfMass);
  blend(motion.centreOfPressure, 2, i, j, share, out.centreOfPressure);
  blend(motion.momentum, 3, i, j, share, out.momentum);
  blend(motion.torque, 3, i, j, share, out.torque);
  out.demand = between(motion.demand[i], motion.demand[j], share);
  const isAfloat = motion.water.length > 0;
  out.water = isAfloat ? between(motion.water[i], motion.water[j], share) : Number.NaN;
  out.waterSlope = isAfloat ? between(motion.waterSlope[i], motion.waterSlope[j], share) : 0;
}

/** How far the body's own up leans from the world's up at an instant, rad: 0 upright, pi upside down. */
export function leanOf(pose: ArrayLike<number>): number {
  const cosine = 1 - 2 * (pose[4] * pose[4] + pose[5] * pose[5]);
  return Math.acos(Math.min(1, Math.max(-1, cosine)));
}

/** Roll (about x) and pitch (about y) of a body, rad, in the order yaw, pitch, roll. */
export function rollAndPitch(pose: ArrayLike<number>): readonly [roll: number, pitch: number] {
  const w = pose[3];
  const x = pose[4];
  const y = pose[5];
  const z = pose[6];
  const roll = Math.atan2(2 * (w * x + y * z), 1 - 2 * (x * x + y * y));
  const pitch = Math.asin(Math.min(1, Math.max(-1, 2 * (w * y - z * x))));
  return [roll, pitch];
}
