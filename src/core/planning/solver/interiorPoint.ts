import { checkCertificate } from './certificateCheck';
import { coneExcess, scaleCones } from './coneScaling';
import { fillCorrection, longestStep, moveCones, refineStep, scaleRows, solveNewton } from './newtonStep';
import { addRowsTransposed, multiplyRows, packRows } from './packedRows';
import type { SolverOptions } from './solverOptions';
import type { Certificate } from './solverOutcome';
import type { SolverWork } from './solverWork';
import { copyStagePoint, type StageProblem } from './stageProblem';
import { dynamicsResidual, evaluateObjective, smoothGradient } from './stageProducts';
import { factorStages, solveStages } from './stageRiccati';

/** How a run of the method ended: what it claims is for others to check. */
export interface InteriorRun {
  readonly end: 'converged' | 'contradiction' | 'stalled' | 'out of iterations';
  readonly iterations: number;
  readonly certificate: Certificate | null;
}

/**
 * Share of the longest step that is left untaken: it shrinks with the mean complementarity, for quick last
 * steps, but not below what keeps cones off their edges (at 1e-3 one random plan in three thousand stalled).
 */
const mostRest = 0.01;
const leastRest = 3e-3;
/** Stationarity lost above this share of its tolerance late in a run is worth a round of refinement. */
const lossShare = 0.05;
/** From this gap on, relative to the objective, steps may be refined: a careful run refines every one. */
const lateGap = 1e-6;
/** Steps shorter than this may be the sign of a contradiction. */
const shortStep = 0.9;
/** Below this the step is as good as none. */
const leastStep = 1e-9;

const largest = (x: Float64Array): number => {
  let worst = 0;
  for (let i = 0; i < x.length; i++) {
    const v = x[i] < 0 ? -x[i] : x[i];
    // NaN compares false either way, and must not pass for small
    if (!(v <= worst)) worst = v;
  }
  return worst;
};

/** Pushes a vector into the cone by adding a multiple of the identity, as far as its worst row needs. */
function pushInside(work: SolverWork, x: Float64Array, margin: number): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  let excess = -Infinity;
  for (let k = 0; k <= stages; k++) {
    for (let r = rowStart[k]; r < rowStart[k] + linearRows[k]; r++) excess = Math.max(excess, -x[r]);
  }
  for (let c = 0; c < coneRow.length; c++) excess = Math.max(excess, coneExcess(x, coneRow[c], coneDim[c]));
  if (excess < -margin) return;
  const lift = excess + 2 * margin;
  for (let k = 0; k <= stages; k++) {
    for (let r = rowStart[k]; r < rowStart[k] + linearRows[k]; r++) x[r] += lift;
  }
  for (let c = 0; c < coneRow.length; c++) x[coneRow[c]] += lift;
}

/**
 * Least-squares start: the point that minimises the objective plus half the squared slack, with slack and
 * multipliers then pushed inside the cone. Source: Vandenberghe, The CVXOPT linear and quadratic cone
 * program solvers (2010), section 5.3.
 */
function startCold(problem: StageProblem, options: SolverOptions, work: SolverWork): boolean {
  const { point, sizes, packed, right, rightBorder } = work;
  point.z.fill(0);
  point.dynamicsDual.fill(0);
  point.border.fill(0);
  for (let r = 0; r < sizes.rows; r++) work.rowRight[r] = -problem.bound[r];
  smoothGradient(problem, point, right, rightBorder);
  addRowsTransposed(sizes, packed, packed.value, problem.rowsShared, work.rowRight, right, rightBorder);
  if (!factorStages(problem, packed, packed.value, problem.rowsShared, options.regularise, work.factor))
    return false;
  solveStages(
    problem,
    work.factor,
    right,
    rightBorder,
    problem.drift,
    point.z,
    point.dynamicsDual,
    point.border,
  );
  multiplyRows(sizes, packed, packed.value, problem.rowsShared, point.z, point.border, point.dual);
  for (let r = 0; r < sizes.rows; r++) {
    point.dual[r] -= problem.bound[r];
    point.slack[r] = -point.dual[r];
  }
  pushInside(work, point.slack, 0.5);
  pushInside(work, point.dual, 0.5);
  return true;
}

/** A true slack of at least this share of the kept one takes its place. */
const slackShare = 0.3;

/**
 * Starts from the point kept of the last solve. Where the limits of this problem still leave that point
 * room, its slack becomes the true one, so that the first step need not mend it, and its multiplier makes
 * up for the change.
 */
function startWarm(problem: StageProblem, work: SolverWork): void {
  const { point, kept, sizes, packed, rowRight } = work;
  const { stages, rowStart, linearRows, coneRow, coneDim } = sizes;
  copyStagePoint(kept, point);
  multiplyRows(sizes, packed, packed.value, problem.rowsShared, point.z, point.border, rowRight);
  for (let r = 0; r < sizes.rows; r++) rowRight[r] = problem.bound[r] - rowRight[r];
  const { slack, dual } = point;
  for (let k = 0; k <= stages; k++) {
    for (let r = rowStart[k]; r < rowStart[k] + linearRows[k]; r++) {
      if (!(rowRight[r] >= slackShare * slack[r])) continue;
      dual[r] *= slack[r] / rowRight[r];
      slack[r] = rowRight[r];
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const dim = coneDim[c];
    if (!(coneExcess(rowRight, at, dim) <= slackShare * coneExcess(slack, at, dim))) continue;
    for (let r = at; r < at + dim; r++) slack[r] = rowRight[r];
  }
}

/** Residuals of every condition at the iterate; returns the sum of slack times dual. */
function fillResiduals(problem: StageProblem, work: SolverWork): number {
  const { point, sizes, packed } = work;
  smoothGradient(problem, point, work.gradient, work.borderGradient);
  addRowsTransposed(
    sizes,
    packed,
    packed.value,
    problem.rowsShared,
    point.dual,
    work.gradient,
    work.borderGradient,
  );
  const controls = sizes.stages * sizes.width;
  for (let a = 0; a < sizes.controls; a++) work.gradient[controls + a] = 0;
  dynamicsResidual(problem, point.z, work.equations);
  multiplyRows(sizes, packed, packed.value, problem.rowsShared, point.z, point.border, work.rowResidual);
  let gap = 0;
  for (let r = 0; r < sizes.rows; r++) {
    work.rowResidual[r] += point.slack[r] - problem.bound[r];
    gap += point.slack[r] * point.dual[r];
  }
  return gap;
}

/** The iterate's multipliers as a proof that there is no feasible point, if they are one. */
function findCertificate(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
): Certificate | null {
  const { point, sizes } = work;
  let size = 0;
  for (let r = 0; r < sizes.rows; r++) size += Math.abs(point.dual[r]);
  if (!(size > 0 && size < Infinity)) return null;
  const dynamicsDual = point.dynamicsDual.map((v) => v / size);
  const boundaryDual = point.border.slice(0, sizes.boundaryRows).map((v) => v / size);
  const dual = point.dual.map((v) => v / size);
  const finding = checkCertificate(problem, dynamicsDual, boundaryDual, dual, options.radius);
  if (!finding.holds) return null;
  return { dynamicsDual, boundaryDual, dual, contradiction: finding.contradiction };
}

/** bound' dual + value' boundary - drift' y < 0: the multipliers may be on their way to a contradiction. */
function leansToContradiction(problem: StageProblem, work: SolverWork): boolean {
  const { point, sizes } = work;
  let sum = 0;
  for (let r = 0; r < sizes.rows; r++) sum -= problem.bound[r] * point.dual[r];
  for (let i = 0; i < problem.drift.length; i++) sum += problem.drift[i] * point.dynamicsDual[i];
  for (let b = 0; b < sizes.boundaryRows; b++) sum -= problem.boundaryValue[b] * point.border[b];
  return sum > 0;
}

/** Predictor, corrector, and the move; returns the step taken, 0 when the factorisation fails. */
function advance(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
  gap: number,
  isLossy: boolean,
): number {
  const { point, sizes } = work;
  if (!scaleCones(sizes, point.slack, point.dual, work.scaling)) return 0;
  scaleRows(problem, work);
  if (
    !factorStages(
      problem,
      work.packed,
      work.packed.scaled,
      work.scaledShared,
      options.regularise,
      work.factor,
    )
  )
    return 0;
  let step = 1;
  if (sizes.degree === 0) {
    solveNewton(problem, work, 0, false);
  } else {
    solveNewton(problem, work, 0, false);
    const affine = longestStep(work);
    const rest = 1 - affine;
    fillCorrection(work);
    solveNewton(problem, work, (rest * rest * rest * gap) / sizes.degree, true);
    if (isLossy) refineStep(problem, work);
    const untaken = options.careful ? mostRest : Math.max(leastRest, Math.min(mostRest, gap / sizes.degree));
    step = Math.min(1, (1 - untaken) * longestStep(work));
    moveCones(work, step);
  }
  const { stepZ, stepDynamics, stepBorder } = work;
  for (let i = 0; i < stepZ.length; i++) point.z[i] += step * stepZ[i];
  for (let i = 0; i < stepDynamics.length; i++) point.dynamicsDual[i] += step * stepDynamics[i];
  for (let i = 0; i < stepBorder.length; i++) point.border[i] += step * stepBorder[i];
  return step;
}

/**
 * Mehrotra's predictor-corrector method on a stage program, in Nesterov-Todd scaling.
 *
 * Ends in at most options.maxIterations steps, with its last point in work.point. Each step costs
 * O(N width^3 + rows width). Allocates only to look at a certificate.
 * Source: Mehrotra, SIAM J. Optim. 2 (1992); Vandenberghe (2010), section 5.
 */
export function runInteriorPoint(
  problem: StageProblem,
  options: SolverOptions,
  work: SolverWork,
): InteriorRun {
  const { sizes, point } = work;
  packRows(problem, work.packed);
  if (options.warm && work.hasKept) startWarm(problem, work);
  else if (!startCold(problem, options, work)) return { end: 'stalled', iterations: 0, certificate: null };
  let isKept = false;
  let step = 1;
  let lastDual = 0;
  for (let iteration = 0; iteration <= options.maxIterations; iteration++) {
    const gap = fillResiduals(problem, work);
    const primal = Math.max(largest(work.equations), largest(work.rowResidual));
    const boundary = largest(work.borderGradient);
    const scale = 1 + Math.max(largest(point.dynamicsDual), largest(point.dual));
    const dual = Math.max(largest(work.gradient) / scale, boundary);
    const objective = evaluateObjective(problem, point.z, point.border);
    if (!(primal < Infinity && dual < Infinity && gap < Infinity)) {
      return { end: 'stalled', iterations: iteration, certificate: null };
    }
    if (
      primal <= 0.5 * options.tolerance &&
      dual <= 0.5 * options.tolerance &&
      gap <= 0.5 * options.gapTolerance * (1 + Math.abs(objective))
    ) {
      return { end: 'converged', iterations: iteration, certificate: null };
    }
    // limits that contradict each other keep the steps short
    if (primal > options.tolerance && step < shortStep && leansToContradiction(problem, work)) {
      const certificate = findCertificate(problem, options, work);
      if (certificate) return { end: 'contradiction', iterations: iteration, certificate };
    }
    if (iteration === options.maxIterations) break;
    if (!isKept && iteration > 0 && gap <= options.warmGap * sizes.degree && primal <= options.warmGap) {
      copyStagePoint(point, work.kept);
      work.hasKept = true;
      isKept = true;
    }
    const isLate = gap <= lateGap * (1 + Math.abs(objective));
    // what the step before should have left of the stationarity is not rounding
    const lost = dual - 2 * (1 - step) * lastDual;
    const isLossy = isLate && primal < 1e-3 && (options.careful || lost > lossShare * options.tolerance);
    lastDual = dual;
    step = advance(problem, options, work, gap, isLossy);
    if (!(step > leastStep)) return { end: 'stalled', iterations: iteration, certificate: null };
  }
  return { end: 'out of iterations', iterations: options.maxIterations, certificate: null };
}
