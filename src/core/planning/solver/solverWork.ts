import { type ConeScaling, createConeScaling } from './coneScaling';
import { createPackedRows, type PackedRows } from './packedRows';
import { createStagePoint, type StagePoint, type StageProblem } from './stageProblem';
import { createStageFactor, type StageFactor } from './stageRiccati';
import type { StageSizes } from './stageSizes';

/** All scratch of one solver, sized once; one per caller, never shared between two solves at a time. */
export interface SolverWork {
  readonly sizes: StageSizes;
  /** the iterate, and in the end the answer */
  readonly point: StagePoint;
  /** a well-centred point of the last solve, kept for a warm start */
  readonly kept: StagePoint;
  hasKept: boolean;
  readonly scaling: ConeScaling;
  readonly factor: StageFactor;
  readonly packed: PackedRows;
  /** rows x shared: shared columns divided by their scaling */
  readonly scaledShared: Float64Array;
  /** gradients of the Lagrangian and residuals */
  readonly gradient: Float64Array;
  readonly borderGradient: Float64Array;
  readonly equations: Float64Array;
  readonly rowResidual: Float64Array;
  /** right-hand sides */
  readonly right: Float64Array;
  readonly rightBorder: Float64Array;
  readonly rowRight: Float64Array;
  readonly correction: Float64Array;
  /** Newton step; rows in scaled space */
  readonly stepZ: Float64Array;
  readonly stepDynamics: Float64Array;
  readonly stepBorder: Float64Array;
  readonly stepSlack: Float64Array;
  readonly stepDual: Float64Array;
  /** correction of a step, and equations without residual */
  readonly refineZ: Float64Array;
  readonly refineDynamics: Float64Array;
  readonly refineBorder: Float64Array;
  readonly noResidual: Float64Array;
  /** made on the first problem that needs the elastic phase */
  elastic: { readonly problem: StageProblem; readonly work: SolverWork } | null;
}

export function createSolverWork(sizes: StageSizes): SolverWork {
  const { stages, states, width, rows, shared, border } = sizes;
  const nodes = (stages + 1) * width;
  return {
    sizes,
    point: createStagePoint(sizes),
    kept: createStagePoint(sizes),
    hasKept: false,
    scaling: createConeScaling(sizes),
    factor: createStageFactor(sizes),
    packed: createPackedRows(sizes),
    scaledShared: new Float64Array(rows * shared),
    gradient: new Float64Array(nodes),
    borderGradient: new Float64Array(border),
    equations: new Float64Array(stages * states),
    rowResidual: new Float64Array(rows),
    right: new Float64Array(nodes),
    rightBorder: new Float64Array(border),
    rowRight: new Float64Array(rows),
    correction: new Float64Array(rows),
    stepZ: new Float64Array(nodes),
    stepDynamics: new Float64Array(stages * states),
    stepBorder: new Float64Array(border),
    stepSlack: new Float64Array(rows),
    stepDual: new Float64Array(rows),
    refineZ: new Float64Array(nodes),
    refineDynamics: new Float64Array(stages * states),
    refineBorder: new Float64Array(border),
    noResidual: new Float64Array(stages * states),
    elastic: null,
  };
}
