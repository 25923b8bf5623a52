/** What a layout of gyros can do at a tilt, and what its faults leave over: numbers to judge it by eye. */
import {
  type ArrayGyro,
  type ArrayModel,
  arrayMomentum,
  arrayTorque,
  compileArray,
  type NamedTorque,
} from './arrayLaw';
import { rotate3, rotationAbout, unit3, type Vec3 } from './spatial';
import { jacobianMatrix, judgeSingularity, type SingularityReport } from './steeringLaw';

export interface LayoutReport {
  /** Momentum of the array, body components, N*m*s. */
  readonly momentum: Vec3;
  /** Most torque about each body axis with every gimbal at its rate limit in the best sense, N*m, each by itself. */
  readonly most: NamedTorque;
  /** Torque while giving the most roll torque: what goes into pitch and yaw beside it, N*m. */
  readonly besideRoll: NamedTorque;
  readonly singularity: SingularityReport;
}

/**
 * What an array gives at a tilt, the body still.
 *
 * @param tilt       n, rad
 * @param momentum   n, N*m*s, of each wheel along its spin axis
 * @param rateLimit  n, rad/s, of each gimbal; a geared pair that must move together is two gyros of equal rate here
 *
 * O(n), allocates; a singular value decomposition of 3 x n.
 */
export function reportLayout(
  array: ArrayModel,
  tilt: ArrayLike<number>,
  momentum: ArrayLike<number>,
  rateLimit: ArrayLike<number>,
): LayoutReport {
  const A = jacobianMatrix(array, tilt, momentum);
  const total = new Float64Array(3);
  arrayMomentum(array, tilt, momentum, total);
  const most = [0, 0, 0];
  const beside = [0, 0, 0];
  for (let i = 0; i < array.count; i++) {
    // Torque is minus A rate: the sense that gives positive roll torque.
    const sense = A.get(0, i) > 0 ? -1 : A.get(0, i) < 0 ? 1 : 0;
    for (let j = 0; j < 3; j++) {
      most[j] = most[j]! + Math.abs(A.get(j, i)) * rateLimit[i]!;
      beside[j] = beside[j]! - A.get(j, i) * sense * rateLimit[i]!;
    }
  }
  const named = ([roll, pitch, yawLeak]: readonly number[]): NamedTorque => ({
    roll: roll!,
    pitch: pitch!,
    yawLeak: yawLeak!,
  });
  return {
    momentum: [total[0]!, total[1]!, total[2]!],
    most: named(most),
    besideRoll: named(beside),
    singularity: judgeSingularity(A),
  };
}

/** How one gyro departs from what it should be. */
export interface GyroFault {
  /** Share of its momentum that it has too much of. */
  readonly speedError: number;
  /** Small turn of gimbal and spin axes together about a body direction, rad times unit vector. */
  readonly misalignment: Vec3;
  /** How far its tilt is behind, rad, and its rate, rad/s. */
  readonly tiltLag: number;
  readonly rateLag: number;
}

export const noFault: GyroFault = { speedError: 0, misalignment: [0, 0, 0], tiltLag: 0, rateLag: 0 };

const turned = (gyro: ArrayGyro, by: Vec3): ArrayGyro => {
  const angle = Math.hypot(...by);
  if (angle === 0) return gyro;
  const R = rotationAbout(unit3(by), angle);
  return { ...gyro, gimbalAxis: rotate3(R, gyro.gimbalAxis), spinAxis: rotate3(R, gyro.spinAxis) };
};

/**
 * What faults leave over: torque and momentum of the array as it is, less those of the array as it should be, body
 * still. Exact at any size of fault; the torque is the leak arrow.
 *
 * @param momentum  n, N*m*s, as it should be
 * @param faults    n
 */
export function layoutLeak(
  gyros: readonly ArrayGyro[],
  tilt: readonly number[],
  rate: readonly number[],
  momentum: readonly number[],
  faults: readonly GyroFault[],
): { readonly torque: Vec3; readonly momentum: Vec3 } {
  const still = [0, 0, 0];
  const given = (array: ArrayModel, t: readonly number[], r: readonly number[], h: readonly number[]) => {
    const torque = new Float64Array(3);
    const total = new Float64Array(3);
    arrayTorque(array, t, r, h, still, torque);
    arrayMomentum(array, t, h, total);
    return { torque, total };
  };
  const wanted = given(compileArray(gyros), tilt, rate, momentum);
  const real = given(
    compileArray(gyros.map((gyro, i) => turned(gyro, faults[i]!.misalignment))),
    tilt.map((t, i) => t - faults[i]!.tiltLag),
    rate.map((r, i) => r - faults[i]!.rateLag),
    momentum.map((h, i) => h * (1 + faults[i]!.speedError)),
  );
  const less = (a: Float64Array, b: Float64Array): Vec3 => [a[0]! - b[0]!, a[1]! - b[1]!, a[2]! - b[2]!];
  return { torque: less(real.torque, wanted.torque), momentum: less(real.total, wanted.total) };
}
