/** A rig's jobs planned: the convex program, and for a steered array the sharing among its gimbals that follows. */
import { attemptPlan, type PlanAttempt, type PlanOptions, type PlanWork } from './momentumPlan';
import type { AxisSchedule } from './momentumPlanCheck';
import { type MomentumPlanOutcome, planMomentum } from './momentumPlanDiagnosis';
import type { PlanSetting } from './rigPlan';
import { shrinkArray } from './steeredAxes';
import { steerPlan } from './steeredPlan';

/** Shares of a steered array's envelope that are tried, one after the other, until its gimbals follow. */
const STEERED_SHARES = [1, 0.85, 0.7, 0.55, 0.4] as const;

export type RigPlan =
  | {
      readonly kind: 'planned';
      /** As given, or with a steered array's envelope as far as its gimbals could follow. */
      readonly setting: PlanSetting;
      readonly schedules: readonly AxisSchedule[];
      readonly iterations: number;
    }
  /** The program has a plan, but the gimbals cannot follow it. */
  | { readonly kind: 'unsteered'; readonly sentence: string }
  /** There is nothing to plan with. */
  | { readonly kind: 'unplanned'; readonly sentence: string };

type Failed<T> = Exclude<T, { kind: 'planned' }>;

function planWith<T extends MomentumPlanOutcome | PlanAttempt>(
  setting: PlanSetting,
  solve: (problem: PlanSetting['problem']) => T,
): RigPlan | Failed<T> {
  if (setting.unplanned !== undefined) return { kind: 'unplanned', sentence: setting.unplanned };
  const { steered } = setting;
  let lost: RigPlan | undefined;
  for (const share of steered ? STEERED_SHARES : [1]) {
    const tried = share === 1 ? setting : shrinkSetting(setting, share);
    const outcome = solve(tried.problem);
    if (outcome.kind !== 'planned') return lost ?? (outcome as Failed<T>);
    const found: RigPlan = {
      kind: 'planned',
      setting: tried,
      schedules: outcome.axes,
      iterations: outcome.iterations,
    };
    if (!steered) return found;
    const steering = steerPlan(tried, steered, outcome.axes);
    if (steering.kind === 'steered') return found;
    lost ??= { kind: 'unsteered', sentence: steering.sentence };
  }
  return lost as RigPlan;
}

/** The setting with a share of what its stand-in axes give. */
function shrinkSetting<T extends PlanSetting>(setting: T, share: number): T {
  const axes = setting.axes.map((axis) => ({ ...axis, array: shrinkArray(axis.array, share) }));
  const problem = {
    ...setting.problem,
    axes: setting.problem.axes.map((axis, a) => ({ ...axis, array: axes[a].array })),
  };
  return { ...setting, axes, problem };
}

/** Plans a rig's jobs; an impossible plan comes with the limit that forbids it. See `planMomentum`. */
export const planRig = (
  setting: PlanSetting,
  options: PlanOptions,
  work: PlanWork,
): RigPlan | Failed<MomentumPlanOutcome> =>
  planWith(setting, (problem) => planMomentum(problem, options, work));

/** The same without looking for which limit forbids it: a plan, or none. */
export const attemptRigPlan = (
  setting: PlanSetting,
  options: PlanOptions,
  work: PlanWork,
): RigPlan | Failed<PlanAttempt> => planWith(setting, (problem) => attemptPlan(problem, options, work));
