/** How the cells of a log are written. */
export type Delimiter = ',' | ';' | '\t' | '|' | ' ';
export type DecimalMark = '.' | ',';

export const DELIMITERS: readonly Delimiter[] = ['\t', ';', ',', '|', ' '];

/** Byte offsets of the cells of one row; reused from row to row. */
export interface RowCells {
  count: number;
  /** 2 a cell: from and to in the buffer, quotes stripped. */
  readonly bounds: Int32Array;
  /** Where the next row starts; -1 when the buffer ends before the row does. */
  next: number;
  /** Physical lines the row took (a quoted cell may hold line ends). */
  lines: number;
  /** False when the row ran to the end of the input inside an open quote. */
  isClosed: boolean;
}

export const createRowCells = (mostColumns: number): RowCells => ({
  count: 0,
  bounds: new Int32Array(2 * mostColumns),
  next: 0,
  lines: 1,
  isClosed: true,
});

const LF = 10;
const CR = 13;
const QUOTE = 34;
const SPACE = 32;

/**
 * Splits the row that starts at `from` into cells.
 *
 * papaparse was tried on paper and dropped: its types pull node into the core, it makes a string of every cell
 * (ten million rows of four columns would make forty million strings), and it cannot say at which byte a row
 * ended. This is the RFC 4180 grammar with LF, CR LF or CR as line end, as a state machine over bytes.
 *
 * @param bytes   buffer, valid up to `end`
 * @param isLast  true when nothing follows `end`: the row may end there
 * @param out     count goes past the capacity when a row has too many cells (the surplus is not stored)
 *
 * A doubled quote inside a quoted cell stays doubled in the bytes: only text cells can hold one.
 */
export function splitRow(
  bytes: Uint8Array,
  from: number,
  end: number,
  delimiter: number,
  isLast: boolean,
  out: RowCells,
): void {
  const bounds = out.bounds;
  const capacity = bounds.length;
  const isSpaced = delimiter === SPACE;
  let count = 0;
  let i = from;
  out.lines = 1;
  out.isClosed = true;
  for (;;) {
    if (isSpaced) while (i < end && bytes[i] === SPACE) i++;
    if (isSpaced && count > 0 && (i >= end || bytes[i] === LF || bytes[i] === CR)) {
      if (finishRow(bytes, i, end, isLast, out)) break;
      return;
    }
    let cellFrom = i;
    let cellTo: number;
    if (i < end && bytes[i] === QUOTE) {
      cellFrom = ++i;
      for (; i < end; i++) {
        if (bytes[i] === QUOTE) {
          if (i + 1 < end && bytes[i + 1] === QUOTE) i++;
          else break;
        } else if (bytes[i] === LF || (bytes[i] === CR && bytes[i + 1] !== LF)) out.lines++;
      }
      cellTo = i;
      if (i >= end) {
        out.next = isLast ? end : -1;
        out.isClosed = false;
        if (!isLast) return;
      } else i++;
      while (i < end && bytes[i] !== delimiter && bytes[i] !== LF && bytes[i] !== CR) i++;
    } else {
      for (; i < end; i++) {
        const b = bytes[i];
        if (b === delimiter || b === LF || b === CR) break;
      }
      cellTo = i;
    }
    if (2 * count < capacity) {
      bounds[2 * count] = cellFrom;
      bounds[2 * count + 1] = cellTo;
    }
    count++;
    if (i < end && bytes[i] === delimiter) {
      i++;
      continue;
    }
    if (finishRow(bytes, i, end, isLast, out)) break;
    return;
  }
  out.count = count;
}

/** Steps over the line end at i; false when more bytes are needed to know it. */
function finishRow(bytes: Uint8Array, i: number, end: number, isLast: boolean, out: RowCells): boolean {
  if (i >= end) {
    out.next = isLast ? end : -1;
    return isLast;
  }
  if (bytes[i] === CR) {
    if (i + 1 >= end && !isLast) {
      out.next = -1;
      return false;
    }
    out.next = i + 1 < end && bytes[i + 1] === LF ? i + 2 : i + 1;
    return true;
  }
  out.next = i + 1;
  return true;
}
