import { attemptPlan, type FoundPlan, openSlot, type PlanOptions, type PlanWork } from './momentumPlan';
import { assemblePlan } from './momentumPlanAssembly';
import { scaleMomentum } from './momentumPlanChanges';
import { type MomentumPlanProblem, requirePlanProblem } from './momentumPlanProblem';
import { type Residuals, type SolverOutcome, solveStageProblem } from './solver';

/** The least arrays that do the job, each the same share of what the problem has. */
export interface SizedMomentum {
  readonly kind: 'sized';
  /** share of the problem's own momentum that is needed, spare included */
  readonly share: number;
  /** N m s for each axis: share times the axis's momentum */
  readonly momentum: readonly number[];
  /** the plan that proves it: made with the spare taken off what the arrays can store */
  readonly plan: FoundPlan;
  readonly iterations: number;
}

export type SizingOutcome = SizedMomentum | Exclude<SolverOutcome, { kind: 'solved' }>;

/** The plan at exactly the least momentum has no room to be found in; this is what is added for it. */
const growths = [1e-5, 1e-4, 1e-3];
const servoGrowths = [1e-2, 3e-2, 0.1, 0.3];
/** With servo limits the least momentum is found by passes: most of them, and when they have settled. */
const sizingPasses = 5;
const settled = 1e-4;

interface LeastShare {
  readonly kind: 'found';
  readonly share: number;
  readonly residuals: Residuals;
  readonly iterations: number;
}

/**
 * Least momentum, as a share of the problem's own, at which a plan exists: one convex solve, the momentum
 * being a variable of the same program (every limit of an array is a cone jointly convex in it).
 */
export function solveLeastShare(
  problem: MomentumPlanProblem,
  options: PlanOptions,
  work: PlanWork,
): LeastShare | Exclude<SolverOutcome, { kind: 'solved' }> {
  const { layout, problem: program, solver } = openSlot(problem, 'momentum', work);
  const tightening = problem.axes.map(() => 1);
  assemblePlan(problem, layout, null, tightening, program);
  const outcome = solveStageProblem(program, options.solver, solver);
  if (outcome.kind !== 'solved') return outcome;
  const { point, residuals, iterations } = outcome;
  return { kind: 'found', share: point.border[layout.sizes.boundaryRows], residuals, iterations };
}

/**
 * Smallest arrays that do the job with a chosen spare: with `share` times the problem's momentum a plan
 * exists that uses no more than (1 - spare) of it.
 *
 * @param spare 0 to less than 1, kept on stored momentum (and on the tilt rate that goes with it)
 *
 * Servo limits hang on the momentum in two ways that are not jointly convex; with them the convex solve is
 * repeated about its own answer, and the plan that comes with it proves the last word.
 */
export function sizeMomentum(
  problem: MomentumPlanProblem,
  spare: number,
  options: PlanOptions,
  work: PlanWork,
): SizingOutcome {
  requirePlanProblem(problem);
  if (!(spare >= 0 && spare < 1)) throw new RangeError(`spare is ${spare}; it must be from 0 to less than 1`);
  const hasServo = problem.axes.some(({ array }) => array.servo !== null);
  let share = 1;
  let iterations = 0;
  let residuals: Residuals | null = null;
  for (let pass = 0; pass < (hasServo ? sizingPasses : 1); pass++) {
    const least = solveLeastShare(scaleMomentum(problem, share), options, work);
    iterations += least.iterations;
    if (least.kind !== 'found') return { ...least, iterations };
    share *= least.share;
    residuals = least.residuals;
    if (Math.abs(least.share - 1) < settled) break;
  }
  // linearised servo rows can leave the answer a little small: grow until a plan proves it
  for (const growth of hasServo ? [...growths, ...servoGrowths] : growths) {
    const enough = share * (1 + growth);
    const plan = attemptPlan(scaleMomentum(problem, enough), options, work);
    iterations += plan.iterations;
    if (plan.kind !== 'planned') continue;
    const total = enough / (1 - spare);
    const momentum = problem.axes.map(({ array }) => array.momentum * total);
    return { kind: 'sized', share: total, momentum, plan, iterations };
  }
  return { kind: 'gave-up', residuals: residuals as Residuals, iterations };
}
