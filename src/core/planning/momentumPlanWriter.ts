import type { ControlForm } from './momentumPlanBounds';
import type { AxisLayout } from './momentumPlanLayout';
import type { StageProblem } from './solver';

/** Writes squares and rows of affine forms into a stage problem; keeps the constant the squares leave. */
export interface Writer {
  readonly problem: StageProblem;
  readonly at: Int32Array;
  readonly by: Float64Array;
  count: number;
  constant: number;
  row: number;
  /** constant of the form being written */
  offset: number;
}

export function addTerm(w: Writer, index: number, coefficient: number): void {
  w.at[w.count] = index;
  w.by[w.count] = coefficient;
  w.count += 1;
}

export function clearForm(w: Writer): void {
  w.count = 0;
  w.offset = 0;
}

/** Adds weight * (form + offset)^2 to the objective of node k. */
export function addSquare(w: Writer, k: number, weight: number): void {
  const { sizes, hessian, gradient } = w.problem;
  const { width } = sizes;
  for (let i = 0; i < w.count; i++) {
    const row = (k * width + w.at[i]) * width;
    gradient[k * width + w.at[i]] += 2 * weight * w.by[i] * w.offset;
    for (let j = 0; j < w.count; j++) hessian[row + w.at[j]] += 2 * weight * w.by[i] * w.by[j];
  }
  w.constant += weight * w.offset * w.offset;
}

/** Next row: sign * (form + offset) <= bound + loosening * shared. */
export function addRow(w: Writer, sign: number, bound: number, loosening: number): void {
  const { sizes, rows, rowsShared, bound: bounds } = w.problem;
  const at = w.row * sizes.width;
  for (let i = 0; i < w.count; i++) rows[at + w.at[i]] += sign * w.by[i];
  bounds[w.row] = bound - sign * w.offset;
  if (sizes.shared > 0) rowsShared[w.row] = -loosening;
  w.row += 1;
}

/** A row that limits nothing, so that the number of rows does not hang on the data. */
export function addIdleRow(w: Writer): void {
  w.problem.bound[w.row] = 1;
  w.row += 1;
}

export function formOfControl(w: Writer, layout: AxisLayout, control: ControlForm, factor: number): void {
  if (control.slope !== 0) addTerm(w, layout.control, factor * control.slope);
  w.offset += factor * control.constant;
}

export const createWriter = (problem: StageProblem): Writer => ({
  problem,
  at: new Int32Array(8),
  by: new Float64Array(8),
  count: 0,
  constant: 0,
  row: 0,
  offset: 0,
});
