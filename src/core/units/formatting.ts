import { type Dimension, fromSI, unitFor } from './quantities';

const MINUS = '−';

/**
 * Writes a bare number to a count of significant digits, without exponent between 1e-4 and 1e6,
 * with a true minus sign; whole numbers are never cut below their units digit.
 */
export function formatNumber(value: number, digits = 3): string {
  if (Number.isNaN(value)) return '–';
  if (!Number.isFinite(value)) return value > 0 ? '∞' : `${MINUS}∞`;
  const size = Math.abs(value);
  if (size === 0) return '0';
  let text: string;
  if (size >= 1e6 || size < 1e-4) {
    text = size
      .toExponential(Math.max(0, digits - 1))
      .replace('e', '·10^')
      .replace('^+', '^');
  } else {
    const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
    text = size.toFixed(decimals);
  }
  return value < 0 && Number(text.replace('·10^', 'e')) !== 0 ? MINUS + text : text;
}

/** Writes an SI value in a unit of its dimension (the usual one unless named), with the unit's symbol. */
export function formatQuantity(si: number, dimension: Dimension, symbol?: string, digits = 3): string {
  const shown = unitFor(dimension, symbol);
  const number = formatNumber(fromSI(si, dimension, shown.symbol), digits);
  return shown.symbol === ''
    ? number
    : shown.symbol === '°' || shown.symbol === '%'
      ? number + shown.symbol
      : `${number} ${shown.symbol}`;
}
