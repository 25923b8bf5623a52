import type { StageSizes } from './stageSizes';

/**
 * Nesterov-Todd scaling of the product of a non-negative orthant and second-order cones: the symmetric
 * matrix W with W dual = W^-1 slack. A linear row keeps its W in `scale`; a cone of dimension d keeps
 * beta in `beta` and the unit-norm hyperbolic vector wbar in `scale`, so that
 * W = beta [w0, w1'; w1, I + w1 w1' / (1 + w0)].
 *
 * Source: Nesterov and Todd, SIAM J. Optim. 8 (1998); Vandenberghe, The CVXOPT linear and quadratic cone
 * program solvers (2010), section 4.
 */
export interface ConeScaling {
  /** rows */
  readonly scale: Float64Array;
  /** cones */
  readonly beta: Float64Array;
  /** rows: W dual = W^-1 slack */
  readonly scaled: Float64Array;
}

export const createConeScaling = (sizes: StageSizes): ConeScaling => ({
  scale: new Float64Array(sizes.rows),
  beta: new Float64Array(sizes.coneRow.length),
  scaled: new Float64Array(sizes.rows),
});

/** t^2 - |v|^2 of the vector at `at`, in the form (t - |v|)(t + |v|) that loses least near the boundary. */
function hyperbolicNorm2(x: Float64Array, at: number, dim: number): number {
  // dimension 3 is written out here and below: it is nearly every cone there is, and the loop costs half
  let tail = x[at + 1] * x[at + 1];
  if (dim === 3) tail += x[at + 2] * x[at + 2];
  else for (let i = 2; i < dim; i++) tail += x[at + i] * x[at + i];
  tail = Math.sqrt(tail);
  return (x[at] - tail) * (x[at] + tail);
}

/**
 * Finds the scaling at a pair of interior points.
 *
 * @param slack rows, strictly inside the cone
 * @param dual  rows, strictly inside the cone
 * @param out   scaling, overwritten
 * @returns false when a point is not strictly inside (rounding has eaten the interior)
 *
 * O(rows), allocates nothing.
 */
export function scaleCones(
  sizes: StageSizes,
  slack: Float64Array,
  dual: Float64Array,
  out: ConeScaling,
): boolean {
  const { stages, rowStart, linearRows, coneRow, coneDim } = sizes;
  const scale = out.scale;
  const scaled = out.scaled;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) {
      const s = slack[r];
      const l = dual[r];
      if (!(s > 0 && l > 0)) return false;
      scale[r] = Math.sqrt(s / l);
      scaled[r] = Math.sqrt(s * l);
    }
  }
  for (let c = 0; c < coneRow.length; c++) {
    const at = coneRow[c];
    const dim = coneDim[c];
    const s2 = hyperbolicNorm2(slack, at, dim);
    const l2 = hyperbolicNorm2(dual, at, dim);
    if (!(s2 > 0 && l2 > 0 && slack[at] > 0 && dual[at] > 0)) return false;
    const sn = 1 / Math.sqrt(s2);
    const ln = 1 / Math.sqrt(l2);
    let dot = slack[at] * dual[at] + slack[at + 1] * dual[at + 1];
    for (let i = 2; i < dim; i++) dot += slack[at + i] * dual[at + i];
    const half = 0.5 / Math.sqrt((1 + dot * sn * ln) / 2);
    scale[at] = (slack[at] * sn + dual[at] * ln) * half;
    for (let i = 1; i < dim; i++) scale[at + i] = (slack[at + i] * sn - dual[at + i] * ln) * half;
    // w0 again from the tail, so that w0^2 - |w1|^2 = 1 holds to rounding
    let tail = 1;
    for (let i = 1; i < dim; i++) tail += scale[at + i] * scale[at + i];
    scale[at] = Math.sqrt(tail);
    out.beta[c] = Math.sqrt(ln / sn);
    multiplyCone(scale, out.beta[c], at, dim, dual, scaled);
  }
  return true;
}

/** out = W x on one cone; out may be x. */
export function multiplyCone(
  scale: Float64Array,
  beta: number,
  at: number,
  dim: number,
  x: Float64Array,
  out: Float64Array,
): void {
  const w0 = scale[at];
  const x0 = x[at];
  if (dim === 3) {
    const dot3 = scale[at + 1] * x[at + 1] + scale[at + 2] * x[at + 2];
    const tail3 = beta * (x0 + dot3 / (1 + w0));
    out[at] = beta * (w0 * x0 + dot3);
    out[at + 1] = beta * x[at + 1] + scale[at + 1] * tail3;
    out[at + 2] = beta * x[at + 2] + scale[at + 2] * tail3;
    return;
  }
  let dot = 0;
  for (let i = 1; i < dim; i++) dot += scale[at + i] * x[at + i];
  const tail = beta * (x0 + dot / (1 + w0));
  for (let i = 1; i < dim; i++) out[at + i] = beta * x[at + i] + scale[at + i] * tail;
  out[at] = beta * (w0 * x0 + dot);
}

/** out = W^-1 x on one cone; out may be x. */
export function divideCone(
  scale: Float64Array,
  beta: number,
  at: number,
  dim: number,
  x: Float64Array,
  out: Float64Array,
): void {
  const w0 = scale[at];
  const x0 = x[at];
  const inverse = 1 / beta;
  if (dim === 3) {
    const dot3 = scale[at + 1] * x[at + 1] + scale[at + 2] * x[at + 2];
    const tail3 = inverse * (dot3 / (1 + w0) - x0);
    out[at] = inverse * (w0 * x0 - dot3);
    out[at + 1] = inverse * x[at + 1] + scale[at + 1] * tail3;
    out[at + 2] = inverse * x[at + 2] + scale[at + 2] * tail3;
    return;
  }
  let dot = 0;
  for (let i = 1; i < dim; i++) dot += scale[at + i] * x[at + i];
  const tail = inverse * (dot / (1 + w0) - x0);
  for (let i = 1; i < dim; i++) out[at + i] = inverse * x[at + i] + scale[at + i] * tail;
  out[at] = inverse * (w0 * x0 - dot);
}

/**
 * Greatest step a <= limit with x + a d1 and x + a d2 in one second-order cone, x strictly inside.
 *
 * With x turned to the head of the cone (a hyperbolic rotation that leaves the cone as it is), d becomes
 * rho = (rho0, rho1) and the step is 1 / (|rho1| - rho0), without a quadratic to cancel.
 * Source: Vandenberghe, The CVXOPT linear and quadratic cone program solvers (2010), section 8.
 */
export function coneStep(
  x: Float64Array,
  d1: Float64Array,
  d2: Float64Array,
  at: number,
  dim: number,
  limit: number,
): number {
  const inverse = 1 / Math.sqrt(hyperbolicNorm2(x, at, dim));
  const first = stepNeed(x, d1, at, dim, inverse);
  const second = stepNeed(x, d2, at, dim, inverse);
  const worst = Math.max(first, second);
  return worst * limit > 1 ? 1 / worst : limit;
}

/** One over the longest step along d; not positive when there is no end to it. */
function stepNeed(x: Float64Array, d: Float64Array, at: number, dim: number, inverse: number): number {
  const x0 = x[at] * inverse;
  if (dim === 3) {
    const dot3 = (x[at + 1] * d[at + 1] + x[at + 2] * d[at + 2]) * inverse;
    const head3 = x0 * d[at] - dot3;
    const turn3 = ((head3 + d[at]) / (x0 + 1)) * inverse;
    const a = d[at + 1] - turn3 * x[at + 1];
    const b = d[at + 2] - turn3 * x[at + 2];
    return (Math.sqrt(a * a + b * b) - head3) * inverse;
  }
  let dot = 0;
  for (let i = 1; i < dim; i++) dot += x[at + i] * d[at + i];
  dot *= inverse;
  const head = x0 * d[at] - dot;
  const turn = ((head + d[at]) / (x0 + 1)) * inverse;
  let tail = 0;
  for (let i = 1; i < dim; i++) {
    const v = d[at + i] - turn * x[at + i];
    tail += v * v;
  }
  return (Math.sqrt(tail) - head) * inverse;
}

/** How far x is outside one second-order cone: |v| - t, negative inside. */
export function coneExcess(x: Float64Array, at: number, dim: number): number {
  let tail = 0;
  for (let i = 1; i < dim; i++) tail += x[at + i] * x[at + i];
  return Math.sqrt(tail) - x[at];
}
