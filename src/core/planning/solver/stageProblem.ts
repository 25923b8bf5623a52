import type { StageSizes } from './stageSizes';

/**
 * A convex program over stages, all matrices row-major in flat arrays:
 *
 *   minimise    sum_k ( z_k' H_k z_k / 2 + q_k' z_k ) + sum_j ( hs_j w_j^2 / 2 + qs_j w_j )
 *   subject to  x_{k+1} = F_k z_k + f_k                      k = 0..N-1
 *               start x_0 + end x_N = value                  boundary rows
 *               bound - rows z_k - rowsShared w in the cone  k = 0..N
 *
 * with z_k = (u_k, x_k), controls first; z_N has no control (its first entries are never read).
 * The cone of a stage is the non-negative orthant of its linear rows, then its second-order cones
 * { (t, v): |v| <= t }.
 */
export interface StageProblem {
  readonly sizes: StageSizes;
  /** (N+1) x width x width, symmetric, positive semidefinite */
  readonly hessian: Float64Array;
  /** (N+1) x width */
  readonly gradient: Float64Array;
  /** N x states x width */
  readonly dynamics: Float64Array;
  /** N x states */
  readonly drift: Float64Array;
  /** rows x width */
  readonly rows: Float64Array;
  /** rows x shared */
  readonly rowsShared: Float64Array;
  /** rows */
  readonly bound: Float64Array;
  /** boundaryRows x states */
  readonly boundaryStart: Float64Array;
  /** boundaryRows x states */
  readonly boundaryEnd: Float64Array;
  /** boundaryRows */
  readonly boundaryValue: Float64Array;
  /** shared: diagonal */
  readonly sharedHessian: Float64Array;
  /** shared */
  readonly sharedGradient: Float64Array;
}

/** A problem of zeros to be filled in; allocates everything the problem will ever need. */
export function createStageProblem(sizes: StageSizes): StageProblem {
  const { stages, states, width, rows, shared, boundaryRows } = sizes;
  return {
    sizes,
    hessian: new Float64Array((stages + 1) * width * width),
    gradient: new Float64Array((stages + 1) * width),
    dynamics: new Float64Array(stages * states * width),
    drift: new Float64Array(stages * states),
    rows: new Float64Array(rows * width),
    rowsShared: new Float64Array(rows * shared),
    bound: new Float64Array(rows),
    boundaryStart: new Float64Array(boundaryRows * states),
    boundaryEnd: new Float64Array(boundaryRows * states),
    boundaryValue: new Float64Array(boundaryRows),
    sharedHessian: new Float64Array(shared),
    sharedGradient: new Float64Array(shared),
  };
}

/** A point and its multipliers: what the method iterates on and what comes out of it. */
export interface StagePoint {
  /** (N+1) x width: (u_k, x_k) */
  readonly z: Float64Array;
  /** N x states: multipliers of F_k z_k + f_k - x_{k+1} = 0 */
  readonly dynamicsDual: Float64Array;
  /** border: multipliers of the boundary rows, then the shared scalars themselves */
  readonly border: Float64Array;
  /** rows: bound - rows z - rowsShared w, in the cone */
  readonly slack: Float64Array;
  /** rows: multipliers, in the (self-dual) cone */
  readonly dual: Float64Array;
}

export function createStagePoint(sizes: StageSizes): StagePoint {
  return {
    z: new Float64Array((sizes.stages + 1) * sizes.width),
    dynamicsDual: new Float64Array(sizes.stages * sizes.states),
    border: new Float64Array(sizes.border),
    slack: new Float64Array(sizes.rows),
    dual: new Float64Array(sizes.rows),
  };
}

/** Copies one point over another of the same sizes. */
export function copyStagePoint(from: StagePoint, to: StagePoint): void {
  to.z.set(from.z);
  to.dynamicsDual.set(from.dynamicsDual);
  to.border.set(from.border);
  to.slack.set(from.slack);
  to.dual.set(from.dual);
}
