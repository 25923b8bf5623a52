/** How hard the solver tries and what it calls done. All figures are in the problem's own scaling. */
export interface SolverOptions {
  /** most Newton steps before giving up */
  readonly maxIterations: number;
  /** largest residual of the equations, limits and stationarity, relative to the data they are made of */
  readonly tolerance: number;
  /** largest gap between primal and dual, relative to 1 + |objective| */
  readonly gapTolerance: number;
  /**
   * A certificate says that no point whose every variable lies within plus or minus this many units meets
   * the limits; scale variables to about one and it says all there is to say.
   */
  readonly radius: number;
  /** added to the diagonal of the Newton system only; never part of the problem solved */
  readonly regularise: number;
  /** refine every late step; a run that fails is always tried again so, from a cold start */
  readonly careful: boolean;
  /** start from the point kept of the last solve with the same work space */
  readonly warm: boolean;
  /** mean complementarity at which that point is kept */
  readonly warmGap: number;
}

export const defaultSolverOptions: SolverOptions = Object.freeze({
  maxIterations: 60,
  tolerance: 1e-9,
  gapTolerance: 5e-9,
  radius: 100,
  regularise: 1e-10,
  careful: false,
  warm: false,
  warmGap: 1e-3,
});
