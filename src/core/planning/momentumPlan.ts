import { assemblePlan, type PreviousPass } from './momentumPlanAssembly';
import {
  type AxisSchedule,
  checkPlanLimits,
  fillServoTorque,
  isWithinLimits,
  type LimitFinding,
} from './momentumPlanCheck';
import { layOutPlan, type PlanLayout, type PlanMode } from './momentumPlanLayout';
import {
  type LimitName,
  limitNames,
  type MomentumPlanProblem,
  requirePlanProblem,
} from './momentumPlanProblem';
import {
  type Certificate,
  createSolverWork,
  createStageProblem,
  defaultSolverOptions,
  type Residuals,
  type SolverOptions,
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
  readonly slots: Map<string, PlanSlot>;
}

export const createPlanWork = (): PlanWork => ({ slots: new Map() });

/** The stage program of a problem in one mode, with space to solve it in. */
export function openSlot(
  problem: MomentumPlanProblem,
  mode: PlanMode,
  work: PlanWork,
  name: string = mode,
): PlanSlot {
  const kept = work.slots.get(name);
  const layout = layOutPlan(problem, mode, kept?.layout ?? null);
  const slot =
    kept && kept.layout.sizes === layout.sizes
      ? { ...kept, layout }
      : { layout, problem: createStageProblem(layout.sizes), solver: createSolverWork(layout.sizes) };
  work.slots.set(name, slot);
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

/** An axis that cannot be planned, with the proof and the limits its rows belong to. */
export interface AxisFailure {
  readonly axis: number;
  readonly certificate: Certificate;
  readonly rowLimit: readonly LimitName[];
}

/** One attempt: a plan, or the solver's word on why not. */
export type PlanAttempt =
  | FoundPlan
  | { readonly kind: 'impossible'; readonly failures: readonly AxisFailure[]; readonly iterations: number }
  | { readonly kind: 'gave-up'; readonly residuals: Residuals; readonly iterations: number };

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
      const sine = Math.max(-1, Math.min(1, out.momentum[k] / array.momentum));
      const cosine = Math.sqrt(1 - sine * sine);
      const perTorque = -1 / (array.momentum * cosine);
      const rate = out.torque[k] * perTorque;
      out.tilt[k] = Math.asin(sine);
      out.tiltRate[k] = rate;
      out.tiltAcceleration[k] = ((out.torque[k] - before) * perTorque) / step + (rate * rate * sine) / cosine;
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

/** One axis of a problem as a problem of its own. */
export const takeAxis = (problem: MomentumPlanProblem, i: number): MomentumPlanProblem => ({
  ...problem,
  axes: [problem.axes[i]],
  ends:
    problem.ends.kind === 'cyclic'
      ? problem.ends
      : { kind: 'given', start: [problem.ends.start[i]], end: [problem.ends.end[i]] },
});

/** Whether the servo torque's rows have a say in the optimum. */
function isServoPressing(layout: PlanLayout, point: StagePoint): boolean {
  let most = 0;
  for (let r = 0; r < layout.rowLimit.length; r++) {
    if (layout.rowLimit[r] === 'servo torque') most = Math.max(most, point.dual[r]);
  }
  return most > 1e-6;
}

/**
 * Plans a problem of one axis, with passes over the servo torque until its true value keeps its limit.
 *
 * The first pass takes the gimbals as upright; where the servo limit then has a say, one more about the
 * tilts found makes it say the right thing.
 */
function attemptAxis(
  problem: MomentumPlanProblem,
  i: number,
  options: PlanOptions,
  work: PlanWork,
): PlanAttempt {
  const { layout, problem: program, solver } = openSlot(problem, 'plan', work, `plan ${i}`);
  const hasServo = problem.axes[0].array.servo !== null;
  const tightening: Tightening = { share: 1, lastShare: 1, lastUsed: 1 };
  let previous: PreviousPass | null = null;
  let found: FoundPlan | null = null;
  let iterations = 0;
  let residuals: Residuals | null = null;
  for (let pass = 0; pass < (hasServo ? options.servoPasses : 1); pass++) {
    const constant = assemblePlan(problem, layout, previous, [tightening.share], program);
    const outcome = solveStageProblem(program, options.solver, solver);
    iterations += outcome.iterations;
    if (outcome.kind !== 'solved') {
      if (found) break;
      if (outcome.kind === 'gave-up') return { ...outcome, iterations };
      const { certificate } = outcome;
      return {
        kind: 'impossible',
        failures: [{ axis: i, certificate, rowLimit: layout.rowLimit }],
        iterations,
      };
    }
    residuals = outcome.residuals;
    const axes = [scheduleAxis(problem, layout, outcome.point, 0)];
    const limits = checkPlanLimits(problem, axes, options.refine);
    if (isWithinLimits(problem, limits, options.limitTolerance)) {
      const objective = (outcome.objective + constant) / problem.intervals;
      found = { kind: 'planned', axes, objective, residuals, limits, iterations };
      if (!hasServo || pass > 0 || !isServoPressing(layout, outcome.point)) break;
    }
    previous = passOf(problem, layout, axes);
    // what the rows at the nodes cannot see of the torque between them is taken off their limit
    if (pass > 0) tighten(tightening, worstServo(limits, 0));
  }
  if (found) return { ...found, iterations };
  return { kind: 'gave-up', residuals: residuals as Residuals, iterations };
}

const worseOf = (a: Residuals, b: Residuals): Residuals => ({
  equations: Math.max(a.equations, b.equations),
  limits: Math.max(a.limits, b.limits),
  stationarity: Math.max(a.stationarity, b.stationarity),
  dualCone: Math.max(a.dualCone, b.dualCone),
  complementarity: Math.max(a.complementarity, b.complementarity),
});

/** Both axes of one plan put together. */
function joinPlans(first: FoundPlan, second: FoundPlan): FoundPlan {
  const limits = limitNames.flatMap((limit) => [
    ...first.limits.filter((f) => f.limit === limit),
    ...second.limits.filter((f) => f.limit === limit).map((f) => ({ ...f, axis: 1 })),
  ]);
  return {
    kind: 'planned',
    axes: [...first.axes, ...second.axes],
    objective: first.objective + second.objective,
    residuals: worseOf(first.residuals, second.residuals),
    limits,
    iterations: first.iterations + second.iterations,
  };
}

/**
 * Makes one plan.
 *
 * Roll and pitch share neither array nor support interval, so their program falls into two that are solved
 * one after the other: the answer is the joint one at a fraction of its cost. A problem is 'impossible' with
 * a checked certificate for each axis that fails; with servo limits the certificate speaks of the program
 * linearised about the last pass.
 */
export function attemptPlan(problem: MomentumPlanProblem, options: PlanOptions, work: PlanWork): PlanAttempt {
  requirePlanProblem(problem);
  if (problem.axes.length === 1) return attemptAxis(problem, 0, options, work);
  const first = attemptAxis(takeAxis(problem, 0), 0, options, work);
  const second = attemptAxis(takeAxis(problem, 1), 1, options, work);
  const iterations = first.iterations + second.iterations;
  if (first.kind === 'planned' && second.kind === 'planned') return joinPlans(first, second);
  const failures = [first, second].flatMap((a) => (a.kind === 'impossible' ? a.failures : []));
  if (failures.length > 0) return { kind: 'impossible', failures, iterations };
  const failed = first.kind === 'gave-up' ? first : second;
  return failed.kind === 'gave-up' ? { ...failed, iterations } : failed;
}
