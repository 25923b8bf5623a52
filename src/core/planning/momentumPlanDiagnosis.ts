import { findMeanMoment } from './meanMoment';
import {
  type AxisFailure,
  attemptPlan,
  createPlanWork,
  type FoundPlan,
  openSlot,
  type PlanOptions,
  type PlanWork,
  takeAxis,
} from './momentumPlan';
import { assemblePlan } from './momentumPlanAssembly';
import {
  addServoTorque,
  addTorque,
  scaleMomentum,
  scaleTiltRate,
  shiftCentre,
  widenLean,
  widenSupport,
} from './momentumPlanChanges';
import type { PlanLayout, PlanMode } from './momentumPlanLayout';
import type { LimitName, MomentumPlanProblem } from './momentumPlanProblem';
import { type Certificate, type Residuals, type StagePoint, solveStageProblem } from './solver';

/** A change proven by a plan of the changed problem. */
export interface Cure {
  /** the limit let out ('mean moment': the centre of mass moved), or the candidate's own label */
  readonly label: string;
  /** how much was let out, in the limit's unit (see shortBy); null for a candidate */
  readonly amount: number | null;
  readonly problem: MomentumPlanProblem;
  readonly plan: FoundPlan;
}

/** A changed problem a caller would like tried. */
export interface CureCandidate {
  readonly label: string;
  readonly problem: MomentumPlanProblem;
}

export type MomentumPlanOutcome =
  | FoundPlan
  | {
      readonly kind: 'impossible';
      /** the limit that, let out alone and least for its size, lets a plan exist */
      readonly limit: LimitName;
      /**
       * how much more of it is needed: N m s of momentum, rad/s, N m, N m of servo, m on each side of the
       * support, rad, N m of mean moment; Infinity when no amount of it alone is enough
       */
      readonly shortBy: number;
      /** axis of the mean moment, or of the largest array that falls short */
      readonly axis: number;
      /** m: how far to move the centre of mass along the axis of the centre of pressure; mean moment only */
      readonly shift: number | null;
      readonly certificate: Certificate;
      readonly cures: readonly Cure[];
      readonly iterations: number;
    }
  | { readonly kind: 'gave-up'; readonly residuals: Residuals; readonly iterations: number };

type Relaxation = Exclude<PlanMode, 'plan'>;

/** Share of the certificates that each limit's rows carry. */
function weighFailures(failures: readonly AxisFailure[]): Map<LimitName, number> {
  const weights = new Map<LimitName, number>();
  for (const { certificate, rowLimit } of failures) {
    let total = 0;
    for (const weight of certificate.dual) total += Math.abs(weight);
    rowLimit.forEach((limit, r) => {
      weights.set(limit, (weights.get(limit) ?? 0) + Math.abs(certificate.dual[r]) / total);
    });
  }
  return weights;
}

/** What one limit has, for comparing shortfalls of different kinds. */
function haveOf(problem: MomentumPlanProblem, limit: Relaxation): number {
  const largest = (values: readonly number[]) => Math.max(0, ...values);
  switch (limit) {
    case 'momentum':
    case 'tilt rate':
      return 1;
    case 'torque':
      return largest(problem.axes.map(({ array }) => (array.torque < Infinity ? array.torque : 0)));
    case 'servo torque':
      return largest(problem.axes.map(({ array }) => array.servo?.torque ?? 0));
    case 'centre of pressure':
      return largest(
        problem.axes.map(({ support }) =>
          support.kind === 'firm'
            ? largest(Array.from(support.pressureMax, (v, k) => (v - support.pressureMin[k]) / 2))
            : 0,
        ),
      );
    case 'lean':
      return largest(
        problem.axes.map(({ support }) =>
          support.kind === 'lean' ? (support.leanMax - support.leanMin) / 2 : 0,
        ),
      );
  }
}

/** The problem with one limit let out by w in the unit of the relaxation: a share for the first two. */
function letOut(problem: MomentumPlanProblem, limit: Relaxation, w: number): MomentumPlanProblem {
  switch (limit) {
    case 'momentum':
      return scaleMomentum(problem, 1 + w);
    case 'tilt rate':
      return scaleTiltRate(problem, 1 + w);
    case 'torque':
      return addTorque(problem, w);
    case 'servo torque':
      return addServoTorque(problem, w);
    case 'centre of pressure':
      return widenSupport(problem, w);
    case 'lean':
      return widenLean(problem, w);
  }
}

/** Tilt rate, as a share of the limit less one, that a point of the 'tilt rate' relaxation really uses. */
function rateUsed(problem: MomentumPlanProblem, layout: PlanLayout, point: StagePoint): number {
  const { width } = layout.sizes;
  let worst = 0;
  layout.axes.forEach((at, i) => {
    if (problem.axes[i].array.kind !== 'gimballed') return;
    for (let k = 0; k < problem.intervals; k++) {
      const e0 = point.z[k * width + at.momentum];
      const e1 = point.z[(k + 1) * width + at.momentum];
      const control = ((e1 - e0) * at.momentumScale) / (at.torqueScale * problem.step);
      const sine = Math.min(1, Math.max(Math.abs(e0), Math.abs(e1)));
      worst = Math.max(worst, Math.abs(control) / Math.sqrt(1 - sine * sine));
    }
  });
  return worst - 1;
}

/** Least amount by which one limit alone must be let out, by one convex solve; Infinity when none will do. */
function relax(
  problem: MomentumPlanProblem,
  limit: Relaxation,
  options: PlanOptions,
  work: PlanWork,
): { readonly amount: number; readonly iterations: number } {
  const { layout, problem: program, solver } = openSlot(problem, limit, work);
  assemblePlan(
    problem,
    layout,
    null,
    problem.axes.map(() => 1),
    program,
  );
  const outcome = solveStageProblem(program, options.solver, solver);
  if (outcome.kind !== 'solved') return { amount: Infinity, iterations: outcome.iterations };
  const w = outcome.point.border[layout.sizes.boundaryRows];
  if (limit === 'momentum') return { amount: Math.max(0, w - 1), iterations: outcome.iterations };
  const amount = limit === 'tilt rate' ? rateUsed(problem, layout, outcome.point) : w;
  return { amount: Math.max(0, amount), iterations: outcome.iterations };
}

/** Room for the proving plan to be found in, then more should linearised servo rows have been too kind. */
const proofGrowth = [1e-4, 1e-2, 1e-1];
/** Halvings of the tilt rate between what is known to fail and what is known to do. */
const rateHalvings = 6;

/** Proves that letting out one limit is a cure; the tilt rate is then narrowed down by halving. */
function prove(
  problem: MomentumPlanProblem,
  limit: Relaxation,
  amount: number,
  options: PlanOptions,
  work: PlanWork,
): Cure | null {
  const have = haveOf(problem, limit);
  let cure: Cure | null = null;
  for (const growth of proofGrowth) {
    const more =
      amount + growth * (limit === 'momentum' || limit === 'tilt rate' ? 1 + amount : amount + have);
    const changed = letOut(problem, limit, more);
    const plan = attemptPlan(changed, options, work);
    if (plan.kind !== 'planned') continue;
    cure = { label: limit, amount: more, problem: changed, plan };
    break;
  }
  if (!cure || limit !== 'tilt rate') return cure;
  let fails = 0;
  for (let i = 0; i < rateHalvings; i++) {
    const middle: number = (fails + (cure.amount as number)) / 2;
    const changed = letOut(problem, limit, middle);
    const plan = attemptPlan(changed, options, work);
    if (plan.kind === 'planned') cure = { label: limit, amount: middle, problem: changed, plan };
    else fails = middle;
  }
  return cure;
}

/** An amount as the outcome reports it: shares of momentum and tilt rate in the unit of the largest array. */
function inUnit(
  problem: MomentumPlanProblem,
  limit: Relaxation,
  amount: number,
): { value: number; axis: number } {
  const figures = problem.axes.map(({ array }) =>
    limit === 'momentum' ? array.momentum : limit === 'tilt rate' ? array.tiltRate : 1,
  );
  const axis = figures.indexOf(Math.max(...figures));
  return { value: amount * figures[axis], axis };
}

interface Finding {
  readonly limit: Relaxation;
  readonly amount: number;
  readonly share: number;
}

/** Every limit with a hand in the contradiction, let out alone; the least for its size comes first. */
function relaxEach(
  problem: MomentumPlanProblem,
  weights: ReadonlyMap<LimitName, number>,
  options: PlanOptions,
  work: PlanWork,
): { readonly findings: readonly Finding[]; readonly iterations: number } {
  let iterations = 0;
  const findings: Finding[] = [];
  for (const [limit, weight] of weights) {
    if (limit === 'mean moment' || weight < 1e-4) continue;
    const relaxed = relax(problem, limit, options, work);
    iterations += relaxed.iterations;
    const have = haveOf(problem, limit);
    // a support of no width has no size of its own to compare with
    findings.push({ limit, amount: relaxed.amount, share: have > 0 ? relaxed.amount / have : Infinity });
  }
  findings.sort((a, b) => (a.share === b.share ? a.amount - b.amount : a.share - b.share));
  return { findings, iterations };
}

/**
 * Plans, and says why not when it cannot be done: which limit, by how much, and what would cure it.
 *
 * @param problem    throws a RangeError when it is no problem at all
 * @param candidates changed problems the caller would like tried, asked for only when there is no plan
 *
 * A plan costs one convex solve (a few with servo limits); an impossible one a solve for each limit
 * involved and one for each cure's proof.
 */
export function planMomentum(
  problem: MomentumPlanProblem,
  options: PlanOptions,
  work: PlanWork,
  candidates: () => readonly CureCandidate[] = () => [],
): MomentumPlanOutcome {
  const attempt = attemptPlan(problem, options, work);
  if (attempt.kind !== 'impossible') return attempt;
  const { failures } = attempt;
  const { certificate } = failures[0];
  const proving = createPlanWork();
  const cures: Cure[] = [];
  let iterations = attempt.iterations;
  const tryCandidates = () => {
    for (const { label, problem: changed } of candidates()) {
      const plan = attemptPlan(changed, options, proving);
      if (plan.kind === 'planned') cures.push({ label, amount: null, problem: changed, plan });
    }
  };
  const mean = findMeanMoment(problem);
  if (mean) {
    const { axis, excess, shift } = mean;
    // a little further than the edge, where there would be no room
    const force = Math.abs(excess / shift);
    const further = shift + Math.sign(shift) * 1e-3 * Math.max(Math.abs(shift), Math.abs(excess) / force);
    const changed = shiftCentre(problem, axis, further);
    const plan = attemptPlan(changed, options, proving);
    if (plan.kind === 'planned')
      cures.push({ label: 'mean moment', amount: further, problem: changed, plan });
    tryCandidates();
    return {
      kind: 'impossible',
      limit: 'mean moment',
      shortBy: Math.abs(excess),
      axis,
      shift,
      certificate,
      cures,
      iterations,
    };
  }
  const weights = weighFailures(failures);
  let relaxed = relaxEach(problem, weights, options, work);
  iterations += relaxed.iterations;
  if (failures.length > 1 && relaxed.findings.every(({ amount }) => amount === Infinity)) {
    // the axes fail for different reasons: no one limit cures both, so the first axis is spoken of
    const first = takeAxis(problem, failures[0].axis);
    relaxed = relaxEach(first, weighFailures(failures.slice(0, 1)), options, createPlanWork());
    iterations += relaxed.iterations;
  }
  for (const { limit, amount } of relaxed.findings) {
    if (amount === Infinity) continue;
    const cure = prove(problem, limit, amount, options, proving);
    if (cure) cures.push({ ...cure, amount: inUnit(problem, limit, cure.amount as number).value });
  }
  tryCandidates();
  const blamed = relaxed.findings[0];
  const { value, axis } = inUnit(problem, blamed.limit, blamed.amount);
  const own = cures.find(({ label }) => label === blamed.limit);
  // of the tilt rate only the proven figure is the least one
  const shortBy = blamed.limit === 'tilt rate' && own ? (own.amount as number) : value;
  return {
    kind: 'impossible',
    limit: blamed.limit,
    shortBy,
    axis,
    shift: null,
    certificate,
    cures,
    iterations,
  };
}
