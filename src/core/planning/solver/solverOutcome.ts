import type { StagePoint } from './stageProblem';

/** Largest violations of the optimality conditions, recomputed from the problem and the point alone. */
export interface Residuals {
  /** dynamics and boundary rows */
  readonly equations: number;
  /** how far outside the limits the point itself is (not its slack) */
  readonly limits: number;
  /** gradient of the Lagrangian, over 1 + the largest gradient or multiplier it is made of */
  readonly stationarity: number;
  /** how far outside the dual cone the multipliers are */
  readonly dualCone: number;
  /** sum of slack times multiplier, over 1 + |objective| */
  readonly complementarity: number;
}

/** Multipliers that add the constraints up to a contradiction. */
export interface Certificate {
  /** N x states */
  readonly dynamicsDual: Float64Array;
  /** boundaryRows */
  readonly boundaryDual: Float64Array;
  /** rows, in the dual cone */
  readonly dual: Float64Array;
  /** by how much the constraints contradict each other when so added, per unit of multiplier */
  readonly contradiction: number;
}

export type SolverOutcome =
  | {
      readonly kind: 'solved';
      /** lives in the work space: copy what must outlast the next solve */
      readonly point: StagePoint;
      readonly objective: number;
      readonly residuals: Residuals;
      readonly iterations: number;
    }
  | { readonly kind: 'impossible'; readonly certificate: Certificate; readonly iterations: number }
  | { readonly kind: 'gave-up'; readonly residuals: Residuals; readonly iterations: number };
