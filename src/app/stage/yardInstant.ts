/** A snapshot of the yard read as an instant, so that the rig there is drawn by what draws any motion. */
import type { SnapshotLayout } from '../../yard';
import type { Instant } from './motionInstant';

/** Blends a run of numbers of two snapshots into an array of the instant's. */
function blend(
  before: Float64Array,
  after: Float64Array,
  at: number,
  share: number,
  out: Float64Array,
  count = out.length,
): void {
  for (let k = 0; k < count; k++) {
    const a = before[at + k];
    const b = after[at + k];
    out[k] = Number.isFinite(a) ? a + (b - a) * share : b;
  }
}

/**
 * Blends the pose at `at` (place, then attitude w first) the short way round into `out`. O(1), allocates nothing.
 */
export function blendPose(
  before: Float64Array,
  after: Float64Array,
  at: number,
  share: number,
  out: Float64Array,
): void {
  let dot = 0;
  for (let k = 3; k < 7; k++) dot += before[at + k] * after[at + k];
  const sign = dot < 0 ? -1 : 1;
  let square = 0;
  for (let k = 0; k < 7; k++) {
    out[k] = (1 - share) * before[at + k] * (k < 3 ? 1 : sign) + share * after[at + k];
    if (k >= 3) square += out[k] * out[k];
  }
  const size = Math.sqrt(square) || 1;
  for (let k = 3; k < 7; k++) out[k] /= size;
}

/** Writes what lies between two snapshots; whatever the yard does not know is marked as not there. */
export function readYardInstant(
  layout: SnapshotLayout,
  before: Float64Array,
  after: Float64Array,
  share: number,
  out: Instant,
): void {
  out.time = before[layout.time] + share * (after[layout.time] - before[layout.time]);
  blendPose(before, after, layout.pose, share, out.pose);
  blend(before, after, layout.tilt, share, out.tilt);
  blend(before, after, layout.tiltRate, share, out.tiltRate);
  out.plannedTilt.fill(Number.NaN);
  blend(before, after, layout.feet, share, out.feet);
  for (let leg = 0; leg < layout.legs; leg++) out.isFootDown[leg] = after[layout.isFootDown + leg];
  blend(before, after, layout.centreOfMass, share, out.centreOfMass);
  blend(before, after, layout.centreOfPressure, share, out.centreOfPressure);
  blend(before, after, layout.momentum, share, out.momentum);
  blend(before, after, layout.torque, share, out.torque);
  out.demand = 0;
  out.water = Number.NaN;
  out.waterSlope = 0;
}
