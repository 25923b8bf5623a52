import { type AppliedPatch, patchRig } from '../../../core/bench';
import type { Rig } from '../../../core/rig';
import type { StationMark } from '../station';
import { useFindings } from './benchFindings';

/** Whether the rig's number lies in the interval found. A field may hold the inverse: Kv for a torque constant. */
export function agrees({ patch, before, after }: AppliedPatch): boolean {
  const had = after === patch.value ? before : 1 / before;
  const slack = 1e-9 * Math.abs(patch.value);
  return had >= patch.low - slack && had <= patch.high + slack;
}

/**
 * Holds when the rig's numbers lie within what every log allows, fails when one does not. Not yet before a log was
 * fitted that speaks of a number the rig holds.
 */
export function benchMark(rig: Rig): StationMark {
  const checked = Object.values(useFindings.getState().fits)
    .flatMap(({ outcome }) => (outcome.kind === 'identified' ? outcome.patches : []))
    .flatMap((patch) => patchRig(rig, [patch]).applied);
  if (checked.length === 0) return 'notYet';
  return checked.every(agrees) ? 'holds' : 'fails';
}
