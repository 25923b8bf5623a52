/** Everything a change of the rig brings to the screen, in one call. */
import { type CompiledRig, compileRig, weigh } from '../physics';
import {
  type AxisSchedule,
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  eventBlocks,
  gimbalCourses,
  ledgerLines,
  makeLedger,
  type PlanSetting,
  type PlanWork,
  phaseBlocks,
  planRig,
  rollLeftOver,
  setUpPlan,
} from '../planning';
import type { Rig } from '../rig';
import type { Evaluation, PlanCourse, PlanView, RibbonBlock, Switches } from './evaluation';
import { type Explained, explainImpossible, nameImpossible } from './planWords';
import { runPreview } from './preview';

/** Scratch of one evaluator: replanning with the same work starts from the last plan. */
export interface EvaluationWork {
  readonly plan: PlanWork;
  /** Seconds from any fixed instant; measures solve time. The core itself has no clock. */
  readonly clock: () => number;
  /** True: an impossible plan is only named; `diagnose` says by how much, in the time of some twenty plans. */
  readonly isBrief: boolean;
}

export const createEvaluationWork = (clock: () => number, isBrief = false): EvaluationWork => ({
  plan: createPlanWork(),
  clock,
  isBrief,
});

/**
 * Weighs, plans and previews a rig.
 *
 * @param rig       as read
 * @param switches  what is switched on in the preview
 * @param work      kept from call to call
 * @returns         figures, plan, ledger and motion; or why the rig cannot be computed
 *
 * A few milliseconds to plan, tens to preview. Never throws on a rig that has been read.
 */
export function evaluate(rig: Rig, switches: Switches, work: EvaluationWork): Evaluation {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') return outcome;
  const { compiled } = outcome;
  const set = setUpPlan(compiled);
  if (set.kind === 'refused') return set;
  const { plan, schedules, setting } = planOf(set.setting, work);
  const { motion, outcome: end } = runPreview(setting, schedules, switches, rig.jobs.duration);
  return {
    kind: 'evaluated',
    weigh: weigh(compiled),
    mass: compiled.whole.mass,
    centreOfMass: compiled.whole.com,
    inertia: fullInertia(compiled),
    plan,
    ledger: makeLedger(ledgerLines(setting, schedules)),
    motion,
    outcome: end,
  };
}

function fullInertia({ whole }: CompiledRig): readonly number[] {
  const [xx, yy, zz, xy, xz, yz] = whole.inertia;
  return [xx, xy, xz, xy, yy, yz, xz, yz, zz];
}

/** Why a rig has no plan and by how much, in words; undefined when it has one, or nothing to plan with. */
export function diagnose(rig: Rig): Explained | undefined {
  const compiled = compileRig(rig);
  if (compiled.kind === 'refused') return undefined;
  const set = setUpPlan(compiled.compiled);
  if (set.kind === 'refused') return undefined;
  const outcome = planRig(set.setting, defaultPlanOptions, createPlanWork());
  return outcome.kind === 'impossible' ? explainImpossible(outcome) : undefined;
}

interface Planned {
  readonly plan: PlanView;
  readonly schedules: readonly AxisSchedule[];
  readonly setting: PlanSetting;
}

function planOf(setting: PlanSetting, work: EvaluationWork): Planned {
  const none = (plan: PlanView): Planned => ({ plan, schedules: [], setting });
  const start = work.clock();
  const plan = work.isBrief ? attemptRigPlan : planRig;
  const outcome = plan(setting, defaultPlanOptions, work.plan);
  const solveSeconds = work.clock() - start;
  switch (outcome.kind) {
    case 'planned': {
      const { schedules, iterations } = outcome;
      const course = courseOf(outcome.setting, schedules);
      return {
        plan: { kind: 'planned', course, solveSeconds, iterations },
        schedules,
        setting: outcome.setting,
      };
    }
    case 'unplanned':
      return none({ kind: 'unplanned', sentence: outcome.sentence });
    case 'unsteered':
      return none({
        kind: 'impossible',
        line: 'singularity',
        sentence: outcome.sentence,
        cures: [],
        course: courseOf(setting, []),
      });
    case 'impossible':
      return none({
        kind: 'impossible',
        ...('failures' in outcome ? nameImpossible(outcome.failures) : explainImpossible(outcome)),
        cures: [],
        course: courseOf(setting, []),
      });
    case 'gave-up':
      return none({
        kind: 'unplanned',
        sentence:
          'The planner found neither a plan nor a proof that there is none; change a number a little and it will try again.',
      });
  }
}

/** The plan's curves; with no schedules, what was asked of it. */
function courseOf(setting: PlanSetting, schedules: readonly AxisSchedule[]): PlanCourse {
  const { time, gait } = setting;
  const nodes = time.length;
  const at = setting.axes.findIndex(({ axis }) => axis === 'roll');
  const roll = schedules[at];
  const array = setting.axes[at]?.array;
  const none = new Float64Array(nodes);
  const most = array
    ? array.kind === 'reaction'
      ? array.momentum
      : array.momentum * Math.sin(Math.min(array.tiltMax, -array.tiltMin))
    : 0;
  const isFirm = setting.kind === 'firm';
  const wrapped = (values: Float64Array): Float64Array =>
    Float64Array.from({ length: nodes }, (_, k) => values[k % values.length] as number);
  const blocks: RibbonBlock[] = [...phaseBlocks(gait, 0, time[nodes - 1] as number)];
  if (!setting.course.isCyclic) blocks.push(...eventBlocks(setting.compiled.rig.jobs.sequence, gait.legs));
  return {
    time,
    gyros: setting.compiled.rig.array.gyros.length,
    ...gimbalCourses(setting, schedules),
    demand: isFirm ? wrapped(rollLeftOver(setting.demand)) : setting.outside.map((m) => -m),
    torque: roll?.torque ?? none,
    momentum: roll?.momentum ?? none,
    momentumLimit: none.map(() => most),
    centreOfPressure: isFirm ? (roll?.pressure ?? wrapped(setting.demand.bareAcross)) : new Float64Array(0),
    supportRight: isFirm ? wrapped(setting.demand.acrossMin) : new Float64Array(0),
    supportLeft: isFirm ? wrapped(setting.demand.acrossMax) : new Float64Array(0),
    blocks,
  };
}
