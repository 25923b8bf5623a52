import type { StagePoint, StageProblem } from './stageProblem';

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
  const { stages, states, controls, width, shared, boundaryRows } = problem.sizes;
  const { z, dynamicsDual: y, border } = point;
  const h = problem.hessian;
  const dyn = problem.dynamics;
  for (let k = 0; k <= stages; k++) {
    const at = k * width;
    for (let a = 0; a < width; a++) {
      let sum = problem.gradient[at + a];
      const row = (at + a) * width;
      for (let b = 0; b < width; b++) sum += h[row + b] * z[at + b];
      outZ[at + a] = sum;
    }
    if (k > 0) {
      for (let i = 0; i < states; i++) outZ[at + controls + i] -= y[(k - 1) * states + i];
    }
    if (k < stages) {
      for (let i = 0; i < states; i++) {
        const yi = y[k * states + i];
        const row = (k * states + i) * width;
        for (let a = 0; a < width; a++) outZ[at + a] += dyn[row + a] * yi;
      }
    } else {
      for (let a = 0; a < controls; a++) outZ[at + a] = 0;
    }
  }
  const last = stages * width + controls;
  for (let b = 0; b < boundaryRows; b++) {
    let sum = -problem.boundaryValue[b];
    for (let i = 0; i < states; i++) {
      const s = problem.boundaryStart[b * states + i];
      const e = problem.boundaryEnd[b * states + i];
      sum += s * z[controls + i] + e * z[last + i];
      outZ[controls + i] += s * border[b];
      outZ[last + i] += e * border[b];
    }
    outBorder[b] = sum;
  }
  for (let j = 0; j < shared; j++) {
    outBorder[boundaryRows + j] =
      problem.sharedGradient[j] + problem.sharedHessian[j] * border[boundaryRows + j];
  }
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
