import { assemblePlan, type PreviousPass } from './momentumPlanAssembly';
import {
  type AxisSchedule,
  checkPlanLimits,
  fillServoTorque,
  isWithinLimits,
  type LimitFinding,
} from './momentumPlanCheck';
import { layOutPlan, type PlanLayout, type PlanMode } from './momentumPlanLayout';
import { type MomentumPlanProblem, requirePlanProblem } from './momentumPlanProblem';
import {
  createSolverWork,
  createStageProblem,
  defaultSolverOptions,
  type Residuals,
  type SolverOptions,
  type SolverOutcome,
  type SolverWork,
  type StagePoint,
  type StageProblem,
  solveStageProblem,
} from './solver';

/** What planning tries for. */
export interface PlanOptions {
  readonly solver: SolverOptions;
  /** points looked at in each interval when the limits are checked */
  readonly refine: number;
  /** share of a limit by which the finer grid may pass it */
  readonly limitTolerance: number;
  /** most passes over the servo torque */
  readonly servoPasses: number;
}

export const defaultPlanOptions: PlanOptions = Object.freeze({
  solver: { ...defaultSolverOptions, warm: true },
  refine: 5,
  limitTolerance: 1e-7,
  servoPasses: 8,
});

/** One stage program and its solver, kept for the next plan of the same shape. */
interface PlanSlot {
  readonly layout: PlanLayout;
  readonly problem: StageProblem;
  readonly solver: SolverWork;
}

/** Scratch of a planner: one per caller; replanning with the same work starts warm. */
export interface PlanWork {
  readonly slots: Map<PlanMode, PlanSlot>;
}

export const createPlanWork = (): PlanWork => ({ slots: new Map() });

/** The stage program of a problem in one mode, with space to solve it in. */
export function openSlot(problem: MomentumPlanProblem, mode: PlanMode, work: PlanWork): PlanSlot {
  const kept = work.slots.get(mode);
  const layout = layOutPlan(problem, mode, kept?.layout ?? null);
  const slot =
    kept && kept.layout.sizes === layout.sizes
      ? { ...kept, layout }
      : { layout, problem: createStageProblem(layout.sizes), solver: createSolverWork(layout.sizes) };
  work.slots.set(mode, slot);
  return slot;
}

/** A plan that holds: schedules, proof of optimality and the worst instant of every limit. */
export interface FoundPlan {
  readonly kind: 'planned';
  readonly axes: readonly AxisSchedule[];
  /** mean of the weighted squares */
  readonly objective: number;
  readonly residuals: Residuals;
  readonly limits: readonly LimitFinding[];
  readonly iterations: number;
}

/** One attempt: a plan, or the solver's word on why not. */
export type PlanAttempt = FoundPlan | Exclude<SolverOutcome, { kind: 'solved' }>;

function scheduleAxis(
  problem: MomentumPlanProblem,
  layout: PlanLayout,
  point: StagePoint,
  i: number,
): AxisSchedule {
  const { intervals, step, ends } = problem;
  const axis = problem.axes[i];
  const { array, support } = axis;
  const at = layout.axes[i];
  const { width } = layout.sizes;
  const nodes = intervals + 1;
  const make = () => new Float64Array(nodes);
  const out: AxisSchedule = {
    momentum: make(),
    torque: make(),
    tilt: make(),
    tiltRate: make(),
    tiltAcceleration: make(),
    servoTorque: make(),
    pressure: make(),
    lean: make(),
    leanRate: make(),
  };
  const isCyclic = ends.kind === 'cyclic';
  for (let k = 0; k < nodes; k++) {
    const node = isCyclic && k === intervals ? 0 : k;
    out.momentum[k] = point.z[node * width + at.momentum] * at.momentumScale;
    if (at.lean < 0) continue;
    out.lean[k] = point.z[node * width + at.lean] * at.leanScale;
    out.leanRate[k] = point.z[node * width + at.leanRate] * at.leanRateScale;
  }
  for (let k = 0; k < intervals; k++) out.torque[k] = -(out.momentum[k + 1] - out.momentum[k]) / step;
  if (isCyclic) out.torque[intervals] = out.torque[0];
  for (let k = 0; k < nodes; k++) {
    const before = k > 0 ? out.torque[k - 1] : isCyclic ? out.torque[intervals - 1] : 0;
    if (array.kind === 'gimballed') {
      out.tilt[k] = Math.asin(Math.max(-1, Math.min(1, out.momentum[k] / array.momentum)));
      const perTorque = -1 / (array.momentum * Math.cos(out.tilt[k]));
      out.tiltRate[k] = out.torque[k] * perTorque;
      out.tiltAcceleration[k] =
        ((out.torque[k] - before) * perTorque) / step + out.tiltRate[k] ** 2 * Math.tan(out.tilt[k]);
    }
    if (support.kind === 'firm') {
      const node = k % support.ask.length;
      const force = support.verticalForce[node];
      if (force > 0) out.pressure[k] = (support.ask[node] - out.torque[k]) / force;
    }
  }
  fillServoTorque(axis, out);
  return out;
}

function passOf(
  problem: MomentumPlanProblem,
  layout: PlanLayout,
  axes: readonly AxisSchedule[],
): PreviousPass {
  const isCyclic = problem.ends.kind === 'cyclic';
  const control = axes.map((a, i) => a.torque.map((v) => -v / layout.axes[i].torqueScale));
  return {
    momentum: axes.map((a, i) => a.momentum.map((v) => v / layout.axes[i].momentumScale)),
    control,
    before: control.map((c) => c.map((_, k) => (k > 0 ? c[k - 1] : isCyclic ? c[problem.intervals - 1] : 0))),
    leanRate: axes.map((a) => a.leanRate),
  };
}

const worstServo = (limits: readonly LimitFinding[], axis: number): number => {
  const found = limits.find((f) => f.limit === 'servo torque' && f.axis === axis);
  return found ? found.ask / found.have : 0;
};

/** Share of a servo's torque that its rows may use, and what the share before came to. */
interface Tightening {
  share: number;
  lastShare: number;
  lastUsed: number;
}

/** Least share of the torque limit that the passes go down to. */
const leastShare = 0.3;

/** Moves the share by the secant through the last two passes so that the torque used becomes the limit. */
function tighten(t: Tightening, used: number): void {
  if (used <= 1 + 1e-9) return;
  const slope = t.share < t.lastShare ? (t.lastUsed - used) / (t.lastShare - t.share) : 1;
  t.lastShare = t.share;
  t.lastUsed = used;
  t.share = Math.max(leastShare, t.share - (used - 1 + 1e-7) / Math.min(1, Math.max(0.2, slope)));
}

/**
 * Makes one plan, with passes over the servo torque until its true value keeps its limit.
 *
 * Each pass is one convex solve; the passes end when every limit holds on the finer grid, or after
 * options.servoPasses.
 */
export function attemptPlan(problem: MomentumPlanProblem, options: PlanOptions, work: PlanWork): PlanAttempt {
  requirePlanProblem(problem);
  const { layout, problem: program, solver } = openSlot(problem, 'plan', work);
  const hasServo = problem.axes.some(({ array }) => array.servo !== null);
  const tightenings: Tightening[] = problem.axes.map(() => ({ share: 1, lastShare: 1, lastUsed: 1 }));
  let previous: PreviousPass | null = null;
  let iterations = 0;
  let residuals: Residuals | null = null;
  for (let pass = 0; pass < (hasServo ? options.servoPasses : 1); pass++) {
    const shares = tightenings.map(({ share }) => share);
    const constant = assemblePlan(problem, layout, previous, shares, program);
    const outcome = solveStageProblem(program, options.solver, solver);
    iterations += outcome.iterations;
    if (outcome.kind !== 'solved') return { ...outcome, iterations };
    residuals = outcome.residuals;
    const axes = problem.axes.map((_, i) => scheduleAxis(problem, layout, outcome.point, i));
    const limits = checkPlanLimits(problem, axes, options.refine);
    if (isWithinLimits(problem, limits, options.limitTolerance)) {
      const objective = (outcome.objective + constant) / problem.intervals;
      return { kind: 'planned', axes, objective, residuals, limits, iterations };
    }
    previous = passOf(problem, layout, axes);
    // what the rows at the nodes cannot see of the torque between them is taken off their limit
    if (pass > 0) for (const t of tightenings) tighten(t, worstServo(limits, tightenings.indexOf(t)));
  }
  return { kind: 'gave-up', residuals: residuals as Residuals, iterations };
}
