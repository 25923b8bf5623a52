import type { Dimension, Figure, FigureInput } from '../units';
import type { FormulaNote } from './formula';

export const figureInput = (label: string, value: number, dimension: Dimension): FigureInput => ({
  label,
  value,
  dimension,
});

export const figure = (
  id: string,
  label: string,
  value: number,
  dimension: Dimension,
  note: FormulaNote,
  inputs: readonly FigureInput[],
): Figure => ({ id, label, value, dimension, formula: note.formula, inputs, source: note.source });

export const speedInput = (report: { readonly gyro: { readonly speed: number } }): FigureInput =>
  figureInput('Speed', report.gyro.speed, 'spinRate');
