import type { StageProblem } from './stageProblem';
import type { StageSizes } from './stageSizes';

/**
 * The inequality rows without their zeros. A linear row keeps its own columns; the rows of one cone keep
 * the columns that any of them has, so that scaling the cone stays within the pattern.
 */
export interface PackedRows {
  /** rows + 1: first entry of each row */
  readonly start: Int32Array;
  /** entry -> index into all of z */
  readonly column: Int32Array;
  /** entry -> column within the stage, for the stage block */
  readonly local: Int32Array;
  /** entry -> coefficient, and the same divided by the cone scaling */
  readonly value: Float64Array;
  readonly scaled: Float64Array;
}

export const createPackedRows = (sizes: StageSizes): PackedRows => ({
  start: new Int32Array(sizes.rows + 1),
  column: new Int32Array(sizes.rows * sizes.width),
  local: new Int32Array(sizes.rows * sizes.width),
  value: new Float64Array(sizes.rows * sizes.width),
  scaled: new Float64Array(sizes.rows * sizes.width),
});

/** Packs `count` rows of stage k from row r, all with the columns that any of them has. */
function packGroup(problem: StageProblem, k: number, r: number, count: number, out: PackedRows): void {
  const { width } = problem.sizes;
  const { rows } = problem;
  let at = out.start[r];
  const first = at;
  for (let a = 0; a < width; a++) {
    let isUsed = false;
    for (let i = r; i < r + count; i++) isUsed ||= rows[i * width + a] !== 0;
    if (!isUsed) continue;
    out.local[at] = a;
    at += 1;
  }
  const used = at - first;
  for (let i = 0; i < count; i++) {
    for (let t = 0; t < used; t++) {
      const local = out.local[first + t];
      const entry = first + i * used + t;
      out.local[entry] = local;
      out.column[entry] = k * width + local;
      out.value[entry] = rows[(r + i) * width + local];
    }
    out.start[r + i + 1] = first + (i + 1) * used;
  }
}

/** Reads the rows of a problem into packed form. O(rows width), allocates nothing. */
export function packRows(problem: StageProblem, out: PackedRows): void {
  const { stages, rowStart, linearRows, coneStart, coneRow, coneDim } = problem.sizes;
  out.start[0] = 0;
  for (let k = 0; k <= stages; k++) {
    const end = rowStart[k] + linearRows[k];
    for (let r = rowStart[k]; r < end; r++) packGroup(problem, k, r, 1, out);
    for (let c = coneStart[k]; c < coneStart[k + 1]; c++) packGroup(problem, k, coneRow[c], coneDim[c], out);
  }
}

/**
 * out = rows z + rowsShared w.
 *
 * @param value  entries of the packed rows, plain or scaled
 * @param shared rows x shared
 * @param w      shared scalars, at `wAt` of border
 * @param out    rows
 *
 * O(entries), allocates nothing.
 */
export function multiplyRows(
  sizes: StageSizes,
  packed: PackedRows,
  value: Float64Array,
  rowsShared: Float64Array,
  z: Float64Array,
  border: Float64Array,
  out: Float64Array,
): void {
  const { rows, shared, boundaryRows } = sizes;
  const { start, column } = packed;
  let t = 0;
  for (let r = 0; r < rows; r++) {
    const end = start[r + 1];
    let sum = 0;
    for (; t < end; t++) sum += value[t] * z[column[t]];
    out[r] = sum;
  }
  if (shared === 0) return;
  for (let r = 0; r < rows; r++) {
    for (let j = 0; j < shared; j++) out[r] += rowsShared[r * shared + j] * border[boundaryRows + j];
  }
}

/** Adds rows' x to outZ and rowsShared' x to the shared part of outBorder. O(entries), allocates nothing. */
export function addRowsTransposed(
  sizes: StageSizes,
  packed: PackedRows,
  value: Float64Array,
  rowsShared: Float64Array,
  x: Float64Array,
  outZ: Float64Array,
  outBorder: Float64Array,
): void {
  const { rows, shared, boundaryRows } = sizes;
  const { start, column } = packed;
  let t = 0;
  for (let r = 0; r < rows; r++) {
    const end = start[r + 1];
    const v = x[r];
    for (; t < end; t++) outZ[column[t]] += value[t] * v;
  }
  if (shared === 0) return;
  for (let r = 0; r < rows; r++) {
    for (let j = 0; j < shared; j++) outBorder[boundaryRows + j] += rowsShared[r * shared + j] * x[r];
  }
}
