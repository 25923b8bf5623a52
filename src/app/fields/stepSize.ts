/** The steps of a number field: round in the unit shown, a few per cent of the value. */
import type { QuantityInfo } from '../../core/rig';
import { type Dimension, formatNumber, fromSI, type Unit, unitFor, unitsOf } from '../../core/units';

/** The nearest of 1, 2, 5 times a power of ten at or below a size. */
export function roundDown125(size: number): number {
  if (!(size > 0)) return 0;
  const power = 10 ** Math.floor(Math.log10(size) + 1e-9);
  const lead = size / power;
  return (lead >= 5 - 1e-9 ? 5 : lead >= 2 - 1e-9 ? 2 : 1) * power;
}

const SHARE_OF_VALUE = 0.05;
const SHARE_OF_RANGE = 1 / 400;
const FINE_PARTS = 5;

export interface Steps {
  /** Of plus and minus, in the unit shown. */
  readonly button: number;
  /** Of a drag, in the unit shown. */
  readonly drag: number;
}

/** Steps for a value, both in the unit shown. Whole quantities step by whole numbers. */
export function stepsFor(info: QuantityInfo, shown: number, symbol: string | undefined): Steps {
  if (info.dimension === 'count') return { button: 1, drag: 1 };
  const range = fromSI(info.max - info.min, info.dimension, symbol);
  const fromValue = roundDown125(Math.abs(shown) * SHARE_OF_VALUE);
  const button = fromValue > 0 ? fromValue : roundDown125(Math.min(range * SHARE_OF_RANGE, 1));
  return { button, drag: roundDown125(button / FINE_PARTS) };
}

/** Moves to the next whole multiple of a step, so that stepping a crooked number makes it round. */
export function stepFrom(shown: number, step: number, direction: 1 | -1): number {
  const places = shown / step;
  const nearest = Math.round(places);
  const isRound = Math.abs(places - nearest) < 1e-6;
  const next = isRound ? nearest + direction : direction > 0 ? Math.ceil(places) : Math.floor(places);
  return tidy(next * step);
}

/** Cuts the rounding dust of binary arithmetic off a shown number. */
export const tidy = (value: number): number => Number(value.toPrecision(12));

/** A shown number to four digits without trailing zeros. */
export function showNumber(value: number): string {
  const text = formatNumber(value, 4);
  return text.includes('.') && !text.includes('·') ? text.replace(/\.?0+$/, '') : text;
}

const MOST_LETTERS = 6;

/**
 * The unit a field shows a value in: the one the user chose for the dimension, else the usual one unless its
 * number would not fit the box and another unit's would.
 */
export function unitThatFits(dimension: Dimension, si: number, chosen: string | undefined): Unit {
  const usual = unitFor(dimension, chosen);
  const fits = (unit: Unit): boolean => showNumber(si / unit.toSI).length <= MOST_LETTERS;
  if (chosen !== undefined || si === 0 || fits(usual)) return usual;
  return unitsOf(dimension).find((unit) => fits(unit) && Math.abs(si) >= 0.1 * unit.toSI) ?? usual;
}
