import { decodeUtf8 } from './utf8';

/** A cell that holds nothing: empty, NaN, null, n/a, a dash. */
export const MISSING = Number.NaN;

/** Beyond this no sensor measures anything; such a cell is a fault of the logger, and its square would overflow. */
export const LARGEST_CELL = 1e100;

export type CellKind = 'number' | 'missing' | 'text' | 'too-large';

/** One cell read: reused by the reader, so that ten million rows make no garbage. */
export interface CellResult {
  kind: CellKind;
  value: number;
}

const TENS = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));
const MISSING_WORDS = new Set(['', 'nan', '-nan', 'null', 'none', 'na', 'n/a', '-', '--', '#n/a']);
const NUMBER_SHAPE = /^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i;

/**
 * Reads one cell as a number, straight from bytes.
 *
 * @param bytes    buffer
 * @param from, to cell is bytes [from, to); blanks at either end are ignored
 * @param decimal  byte of the decimal mark, 46 '.' or 44 ','
 * @param out      kind and value; value is NaN unless kind is 'number'
 *
 * Up to 15 digits and a power of ten up to 22 are both exact in a double, so one multiplication or division is
 * correctly rounded (Clinger 1990, How to Read Floating Point Numbers Accurately); the rest goes through Number.
 * O(length), allocates only off the fast path.
 */
export function readNumberCell(
  bytes: Uint8Array,
  from: number,
  to: number,
  decimal: number,
  out: CellResult,
): void {
  while (from < to && (bytes[from] === 32 || bytes[from] === 9)) from++;
  while (to > from && (bytes[to - 1] === 32 || bytes[to - 1] === 9)) to--;
  let i = from;
  let negative = false;
  if (i < to && (bytes[i] === 45 || bytes[i] === 43)) {
    negative = bytes[i] === 45;
    i++;
  }
  let mantissa = 0;
  let digits = 0;
  let seen = 0;
  let scale = 0;
  for (; i < to; i++) {
    const d = bytes[i] - 48;
    if (d < 0 || d > 9) break;
    seen++;
    if (digits > 0 || d > 0) digits++;
    mantissa = mantissa * 10 + d;
  }
  if (i < to && bytes[i] === decimal) {
    i++;
    for (; i < to; i++) {
      const d = bytes[i] - 48;
      if (d < 0 || d > 9) break;
      seen++;
      if (digits > 0 || d > 0) digits++;
      mantissa = mantissa * 10 + d;
      scale--;
    }
  }
  if (seen > 0 && i < to && (bytes[i] === 101 || bytes[i] === 69)) {
    let j = i + 1;
    let sign = 1;
    if (j < to && (bytes[j] === 45 || bytes[j] === 43)) {
      sign = bytes[j] === 45 ? -1 : 1;
      j++;
    }
    let exponent = 0;
    const first = j;
    for (; j < to && bytes[j] >= 48 && bytes[j] <= 57; j++)
      exponent = Math.min(exponent * 10 + bytes[j] - 48, 99999);
    if (j > first) {
      scale += sign * exponent;
      i = j;
    }
  }
  if (i === to && seen > 0 && digits <= 15 && scale >= -22 && scale <= 22) {
    const size = scale < 0 ? mantissa / TENS[-scale] : mantissa * TENS[scale];
    out.kind = 'number';
    out.value = negative ? -size : size;
    return;
  }
  readSlowly(bytes, from, to, decimal, out);
}

function readSlowly(bytes: Uint8Array, from: number, to: number, decimal: number, out: CellResult): void {
  out.value = MISSING;
  let text = decodeUtf8(bytes, from, Math.min(to, from + 400)).trim();
  if (MISSING_WORDS.has(text.toLowerCase())) {
    out.kind = 'missing';
    return;
  }
  if (decimal === 44) text = text.includes('.') ? '?' : text.replace(',', '.');
  if (to - from > 400 || !NUMBER_SHAPE.test(text)) {
    out.kind = /^[+-]?inf(inity)?$/i.test(text) ? 'too-large' : 'text';
    return;
  }
  const value = Number(text);
  if (Math.abs(value) > LARGEST_CELL) out.kind = 'too-large';
  else {
    out.kind = 'number';
    out.value = value;
  }
}
