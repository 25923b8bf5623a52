import type { Residuals } from './solverOutcome';
import type { StagePoint, StageProblem } from './stageProblem';

// Written apart from the solver's own products on purpose: it trusts nothing the solver has computed but
// the point and its multipliers, and recomputes the slack from the limits.

/** Row of a matrix at `at` times the part of x that starts at `from`. */
const matrixTimes = (m: Float64Array, at: number, columns: number, x: Float64Array, from: number): number => {
  let sum = 0;
  for (let c = 0; c < columns; c++) sum += m[at + c] * x[from + c];
  return sum;
};

const largest = (x: Float64Array): number => {
  let worst = 0;
  for (const v of x) if (!(Math.abs(v) <= worst)) worst = Math.abs(v);
  return worst;
};

/** |v| - t of a second-order cone's vector: positive outside. */
const outside = (x: Float64Array, at: number, dim: number): number => {
  let tail = 0;
  for (let i = 1; i < dim; i++) tail += x[at + i] * x[at + i];
  return Math.sqrt(tail) - x[at];
};

interface RowCheck {
  limits: number;
  dualCone: number;
  complementarity: number;
}

/** Limits of stage k: outside by how much, multipliers outside by how much, and their product. */
function checkRows(
  problem: StageProblem,
  point: StagePoint,
  k: number,
  slack: Float64Array,
  out: RowCheck,
): void {
  const { sizes } = problem;
  const { width, shared } = sizes;
  const first = sizes.rowStart[k];
  const count = sizes.rowStart[k + 1] - first;
  for (let i = 0; i < count; i++) {
    const r = first + i;
    slack[i] =
      problem.bound[r] -
      matrixTimes(problem.rows, r * width, width, point.z, k * width) -
      matrixTimes(problem.rowsShared, r * shared, shared, point.border, sizes.boundaryRows);
    out.complementarity += slack[i] * point.dual[r];
  }
  for (let i = 0; i < sizes.linearRows[k]; i++) {
    out.limits = Math.max(out.limits, -slack[i]);
    out.dualCone = Math.max(out.dualCone, -point.dual[first + i]);
  }
  for (let c = sizes.coneStart[k]; c < sizes.coneStart[k + 1]; c++) {
    const at = sizes.coneRow[c];
    const dim = sizes.coneDim[c];
    out.limits = Math.max(out.limits, outside(slack, at - first, dim));
    out.dualCone = Math.max(out.dualCone, outside(point.dual, at, dim));
  }
}

/**
 * Recomputes the optimality conditions of a stage program from the problem and a point alone.
 *
 * @param problem   the program
 * @param point     z, multipliers and shared scalars; its slack is not read
 * @param objective value to measure complementarity against
 *
 * NaN anywhere comes back as NaN, which is within no tolerance. O(N width^2). Allocates.
 * Source: Boyd and Vandenberghe, Convex Optimization, section 5.9.2.
 */
export function checkOptimality(problem: StageProblem, point: StagePoint, objective: number): Residuals {
  const { sizes } = problem;
  const { stages, states, controls, width, shared, boundaryRows } = sizes;
  const rows: RowCheck = { limits: 0, dualCone: 0, complementarity: 0 };
  let mostRows = 0;
  for (let k = 0; k <= stages; k++) mostRows = Math.max(mostRows, sizes.rowStart[k + 1] - sizes.rowStart[k]);
  const slack = new Float64Array(mostRows);
  const gradient = new Float64Array(width);
  const scale = 1 + Math.max(largest(problem.gradient), largest(point.dynamicsDual), largest(point.dual));
  let equations = 0;
  let stationarity = 0;
  const sharedGradient = Array.from(
    { length: shared },
    (_, j) => problem.sharedGradient[j] + problem.sharedHessian[j] * point.border[boundaryRows + j],
  );
  for (let k = 0; k <= stages; k++) {
    const at = k * width;
    for (let a = 0; a < width; a++) {
      gradient[a] =
        problem.gradient[at + a] + matrixTimes(problem.hessian, (at + a) * width, width, point.z, at);
    }
    checkRows(problem, point, k, slack, rows);
    for (let r = sizes.rowStart[k]; r < sizes.rowStart[k + 1]; r++) {
      for (let a = 0; a < width; a++) gradient[a] += problem.rows[r * width + a] * point.dual[r];
      for (let j = 0; j < shared; j++)
        sharedGradient[j] += problem.rowsShared[r * shared + j] * point.dual[r];
    }
    for (let i = 0; i < states; i++) {
      if (k > 0) gradient[controls + i] -= point.dynamicsDual[(k - 1) * states + i];
      for (let b = 0; b < boundaryRows; b++) {
        const start = k === 0 ? problem.boundaryStart[b * states + i] : 0;
        const end = k === stages ? problem.boundaryEnd[b * states + i] : 0;
        gradient[controls + i] += (start + end) * point.border[b];
      }
      if (k === stages) continue;
      const row = (k * states + i) * width;
      const reached = matrixTimes(problem.dynamics, row, width, point.z, at) + problem.drift[k * states + i];
      equations = Math.max(equations, Math.abs(reached - point.z[(k + 1) * width + controls + i]));
      for (let a = 0; a < width; a++) {
        gradient[a] += problem.dynamics[row + a] * point.dynamicsDual[k * states + i];
      }
    }
    for (let a = k === stages ? controls : 0; a < width; a++) {
      stationarity = Math.max(stationarity, Math.abs(gradient[a]));
    }
  }
  for (let j = 0; j < shared; j++) stationarity = Math.max(stationarity, Math.abs(sharedGradient[j]));
  const last = stages * width + controls;
  for (let b = 0; b < boundaryRows; b++) {
    const sum =
      matrixTimes(problem.boundaryStart, b * states, states, point.z, controls) +
      matrixTimes(problem.boundaryEnd, b * states, states, point.z, last);
    equations = Math.max(equations, Math.abs(sum - problem.boundaryValue[b]));
  }
  return {
    equations,
    limits: rows.limits,
    stationarity: stationarity / scale,
    dualCone: rows.dualCone,
    complementarity: Math.abs(rows.complementarity) / (1 + Math.abs(objective)),
  };
}

/** Whether every residual is within its tolerance; NaN never is. */
export function isOptimal(r: Residuals, tolerance: number, gapTolerance: number): boolean {
  return (
    r.equations <= tolerance &&
    r.limits <= tolerance &&
    r.stationarity <= tolerance &&
    r.dualCone <= tolerance &&
    r.complementarity <= gapTolerance
  );
}
