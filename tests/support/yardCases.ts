/** Rigs and yards for the yard's checks. */
import { type CompiledRig, compileRig } from '../../src/core/physics';
import { BENCH_GYRO, layOut, type Rig, STRIDER } from '../../src/core/rig';
import type { Doubt, Switches } from '../../src/core/trial';
import { openYard, type Yard, type YardSetting } from '../../src/yard';

export const AS_DRAWN: Doubt = { centreAcross: 0, wheelSpeed: 1 };
export const FEEDBACK_ONLY: Switches = { isArrayOn: true, isPlanOn: false, isFeedbackOn: true };
export const ALL_ON: Switches = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };
export const ALL_OFF: Switches = { isArrayOn: false, isPlanOn: false, isFeedbackOn: false };

export function compiledOf(rig: Rig): CompiledRig {
  const outcome = compileRig(rig);
  if (outcome.kind !== 'compiled') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.compiled;
}

export function yardOf(rig: Rig, setting: Partial<YardSetting> = {}): Yard {
  const outcome = openYard({
    compiled: compiledOf(rig),
    ground: { kind: 'flat' },
    switches: ALL_ON,
    doubt: AS_DRAWN,
    ...setting,
  });
  if (outcome.kind !== 'ready') throw new Error(outcome.refusals.map((r) => r.sentence).join(' '));
  return outcome.yard;
}

/** The two-legged walker stood on a line through the middle of its foot, pushed to the left at mid height. */
export const EDGE_RIG: Rig = {
  ...STRIDER,
  name: 'Strider on an edge',
  footing: { kind: 'edge', offset: 0 },
  sensing: { ...STRIDER.sensing, loopRate: 1000 },
  jobs: {
    ...STRIDER.jobs,
    gait: { kind: 'stand' },
    duration: 1,
    sequence: [{ kind: 'sideLoad', time: 0, duration: 0.1, force: 4, height: 0.4, direction: Math.PI / 2 }],
  },
};

/** The same body on its edge with one wheel in a free, top-heavy gimbal that has no friction. */
export const FREE_RIG: Rig = {
  ...EDGE_RIG,
  name: 'Free gimbal on an edge',
  array: {
    gyros: layOut(
      'single',
      {
        ...BENCH_GYRO,
        gimbal: { ...BENCH_GYRO.gimbal, stiction: 0, friction: 0 },
        tilt: { min: -3, max: 3 },
        drive: { kind: 'free', stiffness: 0, damping: 0, centreOffset: [0, 0, 0.02] },
      },
      { centre: [0, 0, 0.4], spacing: 0.1, skew: 0 },
    ),
  },
};

/** The same body pivoting on a point, its one wheel locked upright: a top. */
export const TOP_RIG: Rig = {
  ...EDGE_RIG,
  name: 'Top',
  footing: { kind: 'point', position: [0, 0, 0] },
  array: {
    gyros: layOut(
      'single',
      { ...BENCH_GYRO, speed: 1100, drive: { kind: 'locked' } },
      { centre: [0, 0, 0.4], spacing: 0.1, skew: 0 },
    ),
  },
};
