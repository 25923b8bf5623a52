import type { StagePoint, StageProblem } from './stageProblem';

/**
 * Adds to outZ and outBorder what H, the dynamics and the boundary rows make of (z, y, border): the linear
 * part of the Lagrangian's gradient, the inequality rows left out.
 *
 * @param z         (N+1) x width
 * @param y         N x states, multipliers of the dynamics
 * @param border    border
 * @param outZ      (N+1) x width, added to; the controls of the last node become zero
 * @param outBorder border, added to
 *
 * O(N width^2), allocates nothing.
 */
export function addSmoothProduct(
  problem: StageProblem,
  z: Float64Array,
  y: Float64Array,
  border: Float64Array,
  outZ: Float64Array,
  outBorder: Float64Array,
): void {
  const { stages, states, controls, width, shared, boundaryRows } = problem.sizes;
  const h = problem.hessian;
  const dyn = problem.dynamics;
  const count = (stages + 1) * width;
  let row = 0;
  for (let at = 0; at < count; at += width) {
    for (let a = at; a < at + width; a++) {
      let sum = 0;
      for (let b = 0; b < width; b++) sum += h[row + b] * z[at + b];
      row += width;
      outZ[a] += sum;
    }
  }
  row = 0;
  for (let k = 0; k < stages; k++) {
    const at = k * width;
    for (let i = 0; i < states; i++) {
      const yi = y[k * states + i];
      for (let a = 0; a < width; a++) outZ[at + a] += dyn[row + a] * yi;
      outZ[at + width + controls + i] -= yi;
      row += width;
    }
  }
  const last = stages * width + controls;
  for (let a = 0; a < controls; a++) outZ[stages * width + a] = 0;
  for (let b = 0; b < boundaryRows; b++) {
    let sum = 0;
    for (let i = 0; i < states; i++) {
      const s = problem.boundaryStart[b * states + i];
      const e = problem.boundaryEnd[b * states + i];
      sum += s * z[controls + i] + e * z[last + i];
      outZ[controls + i] += s * border[b];
      outZ[last + i] += e * border[b];
    }
    outBorder[b] += sum;
  }
  for (let j = 0; j < shared; j++) {
    outBorder[boundaryRows + j] += problem.sharedHessian[j] * border[boundaryRows + j];
  }
}

/**
 * Gradient of the Lagrangian with respect to every z_k and every shared scalar, the inequality rows left
 * out; the boundary part of outBorder becomes the residual of the boundary rows.
 *
 * @param point     z, dynamicsDual and border are read
 * @param outZ      (N+1) x width
 * @param outBorder border
 *
 * O(N width^2), allocates nothing.
 */
export function smoothGradient(
  problem: StageProblem,
  point: StagePoint,
  outZ: Float64Array,
  outBorder: Float64Array,
): void {
  const { shared, boundaryRows } = problem.sizes;
  outZ.set(problem.gradient);
  for (let b = 0; b < boundaryRows; b++) outBorder[b] = -problem.boundaryValue[b];
  for (let j = 0; j < shared; j++) outBorder[boundaryRows + j] = problem.sharedGradient[j];
  addSmoothProduct(problem, point.z, point.dynamicsDual, point.border, outZ, outBorder);
}

/** out = F_k z_k + f_k - x_{k+1}, N x states. */
export function dynamicsResidual(problem: StageProblem, z: Float64Array, out: Float64Array): void {
  const { stages, states, controls, width } = problem.sizes;
  for (let k = 0; k < stages; k++) {
    for (let i = 0; i < states; i++) {
      const row = (k * states + i) * width;
      let sum = problem.drift[k * states + i] - z[(k + 1) * width + controls + i];
      for (let a = 0; a < width; a++) sum += problem.dynamics[row + a] * z[k * width + a];
      out[k * states + i] = sum;
    }
  }
}

/** Value of the objective. */
export function evaluateObjective(problem: StageProblem, z: Float64Array, border: Float64Array): number {
  const { stages, controls, width, shared, boundaryRows } = problem.sizes;
  let total = 0;
  for (let k = 0; k <= stages; k++) {
    const from = k === stages ? controls : 0;
    for (let a = from; a < width; a++) {
      const row = (k * width + a) * width;
      let sum = 0;
      for (let b = from; b < width; b++) sum += problem.hessian[row + b] * z[k * width + b];
      total += z[k * width + a] * (sum / 2 + problem.gradient[k * width + a]);
    }
  }
  for (let j = 0; j < shared; j++) {
    const w = border[boundaryRows + j];
    total += w * (problem.sharedGradient[j] + (problem.sharedHessian[j] * w) / 2);
  }
  return total;
}
