/**
 * The law of the array, stated here and nowhere else.
 *
 * - The spin axis of wheel i is its rest direction turned about the gimbal axis by the tilt (Rodrigues).
 * - Its momentum along that axis is h_i = J_s (Omega_i + s_i . omega_gimbal), omega_gimbal being the inertial
 *   rate of its gimbal, body rate plus tilt rate about the gimbal axis.
 * - The torque of the array on the body is minus the rate of change of the array's momentum in the inertial
 *   frame. Here "momentum of the array" means the wheels' momentum along their spin axes; what the gimbals'
 *   and wheels' transverse inertia adds belongs to the star's mass matrix.
 *
 * All vectors are in body components: x forward, y left, z up. Torque signs: positive turns the body
 * right-handed about the axis.
 *
 * Sources: momentum theorem; Wie, Space Vehicle Dynamics and Control, ch. 7.
 */
import { cross3, dot3, scale3, subtract3, unit3, type Vec3 } from './spatial';

export interface ArrayGyro {
  /** Direction, body frame; need not be of unit length. */
  readonly gimbalAxis: Vec3;
  /** Direction of the spin axis at zero tilt, body frame. */
  readonly spinAxis: Vec3;
  /** J_s, kg*m^2. */
  readonly axialInertia: number;
}

export interface ArrayModel {
  readonly count: number;
  /** 3n, unit vectors. */
  readonly gimbalAxis: Float64Array;
  /** 9n: s(tilt) = c0 + c1 cos(tilt) + c2 sin(tilt), three vectors for each gyro. */
  readonly spinSeries: Float64Array;
  /** n, J_s, kg*m^2. */
  readonly axialInertia: Float64Array;
}

/** Compiles an array once; the model is shared by planner, pictures and star. O(n). */
export function compileArray(gyros: readonly ArrayGyro[]): ArrayModel {
  const count = gyros.length;
  const gimbalAxis = new Float64Array(3 * count);
  const spinSeries = new Float64Array(9 * count);
  const axialInertia = new Float64Array(count);
  gyros.forEach((gyro, i) => {
    const a = unit3(gyro.gimbalAxis);
    const s = unit3(gyro.spinAxis);
    const along = scale3(a, dot3(a, s));
    gimbalAxis.set(a, 3 * i);
    spinSeries.set(along, 9 * i);
    spinSeries.set(subtract3(s, along), 9 * i + 3);
    spinSeries.set(cross3(a, s), 9 * i + 6);
    axialInertia[i] = gyro.axialInertia;
  });
  return { count, gimbalAxis, spinSeries, axialInertia };
}

/**
 * Spin axis of gyro i at a tilt, given the tilt's cosine and sine; unit vector, body frame, written to
 * out[at..at+2]. O(1), allocates nothing.
 */
export function placeSpinAxis(
  array: ArrayModel,
  i: number,
  cosine: number,
  sine: number,
  out: Float64Array,
  at: number,
): void {
  const c = array.spinSeries;
  const k = 9 * i;
  out[at] = c[k]! + c[k + 3]! * cosine + c[k + 6]! * sine;
  out[at + 1] = c[k + 1]! + c[k + 4]! * cosine + c[k + 7]! * sine;
  out[at + 2] = c[k + 2]! + c[k + 5]! * cosine + c[k + 8]! * sine;
}

/** Spin axis of gyro i at `tilt` (rad): 3 numbers, body frame, written to out[at..at+2]. O(1). */
export function spinAxisAt(array: ArrayModel, i: number, tilt: number, out: Float64Array, at = 0): void {
  placeSpinAxis(array, i, Math.cos(tilt), Math.sin(tilt), out, at);
}

/** Momentum of one wheel along its spin axis, N*m*s: J_s (Omega + s . omega_gimbal). */
export const axialMomentum = (axialInertia: number, speed: number, rateAlongSpin: number): number =>
  axialInertia * (speed + rateAlongSpin);

/**
 * Momentum of each wheel along its spin axis.
 *
 * @param array   compiled array of n gyros
 * @param tilt    n, rad
 * @param rate    n, rad/s, tilt rates
 * @param speed   n, rad/s, Omega: wheel relative to gimbal
 * @param w_WB_B  3, rad/s, body rate in the body frame
 * @param out     n, N*m*s; may not alias an input
 */
export function wheelMomenta(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  rate: ArrayLike<number>,
  speed: ArrayLike<number>,
  w_WB_B: ArrayLike<number>,
  out: Float64Array,
): void {
  const c = array.spinSeries;
  const a = array.gimbalAxis;
  for (let i = 0; i < array.count; i++) {
    const cosine = Math.cos(tilt[i]!);
    const sine = Math.sin(tilt[i]!);
    let along = 0;
    for (let j = 0; j < 3; j++) {
      const s = c[9 * i + j]! + c[9 * i + 3 + j]! * cosine + c[9 * i + 6 + j]! * sine;
      along += s * (w_WB_B[j]! + a[3 * i + j]! * rate[i]!);
    }
    out[i] = axialMomentum(array.axialInertia[i]!, speed[i]!, along);
  }
}

/**
 * Momentum of the array: the sum of h_i s_i.
 *
 * @param array     compiled array of n gyros
 * @param tilt      n, rad
 * @param momentum  n, N*m*s, each wheel's momentum along its spin axis (see wheelMomenta)
 * @param out       3, N*m*s, body frame; may not alias an input
 */
export function arrayMomentum(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentum: ArrayLike<number>,
  out: Float64Array,
): void {
  const c = array.spinSeries;
  out[0] = out[1] = out[2] = 0;
  for (let i = 0; i < array.count; i++) {
    const cosine = Math.cos(tilt[i]!);
    const sine = Math.sin(tilt[i]!);
    const h = momentum[i]!;
    for (let j = 0; j < 3; j++) {
      out[j] = out[j]! + h * (c[9 * i + j]! + c[9 * i + 3 + j]! * cosine + c[9 * i + 6 + j]! * sine);
    }
  }
}

/**
 * Torque of the array on the body: minus the rate of change of the wheels' momentum in the inertial frame,
 * wheels coasting (no motor torque, so each h_i is constant).
 *
 * @param array     compiled array of n gyros
 * @param tilt      n, rad
 * @param rate      n, rad/s, tilt rates
 * @param momentum  n, N*m*s, each wheel's momentum along its spin axis
 * @param w_WB_B    3, rad/s, body rate in the body frame
 * @param out       3, N*m, body frame; may not alias an input
 *
 * O(n), allocates nothing. Source: momentum theorem; Wie, Space Vehicle Dynamics and Control, ch. 7.
 */
export function arrayTorque(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  rate: ArrayLike<number>,
  momentum: ArrayLike<number>,
  w_WB_B: ArrayLike<number>,
  out: Float64Array,
): void {
  const c = array.spinSeries;
  const a = array.gimbalAxis;
  out[0] = out[1] = out[2] = 0;
  for (let i = 0; i < array.count; i++) {
    const cosine = Math.cos(tilt[i]!);
    const sine = Math.sin(tilt[i]!);
    const h = momentum[i]!;
    const k = 9 * i;
    const sx = c[k]! + c[k + 3]! * cosine + c[k + 6]! * sine;
    const sy = c[k + 1]! + c[k + 4]! * cosine + c[k + 7]! * sine;
    const sz = c[k + 2]! + c[k + 5]! * cosine + c[k + 8]! * sine;
    const wx = w_WB_B[0]! + a[3 * i]! * rate[i]!;
    const wy = w_WB_B[1]! + a[3 * i + 1]! * rate[i]!;
    const wz = w_WB_B[2]! + a[3 * i + 2]! * rate[i]!;
    out[0] = out[0]! - h * (wy * sz - wz * sy);
    out[1] = out[1]! - h * (wz * sx - wx * sz);
    out[2] = out[2]! - h * (wx * sy - wy * sx);
  }
}

/**
 * Torque on the body from the wheels' motors: minus the sum of hdot_i s_i. Add it to arrayTorque when wheels
 * are driven.
 *
 * @param momentumRate  n, N*m, rate of each wheel's momentum along its spin axis
 * @param out           3, N*m, body frame
 */
export function spinReactionTorque(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentumRate: ArrayLike<number>,
  out: Float64Array,
): void {
  arrayMomentum(array, tilt, momentumRate, out);
  out[0] = -out[0]!;
  out[1] = -out[1]!;
  out[2] = -out[2]!;
}

/**
 * Jacobian A = d(momentum of the array)/d(tilt): column i is h_i g_i x s_i. Row-major 3 x n, N*m*s/rad, in
 * body components; the torque that tilt rates alone give is -A rate. O(n), allocates nothing.
 */
export function arrayJacobian(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentum: ArrayLike<number>,
  out: Float64Array,
): void {
  const c = array.spinSeries;
  const n = array.count;
  for (let i = 0; i < n; i++) {
    const cosine = Math.cos(tilt[i]!);
    const sine = Math.sin(tilt[i]!);
    for (let j = 0; j < 3; j++) {
      out[j * n + i] = momentum[i]! * (c[9 * i + 6 + j]! * cosine - c[9 * i + 3 + j]! * sine);
    }
  }
}

/** A body torque named by what it does: about x it rolls, about y it pitches, about z it is the yaw leak. */
export interface NamedTorque {
  readonly roll: number;
  readonly pitch: number;
  readonly yawLeak: number;
}

export const nameTorque = (torque_B: ArrayLike<number>): NamedTorque => ({
  roll: torque_B[0]!,
  pitch: torque_B[1]!,
  yawLeak: torque_B[2]!,
});
