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

/** Moves slack and dual along the scaled step: slack += a W stepSlack, dual += a W^-1 stepDual. */
export function moveCones(work: SolverWork, a: number): void {
  const { stages, rows, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const { scale, beta } = work.scaling;
  const { stepSlack, stepDual } = work;
  const { slack, dual } = work.point;
  for (let c = 0; c < coneRow.length; c++) {
    multiplyCone(scale, beta[c], coneRow[c], coneDim[c], stepSlack, stepSlack);
    divideCone(scale, beta[c], coneRow[c], coneDim[c], stepDual, stepDual);
  }
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      stepSlack[r] *= scale[r];
      stepDual[r] /= scale[r];
    }
  }
  for (let r = 0; r < rows; r++) {
    slack[r] += a * stepSlack[r];
    dual[r] += a * stepDual[r];
  }
}

/**
 * scaled \ d of the Jordan product, minus what is asked: the right-hand side of the scaled
 * complementarity row, scaled o (stepSlack + stepDual) = centre e - scaled o scaled - correction.
 *
 * @param centre sigma mu
 * @param out    rows; may be work.correction
 */
function fillComplementarity(
  work: SolverWork,
  centre: number,
  hasCorrection: boolean,
  out: Float64Array,
): void {
  const { stages, rowStart, linearRows, coneRow, coneDim } = work.sizes;
  const l = work.scaling.scaled;
  const q = work.correction;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      out[r] = (centre - (hasCorrection ? q[r] : 0)) / l[r] - l[r];
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const dim = coneDim[c];
    // arrow system L x = d with d = centre e - correction; the part -scaled o scaled gives -scaled
    const l0 = l[at];
    let tail2 = 0;
    let dot = 0;
    for (let i = 1; i < dim; i++) {
      tail2 += l[at + i] * l[at + i];
      if (hasCorrection) dot -= l[at + i] * q[at + i];
    }
    const tail = Math.sqrt(tail2);
    const det = (l0 - tail) * (l0 + tail);
    const d0 = centre - (hasCorrection ? q[at] : 0);
    const x0 = (l0 * d0 - dot) / det;
    for (let i = 1; i < dim; i++) {
      const di = hasCorrection ? -q[at + i] : 0;
      out[at + i] = (di - x0 * l[at + i]) / l0 - l[at + i];
    }
    out[at] = x0 - l0;
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
 * One Newton step towards complementarity `centre`, from the residuals in the work space.
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
  fillComplementarity(work, centre, hasCorrection, stepSlack);
  divideByScaling(work, work.rowResidual, rowRight);
  for (let r = 0; r < rows; r++) rowRight[r] += stepSlack[r];
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
