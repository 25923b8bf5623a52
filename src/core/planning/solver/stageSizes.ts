/** What a caller says about the shape of a stage-structured conic program. */
export interface StageShape {
  /** N: intervals; states live at 0..N, controls at 0..N-1 */
  readonly stages: number;
  readonly states: number;
  readonly controls: number;
  /** equations that tie the first state to the last: start x_0 + end x_N = value */
  readonly boundaryRows: number;
  /** scalars that every stage shares */
  readonly shared: number;
  /** linear inequality rows of stage k, k = 0..N */
  readonly linearRows: ArrayLike<number>;
  /** dimensions of the second-order cones of stage k, k = 0..N */
  readonly cones: ArrayLike<readonly number[]>;
}

/** The shape with every offset worked out; frozen and shareable. */
export interface StageSizes {
  readonly stages: number;
  readonly states: number;
  readonly controls: number;
  /** controls + states: length of the stage vector z_k = (u_k, x_k), controls first */
  readonly width: number;
  readonly boundaryRows: number;
  readonly shared: number;
  /** boundaryRows + shared: unknowns that border the stage structure */
  readonly border: number;
  /** all inequality rows, linear and conic */
  readonly rows: number;
  /** N + 2: first row of stage k; within a stage the linear rows come first, then the cones */
  readonly rowStart: Int32Array;
  readonly linearRows: Int32Array;
  /** N + 2: first cone of stage k */
  readonly coneStart: Int32Array;
  readonly coneRow: Int32Array;
  readonly coneDim: Int32Array;
  /** degree of the barrier: one for each linear row and one for each cone */
  readonly degree: number;
}

const requireCount = (name: string, value: number, least: number): void => {
  if (!Number.isInteger(value) || value < least) {
    throw new Error(`${name} is ${value}; it must be a whole number of at least ${least}`);
  }
};

/**
 * Works out the offsets of a stage-structured program once.
 *
 * Throws on a shape that is no shape (a programmer's mistake). O(rows).
 */
export function createStageSizes(shape: StageShape): StageSizes {
  const { stages, states, controls } = shape;
  requireCount('stages', stages, 1);
  requireCount('states', states, 1);
  requireCount('controls', controls, 1);
  requireCount('boundaryRows', shape.boundaryRows, 0);
  requireCount('shared', shape.shared, 0);
  if (shape.linearRows.length !== stages + 1 || shape.cones.length !== stages + 1) {
    throw new Error(`linearRows and cones need ${stages + 1} entries, one for each node`);
  }
  const rowStart = new Int32Array(stages + 2);
  const coneStart = new Int32Array(stages + 2);
  const coneRow: number[] = [];
  const coneDim: number[] = [];
  let degree = 0;
  for (let k = 0; k <= stages; k++) {
    let row = rowStart[k] + shape.linearRows[k];
    degree += shape.linearRows[k];
    for (const dim of shape.cones[k]) {
      requireCount('cone dimension', dim, 2);
      coneRow.push(row);
      coneDim.push(dim);
      row += dim;
      degree += 1;
    }
    rowStart[k + 1] = row;
    coneStart[k + 1] = coneRow.length;
  }
  return Object.freeze({
    stages,
    states,
    controls,
    width: states + controls,
    boundaryRows: shape.boundaryRows,
    shared: shape.shared,
    border: shape.boundaryRows + shape.shared,
    rows: rowStart[stages + 1],
    rowStart,
    linearRows: Int32Array.from(shape.linearRows),
    coneStart,
    coneRow: Int32Array.from(coneRow),
    coneDim: Int32Array.from(coneDim),
    degree,
  });
}
