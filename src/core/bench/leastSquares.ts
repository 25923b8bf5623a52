import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { correlationFactor, studentQuantile } from './statistics';

/** What is fitted: residuals as a function of parameters. Rows are already weighted (unit or equal noise). */
export interface FitProblem {
  readonly names: readonly string[];
  readonly rows: number;
  /** Residual (model minus measured) of each row, rows long; non-finite values mark a forbidden point. */
  evaluate(parameters: Float64Array, out: Float64Array): void;
  /** rows x parameters, row-major; central differences stand in when absent. */
  jacobian?(parameters: Float64Array, out: Float64Array): void;
  /** Typical size of each parameter, for difference steps where a start value is zero. */
  readonly sizes?: ArrayLike<number>;
  readonly lower?: ArrayLike<number>;
  readonly upper?: ArrayLike<number>;
}

export interface FitOptions {
  readonly mostIterations?: number;
  /** Largest condition number of the column-scaled Jacobian at which parameters still count as told apart. */
  readonly largestCondition?: number;
  /** Widen intervals for correlated residuals; for rows in time order. */
  readonly isTimeSeries?: boolean;
  readonly confidence?: number;
  /** Numbers eliminated from the residuals beforehand (variable projection), each a degree of freedom less. */
  readonly eliminated?: number;
}

export interface Fit {
  readonly names: readonly string[];
  readonly values: Float64Array;
  readonly standardErrors: Float64Array;
  /** Half width of the confidence interval (95 % unless told otherwise), Student's t. */
  readonly halfWidths: Float64Array;
  /** parameters x parameters, row-major. */
  readonly covariance: Float64Array;
  readonly residuals: Float64Array;
  readonly sumOfSquares: number;
  readonly degreesOfFreedom: number;
  /** Residual standard deviation, sqrt(sum of squares / degrees of freedom). */
  readonly residualSpread: number;
  readonly condition: number;
  /** Variance factor by which correlated residuals widened the intervals; 1 for white ones. */
  readonly correlation: number;
  readonly iterations: number;
}

export type FitOutcome =
  | { readonly kind: 'fitted'; readonly fit: Fit }
  | {
      readonly kind: 'indistinct';
      readonly names: readonly string[];
      readonly condition: number;
      readonly sentence: string;
      readonly fit: Fit | undefined;
    }
  | { readonly kind: 'gave-up'; readonly sentence: string; readonly values: Float64Array };

const STEP = Math.cbrt(2 ** -52);

/**
 * Least squares by Levenberg and Marquardt, with column scaling, on a QR factorisation.
 *
 * The Jacobian is factorised once an iteration (Householder); each damping tried only refactorises the small
 * triangle, so a log of n rows and p parameters costs 2 n p^2 a step, and the condition number is not squared as
 * it is in the normal equations. Damping follows Nielsen's rule.
 *
 * @param problem  residuals and, if at hand, their Jacobian
 * @param start    parameters; not changed
 * @returns 'fitted' with covariance and intervals; 'indistinct' when some direction of the parameters does not move
 *          the residuals (named); 'gave-up' when no finite minimum was reached
 *
 * Source: Marquardt 1963; More 1978 (scaling, QR); Madsen, Nielsen, Tingleff, Methods for Non-Linear Least Squares
 * Problems, 2004 (damping); Bates and Watts 1988 (covariance s^2 (J'J)^-1).
 */
export function fitLeastSquares(
  problem: FitProblem,
  start: ArrayLike<number>,
  options: FitOptions = {},
): FitOutcome {
  const n = problem.rows;
  const p = problem.names.length;
  let x = Float64Array.from(start);
  if (n < p) {
    const sentence = `${n} readings cannot fix ${p} numbers (${problem.names.join(', ')}).`;
    return { kind: 'gave-up', sentence, values: x };
  }
  clamp(problem, x);
  let r = new Float64Array(n);
  let rNext = new Float64Array(n);
  const J = new Float64Array(n * p);
  const scratch = { up: new Float64Array(n), down: new Float64Array(n) };
  problem.evaluate(x, r);
  let cost = sumSquares(r);
  if (!Number.isFinite(cost))
    return { kind: 'gave-up', sentence: 'The model has no value at the starting point.', values: x };
  const scale = new Float64Array(p);
  const R = new Float64Array(p * p);
  const qtr = new Float64Array(p);
  const step = new Float64Array(p);
  let damping = -1;
  let growth = 2;
  let iterations = 0;
  let hasSettled = false;
  const most = options.mostIterations ?? 200;
  for (; iterations < most && !hasSettled; iterations++) {
    fillJacobian(problem, x, J, scratch);
    if (!factorise(J, r, n, p, R, qtr)) break;
    let largest = 0;
    for (let j = 0; j < p; j++) {
      let norm = 0;
      for (let i = 0; i <= j; i++) norm += R[i * p + j] ** 2;
      scale[j] = Math.max(scale[j], Math.sqrt(norm));
      largest = Math.max(largest, scale[j]);
    }
    for (let j = 0; j < p; j++) if (!(scale[j] > 1e-300)) scale[j] = largest > 0 ? largest * 1e-12 : 1;
    if (damping < 0) damping = 1e-3;
    for (;;) {
      solveDamped(R, qtr, scale, Math.sqrt(damping), p, step);
      const next = x.map((v, j) => v + step[j]);
      clamp(problem, next);
      const relative = stepSize(next, x, problem.sizes);
      problem.evaluate(next, rNext);
      const nextCost = sumSquares(rNext);
      const predicted = predictedDrop(R, qtr, next, x, p);
      if (nextCost < cost || (nextCost === cost && relative < 1e-12)) {
        const ratio = predicted > 0 ? (cost - nextCost) / predicted : 1;
        const drop = cost - nextCost;
        x = next;
        [r, rNext] = [rNext, r];
        damping = Math.max(1e-15, damping * Math.max(1 / 3, 1 - (2 * ratio - 1) ** 3));
        growth = 2;
        hasSettled = (drop <= 1e-14 * cost && relative < 1e-7) || relative < 1e-13 || nextCost === 0;
        cost = nextCost;
        break;
      }
      // Nothing but rounding is left when even the linear model promises no visible drop.
      if (relative < 1e-14 || (predicted <= 1e-13 * cost && relative < 1e-6)) {
        hasSettled = true;
        break;
      }
      damping *= growth;
      growth *= 2;
      if (!(damping < 1e30)) {
        hasSettled = true;
        break;
      }
    }
  }
  if (!hasSettled) {
    return { kind: 'gave-up', sentence: `The fit did not settle in ${iterations} steps.`, values: x };
  }
  problem.evaluate(x, r);
  fillJacobian(problem, x, J, scratch);
  return conclude(problem, x, r, J, iterations, options);
}

const sumSquares = (r: Float64Array): number => {
  let s = 0;
  for (let i = 0; i < r.length; i++) s += r[i] * r[i];
  return s;
};

function clamp(problem: FitProblem, x: Float64Array): void {
  for (let j = 0; j < x.length; j++) {
    if (problem.lower && x[j] < problem.lower[j]) x[j] = problem.lower[j];
    if (problem.upper && x[j] > problem.upper[j]) x[j] = problem.upper[j];
  }
}

function stepSize(next: Float64Array, x: Float64Array, sizes: ArrayLike<number> | undefined): number {
  let worst = 0;
  for (let j = 0; j < x.length; j++) {
    worst = Math.max(worst, Math.abs(next[j] - x[j]) / (Math.abs(x[j]) + 1e-10 * (sizes?.[j] ?? 1) + 1e-300));
  }
  return worst;
}

function fillJacobian(
  problem: FitProblem,
  x: Float64Array,
  J: Float64Array,
  scratch: { up: Float64Array; down: Float64Array },
): void {
  if (problem.jacobian) {
    problem.jacobian(x, J);
    return;
  }
  const p = x.length;
  const { up, down } = scratch;
  for (let j = 0; j < p; j++) {
    const kept = x[j];
    const h = STEP * Math.max(Math.abs(kept), problem.sizes?.[j] ?? (kept === 0 ? 1 : 0));
    x[j] = kept + h;
    const high = x[j];
    problem.evaluate(x, up);
    x[j] = kept - h;
    const gap = high - x[j];
    problem.evaluate(x, down);
    x[j] = kept;
    for (let i = 0; i < up.length; i++) J[i * p + j] = (up[i] - down[i]) / gap;
  }
}

/** Householder QR of J (overwritten) applied to r as well; R upper triangle and Q'r come out. False when not finite. */
function factorise(
  J: Float64Array,
  r: Float64Array,
  n: number,
  p: number,
  R: Float64Array,
  qtr: Float64Array,
): boolean {
  const b = Float64Array.from(r);
  for (let k = 0; k < p; k++) {
    let norm = 0;
    for (let i = k; i < n; i++) norm += J[i * p + k] ** 2;
    norm = Math.sqrt(norm);
    if (!Number.isFinite(norm)) return false;
    if (norm === 0) continue;
    const alpha = J[k * p + k] > 0 ? -norm : norm;
    const v0 = J[k * p + k] - alpha;
    const beta = -1 / (alpha * v0);
    J[k * p + k] = v0;
    for (let j = k + 1; j < p; j++) {
      let dot = 0;
      for (let i = k; i < n; i++) dot += J[i * p + k] * J[i * p + j];
      dot *= beta;
      for (let i = k; i < n; i++) J[i * p + j] -= dot * J[i * p + k];
    }
    let dot = 0;
    for (let i = k; i < n; i++) dot += J[i * p + k] * b[i];
    dot *= beta;
    for (let i = k; i < n; i++) b[i] -= dot * J[i * p + k];
    J[k * p + k] = alpha;
  }
  for (let i = 0; i < p; i++) {
    qtr[i] = b[i];
    for (let j = 0; j < p; j++) R[i * p + j] = j >= i ? J[i * p + j] : 0;
  }
  return true;
}

/** Step that minimises |R s + q|^2 + damping |scale s|^2, by QR of the stacked triangle. */
function solveDamped(
  R: Float64Array,
  qtr: Float64Array,
  scale: Float64Array,
  root: number,
  p: number,
  step: Float64Array,
): void {
  const rows = 2 * p;
  const A = new Float64Array(rows * p);
  A.set(R);
  for (let j = 0; j < p; j++) A[(p + j) * p + j] = root * scale[j];
  const b = new Float64Array(rows);
  for (let j = 0; j < p; j++) b[j] = -qtr[j];
  const T = new Float64Array(p * p);
  const q = new Float64Array(p);
  factorise(A, b, rows, p, T, q);
  for (let i = p - 1; i >= 0; i--) {
    let s = q[i];
    for (let j = i + 1; j < p; j++) s -= T[i * p + j] * step[j];
    step[i] = T[i * p + i] === 0 ? 0 : s / T[i * p + i];
  }
}

function predictedDrop(
  R: Float64Array,
  qtr: Float64Array,
  next: Float64Array,
  x: Float64Array,
  p: number,
): number {
  let drop = 0;
  for (let i = 0; i < p; i++) {
    let moved = qtr[i];
    for (let j = i; j < p; j++) moved += R[i * p + j] * (next[j] - x[j]);
    drop += qtr[i] * qtr[i] - moved * moved;
  }
  return drop;
}

function conclude(
  problem: FitProblem,
  x: Float64Array,
  r: Float64Array,
  J: Float64Array,
  iterations: number,
  options: FitOptions,
): FitOutcome {
  const n = problem.rows;
  const p = x.length;
  const R = new Float64Array(p * p);
  if (!factorise(J, r, n, p, R, new Float64Array(p))) {
    return { kind: 'gave-up', sentence: 'The model has no finite slope at the best point found.', values: x };
  }
  const norms = new Float64Array(p);
  for (let j = 0; j < p; j++) {
    for (let i = 0; i <= j; i++) norms[j] += R[i * p + j] ** 2;
    norms[j] = Math.sqrt(norms[j]);
  }
  const dead = problem.names.filter((_, j) => !(norms[j] > 0));
  if (dead.length > 0) {
    const sentence = `The log says nothing about ${dead.join(', ')}.`;
    return { kind: 'indistinct', names: dead, condition: Number.POSITIVE_INFINITY, sentence, fit: undefined };
  }
  const scaled = new Matrix(p, p);
  for (let i = 0; i < p; i++) for (let j = 0; j < p; j++) scaled.set(i, j, R[i * p + j] / norms[j]);
  const svd = new SingularValueDecomposition(scaled);
  const s = svd.diagonal;
  const V = svd.rightSingularVectors;
  const condition = s[0] / s[p - 1];
  const sum = sumSquares(r);
  const dof = n - p - (options.eliminated ?? 0);
  const correlation = options.isTimeSeries ? correlationFactor(r) : 1;
  const variance = dof > 0 ? (sum / dof) * correlation : Number.NaN;
  const t =
    dof > 0 ? studentQuantile(options.confidence ?? 0.95, Math.max(1, dof / correlation)) : Number.NaN;
  const covariance = new Float64Array(p * p);
  for (let i = 0; i < p; i++) {
    for (let j = 0; j < p; j++) {
      let c = 0;
      for (let k = 0; k < p; k++) c += (V.get(i, k) * V.get(j, k)) / (s[k] * s[k]);
      covariance[i * p + j] = (variance * c) / (norms[i] * norms[j]);
    }
  }
  const standardErrors = Float64Array.from({ length: p }, (_, j) => Math.sqrt(covariance[j * p + j]));
  const fit: Fit = {
    names: problem.names,
    values: x,
    standardErrors,
    halfWidths: standardErrors.map((e) => t * e),
    covariance,
    residuals: r,
    sumOfSquares: sum,
    degreesOfFreedom: dof,
    residualSpread: dof > 0 ? Math.sqrt(sum / dof) : Number.NaN,
    condition,
    correlation,
    iterations,
  };
  const limit = options.largestCondition ?? 1e7;
  if (condition < limit) return { kind: 'fitted', fit };
  const names = problem.names.filter((_, j) => Math.abs(V.get(j, p - 1)) > 0.1);
  const sentence = `The log cannot tell ${names.join(' and ')} apart: they act alike to one part in ${condition.toPrecision(2)}.`;
  return { kind: 'indistinct', names, condition, sentence, fit };
}
