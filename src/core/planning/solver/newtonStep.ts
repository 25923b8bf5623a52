import { coneStep, divideCone, multiplyCone } from './coneScaling';
import { addRowsTransposed, multiplyRows } from './packedRows';
import type { SolverWork } from './solverWork';
import type { StageProblem } from './stageProblem';

import { addSmoothProduct } from './stageProducts';
import { solveStages } from './stageRiccati';

/** Divides the packed rows and the shared columns by the cone scaling. O(entries), allocates nothing. */
export function scaleRows(problem: StageProblem, work: SolverWork): void {
  const { stages, shared, rowStart, linearRows, coneRow, coneDim } = problem.sizes;
  const { scale, beta } = work.scaling;
  const { start, value, scaled } = work.packed;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      const inverse = 1 / scale[r];
      for (let t = start[r]; t < start[r + 1]; t++) scaled[t] = value[t] * inverse;
      for (let j = r * shared; j < (r + 1) * shared; j++) {
        work.scaledShared[j] = problem.rowsShared[j] * inverse;
      }
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const used = start[at + 1] - start[at];
    divideConeRows(scale, beta[c], at, coneDim[c], used, start[at], value, scaled);
    if (shared > 0) {
      const { rowsShared } = problem;
      divideConeRows(scale, beta[c], at, coneDim[c], shared, at * shared, rowsShared, work.scaledShared);
    }
  }
}

/** out = W^-1 m for the rows of one cone, column by column; the cone's matrix starts at `from`. */
function divideConeRows(
  scale: Float64Array,
  beta: number,
  at: number,
  dim: number,
  columns: number,
  from: number,
  m: Float64Array,
  out: Float64Array,
): void {
  const w0 = scale[at];
  const inverse = 1 / beta;
  for (let a = from; a < from + columns; a++) {
    const head = m[a];
    if (dim === 3) {
      const m1 = m[a + columns];
      const m2 = m[a + 2 * columns];
      const dot3 = scale[at + 1] * m1 + scale[at + 2] * m2;
      const tail3 = inverse * (dot3 / (1 + w0) - head);
      out[a] = inverse * (w0 * head - dot3);
      out[a + columns] = inverse * m1 + scale[at + 1] * tail3;
      out[a + 2 * columns] = inverse * m2 + scale[at + 2] * tail3;
      continue;
    }
    let dot = 0;
    for (let i = 1; i < dim; i++) dot += scale[at + i] * m[a + i * columns];
    const tail = inverse * (dot / (1 + w0) - head);
    for (let i = 1; i < dim; i++) {
      out[a + i * columns] = inverse * m[a + i * columns] + scale[at + i] * tail;
    }
    out[a] = inverse * (w0 * head - dot);
  }
}

/** out = W^-1 x over every row; out may be x. */
export function divideByScaling(work: SolverWork, x: Float64Array, out: Float64Array): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const { scale, beta } = work.scaling;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) out[r] = x[r] / scale[r];
  }
  for (let c = 0; c < coneRow.length; c++) divideCone(scale, beta[c], coneRow[c], coneDim[c], x, out);
}

/** Moves slack and dual along the scaled step: slack += a W stepSlack, dual += a W^-1 stepDual; spoils the step. */
export function moveCones(work: SolverWork, a: number): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const { scale, beta } = work.scaling;
  const { stepSlack, stepDual } = work;
  const { slack, dual } = work.point;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      slack[r] += a * stepSlack[r] * scale[r];
      dual[r] += (a * stepDual[r]) / scale[r];
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const dim = coneDim[c];
    multiplyCone(scale, beta[c], at, dim, stepSlack, stepSlack);
    divideCone(scale, beta[c], at, dim, stepDual, stepDual);
    for (let r = at; r < at + dim; r++) {
      slack[r] += a * stepSlack[r];
      dual[r] += a * stepDual[r];
    }
  }
}

/**
 * Right-hand side of the scaled complementarity row, scaled o (stepSlack + stepDual) = d with
 * d = centre e - scaled o scaled - correction, divided by scaled in the Jordan product.
 *
 * @param centre sigma mu
 * @param out    rows; may not be work.correction
 */
function fillComplementarity(work: SolverWork, centre: number, out: Float64Array): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const l = work.scaling.scaled;
  const q = work.correction;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) out[r] = (centre - q[r]) / l[r] - l[r];
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const dim = coneDim[c];
    // arrow system of centre e - correction; the part -scaled o scaled divides to -scaled
    const l0 = l[at];
    let tail2 = l[at + 1] * l[at + 1];
    let dot = l[at + 1] * q[at + 1];
    for (let i = 2; i < dim; i++) {
      tail2 += l[at + i] * l[at + i];
      dot += l[at + i] * q[at + i];
    }
    const tail = Math.sqrt(tail2);
    const x0 = (l0 * (centre - q[at]) + dot) / ((l0 - tail) * (l0 + tail));
    const inverse = 1 / l0;
    out[at] = x0 - l0;
    out[at + 1] = -(q[at + 1] + x0 * l[at + 1]) * inverse - l[at + 1];
    for (let i = 2; i < dim; i++) out[at + i] = -(q[at + i] + x0 * l[at + i]) * inverse - l[at + i];
  }
}

/** correction = stepSlack o stepDual, the second-order term of Mehrotra's corrector. */
export function fillCorrection(work: SolverWork): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const a = work.stepSlack;
  const b = work.stepDual;
  const out = work.correction;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) out[r] = a[r] * b[r];
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    let dot = 0;
    for (let i = 0; i < coneDim[c]; i++) dot += a[at + i] * b[at + i];
    for (let i = 1; i < coneDim[c]; i++) out[at + i] = a[at] * b[at + i] + b[at] * a[at + i];
    out[at] = dot;
  }
}

/**
 * One Newton step from the residuals in the work space: towards the boundary (the predictor), or with
 * hasCorrection towards complementarity `centre` with Mehrotra's second-order term (the corrector).
 *
 * Leaves stepZ, stepDynamics, stepBorder, and stepSlack, stepDual in scaled space.
 * O(N width^2 + rows width), allocates nothing.
 */
export function solveNewton(
  problem: StageProblem,
  work: SolverWork,
  centre: number,
  hasCorrection: boolean,
): void {
  const { sizes, packed, right, rightBorder, rowRight, stepSlack, stepDual } = work;
  const { rows } = sizes;
  divideByScaling(work, work.rowResidual, rowRight);
  if (hasCorrection) {
    fillComplementarity(work, centre, stepSlack);
    for (let r = 0; r < rows; r++) rowRight[r] += stepSlack[r];
  } else {
    const l = work.scaling.scaled;
    for (let r = 0; r < rows; r++) {
      stepSlack[r] = -l[r];
      rowRight[r] -= l[r];
    }
  }
  right.set(work.gradient);
  rightBorder.set(work.borderGradient);
  addRowsTransposed(sizes, packed, packed.scaled, work.scaledShared, rowRight, right, rightBorder);
  solveStages(
    problem,
    work.factor,
    right,
    rightBorder,
    work.equations,
    work.stepZ,
    work.stepDynamics,
    work.stepBorder,
  );
  multiplyRows(sizes, packed, packed.scaled, work.scaledShared, work.stepZ, work.stepBorder, stepDual);
  for (let r = 0; r < rows; r++) {
    stepDual[r] += rowRight[r];
    stepSlack[r] -= stepDual[r];
  }
}

/**
 * Corrects the step by what rounding left of its stationarity row (one round of iterative refinement).
 *
 * Near the end the barrier's weights span twenty decades, and the recursion over the stages loses the small
 * ones among the large. O(N width^2 + rows width), allocates nothing.
 */
export function refineStep(problem: StageProblem, work: SolverWork): void {
  const { sizes, packed, right, rightBorder, rowRight, stepSlack, stepDual } = work;
  const { stepZ, stepDynamics, stepBorder, refineZ, refineDynamics, refineBorder } = work;
  right.set(work.gradient);
  rightBorder.set(work.borderGradient);
  addSmoothProduct(problem, stepZ, stepDynamics, stepBorder, right, rightBorder);
  addRowsTransposed(sizes, packed, packed.scaled, work.scaledShared, stepDual, right, rightBorder);
  solveStages(
    problem,
    work.factor,
    right,
    rightBorder,
    work.noResidual,
    refineZ,
    refineDynamics,
    refineBorder,
  );
  multiplyRows(sizes, packed, packed.scaled, work.scaledShared, refineZ, refineBorder, rowRight);
  for (let i = 0; i < stepZ.length; i++) stepZ[i] += refineZ[i];
  for (let i = 0; i < stepDynamics.length; i++) stepDynamics[i] += refineDynamics[i];
  for (let i = 0; i < stepBorder.length; i++) stepBorder[i] += refineBorder[i];
  for (let r = 0; r < sizes.rows; r++) {
    stepDual[r] += rowRight[r];
    stepSlack[r] -= rowRight[r];
  }
}

/** Greatest step, at most one, that keeps both scaled points in the cone. */
export function longestStep(work: SolverWork): number {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const l = work.scaling.scaled;
  const { stepSlack, stepDual } = work;
  let step = 1;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      const worst = Math.min(stepSlack[r], stepDual[r]);
      if (worst * step < -l[r]) step = -l[r] / worst;
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    step = coneStep(l, stepSlack, stepDual, coneRow[c], coneDim[c], step);
  }
  return step;
}
