/** How a line of the ledger is made from what is asked and what there is. */
import type { Dimension, Figure, FigureInput } from '../units';
import { type LedgerLine, type LedgerLineName, spareOf } from './ledger';

export const input = (label: string, value: number, dimension: Dimension): FigureInput => ({
  label,
  value,
  dimension,
});

export interface LineParts {
  readonly name: LedgerLineName;
  readonly label: string;
  readonly dimension: Dimension;
  readonly time?: Float64Array;
  readonly ask: ArrayLike<number>;
  readonly have: ArrayLike<number>;
  readonly askFormula: string;
  readonly haveFormula: string;
  readonly inputs: readonly FigureInput[];
  readonly source: string;
}

/** One line from its ask and have over time: its figures are those of the instant with least spare. O(instants). */
export function lineOf(parts: LineParts): LedgerLine {
  let worst = 0;
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < parts.ask.length; k++) {
    const spare = spareOf(parts.ask[k] as number, parts.have[k] as number);
    if (spare < least) {
      least = spare;
      worst = k;
    }
  }
  const { name, label, dimension, inputs, source, time } = parts;
  const figure = (id: string, what: string, values: ArrayLike<number>, formula: string): Figure => ({
    id: `${name}${id}`,
    label: `${label}, ${what}`,
    value: values[worst] as number,
    dimension,
    formula,
    inputs,
    source,
  });
  return {
    name,
    label,
    ask: figure('Ask', 'asked', parts.ask, parts.askFormula),
    have: figure('Have', 'there is', parts.have, parts.haveFormula),
    spare: least,
    at: time ? (time[worst] as number) : undefined,
    course: time
      ? { time, ask: Float64Array.from(parts.ask), have: Float64Array.from(parts.have) }
      : undefined,
  };
}

export const absolute = (values: Float64Array): Float64Array => values.map(Math.abs);
export const constant = (count: number, value: number): Float64Array => new Float64Array(count).fill(value);
