/** How a leg stands at an instant: its hip, knee and ankle in the body frame, and whether it reaches its foot. */

import { hipPositions, legReach, placeKnee } from '../../core/physics';
import type { LeggedBody } from '../../core/rig';

export interface LegPose {
  /** 3 each, m, body frame. */
  readonly hip: Float64Array;
  readonly knee: Float64Array;
  /** End of the shank: the sole where the leg reaches it, else as far towards it as the links go. */
  readonly ankle: Float64Array;
  /** Middle of the sole as the motion has it. */
  readonly sole: Float64Array;
  isReached: boolean;
}

/** A rounding error beyond full stretch does not count as out of reach, m. */
const REACH_SLACK = 1e-9;
/** Nearer than this a sole lies in its hip and the leg has no direction, m. */
const NO_LENGTH = 1e-9;

export const createLegPoses = (body: LeggedBody): readonly LegPose[] =>
  hipPositions(body).map((hip) => ({
    hip: Float64Array.from(hip),
    knee: new Float64Array(3),
    ankle: new Float64Array(3),
    sole: new Float64Array(3),
    isReached: true,
  }));

/** Turns a body vector into the world by an attitude (pose, w x y z from its fourth number on). */
export function rotateInto(
  pose: ArrayLike<number>,
  px: number,
  py: number,
  pz: number,
  out: Float64Array,
): void {
  turnBy(pose[3], pose[4], pose[5], pose[6], px, py, pz, out);
}

/** p + 2 w (u x p) + 2 u x (u x p), with w and u the scalar and vector part of a unit quaternion. */
function turnBy(
  w: number,
  x: number,
  y: number,
  z: number,
  px: number,
  py: number,
  pz: number,
  out: Float64Array,
): void {
  const tx = 2 * (y * pz - z * py);
  const ty = 2 * (z * px - x * pz);
  const tz = 2 * (x * py - y * px);
  out[0] = px + w * tx + y * tz - z * ty;
  out[1] = py + w * ty + z * tx - x * tz;
  out[2] = pz + w * tz + x * ty - y * tx;
}

/** World point to body frame: the inverse of the pose (origin, then attitude w first). */
export function toBody(
  pose: ArrayLike<number>,
  point: ArrayLike<number>,
  at: number,
  out: Float64Array,
): void {
  const px = point[at] - pose[0];
  const py = point[at + 1] - pose[1];
  const pz = point[at + 2] - pose[2];
  turnBy(pose[3], -pose[4], -pose[5], -pose[6], px, py, pz, out);
}

/**
 * Poses every leg for one instant of a motion.
 *
 * @param pose  7: body origin in the world, m, and attitude w x y z
 * @param feet  3 per leg, m, world: middles of the soles
 *
 * The knee is the one the masses of the leg are reckoned with (core/physics). O(legs), allocates nothing.
 */
export function poseLegs(
  body: LeggedBody,
  pose: ArrayLike<number>,
  feet: ArrayLike<number>,
  out: readonly LegPose[],
): void {
  const reach = legReach(body);
  for (let i = 0; i < out.length; i++) {
    const leg = out[i];
    toBody(pose, feet, 3 * i, leg.sole);
    leg.ankle.set(leg.sole);
    const dx = leg.sole[0] - leg.hip[0];
    const dy = leg.sole[1] - leg.hip[1];
    const dz = leg.sole[2] - leg.hip[2];
    const length = Math.sqrt(dx * dx + dy * dy + dz * dz);
    leg.isReached = length <= reach + REACH_SLACK && length > NO_LENGTH;
    if (length <= NO_LENGTH) {
      leg.knee.set(leg.hip);
      continue;
    }
    if (!leg.isReached) {
      const share = reach / length;
      leg.ankle[0] = leg.hip[0] + dx * share;
      leg.ankle[1] = leg.hip[1] + dy * share;
      leg.ankle[2] = leg.hip[2] + dz * share;
    }
    placeKnee(leg.hip, leg.ankle, body.thigh.length, body.shank.length, leg.knee);
  }
}
