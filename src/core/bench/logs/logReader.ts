import { type ColumnStore, createColumnStore } from './columnStore';
import { type Dialect, type DialectChoice, guessDialect } from './dialect';
import { findForeignFile } from './fileKind';
import { createRowCells, splitRow } from './lineSplit';
import { createLogFindings, type LogFindings, type LogIssue, showValue } from './logFindings';
import { type CellResult, readNumberCell } from './numberCell';
import { decodeUtf8, encodeUtf8 } from './utf8';

export interface LogOptions extends DialectChoice {
  /** Names of the columns to keep; all when absent. Those left out take no memory. */
  readonly keep?: readonly string[];
  /** Whole length, if known, for a progress fraction. */
  readonly totalBytes?: number;
  readonly longestLine?: number;
  readonly mostColumns?: number;
}

/** A log in columns: one Float64Array a column, NaN where a cell was missing or no number. */
export interface LogTable {
  readonly names: readonly string[];
  readonly unitTexts: readonly string[];
  readonly columns: readonly Float64Array[];
  readonly rows: number;
  readonly dialect: Dialect;
}

export interface LogProgress {
  readonly rows: number;
  readonly bytes: number;
  /** 0 to 1, or undefined when the whole length is not known. */
  readonly fraction: number | undefined;
}

export type LogOutcome =
  | {
      readonly kind: 'read';
      readonly table: LogTable;
      readonly remarks: readonly string[];
      readonly issues: readonly LogIssue[];
    }
  | { readonly kind: 'refused'; readonly sentence: string }
  | { readonly kind: 'cancelled'; readonly rows: number };

export interface LogReader {
  /** Takes the next piece of the file; false once the log is refused and the rest need not be sent. */
  push(chunk: Uint8Array | string): boolean;
  progress(): LogProgress;
  finish(): LogOutcome;
}

const HEAD_BYTES = 65_536;
const WORK_BYTES = 262_144;
const LONGEST_LINE = 1_048_576;
const MOST_COLUMNS = 1024;

/**
 * Reads a log of any length fed in pieces of any size.
 *
 * @param options  what is known of the log; the rest is guessed from its first 64 KiB
 * @returns a reader; finish() gives the table, or one sentence that names line, column and value
 *
 * Memory: 8 bytes a kept cell, plus a work buffer of 256 KiB (up to the longest line allowed, 1 MiB). O(bytes).
 */
export function createLogReader(options: LogOptions = {}): LogReader {
  const longestLine = options.longestLine ?? LONGEST_LINE;
  const mostColumns = options.mostColumns ?? MOST_COLUMNS;
  let buffer = new Uint8Array(WORK_BYTES);
  let held = 0;
  let bytesSeen = 0;
  let refusal: string | undefined;
  let rows: RowReader | undefined;
  let hasEnded = false;

  const openHead = (isLast: boolean): void => {
    const foreign = findForeignFile(buffer, held);
    if (foreign) {
      refusal = foreign;
      return;
    }
    const bom = held >= 3 && buffer[0] === 0xef && buffer[1] === 0xbb && buffer[2] === 0xbf ? 3 : 0;
    if (bom) {
      buffer.copyWithin(0, bom, held);
      held -= bom;
    }
    const guess = guessDialect(buffer, held, isLast, options, mostColumns);
    if (guess.kind === 'refused') {
      refusal = isLast || held < longestLine ? guess.sentence : `Line 1 is longer than ${longestLine} bytes.`;
      return;
    }
    rows = createRowReader(guess.dialect, options.keep, mostColumns, longestLine);
    if (rows.refusal) refusal = rows.refusal;
    consume(guess.dialect.dataOffset);
  };
  const consume = (n: number): void => {
    buffer.copyWithin(0, n, held);
    held -= n;
  };
  const work = (isLast: boolean): void => {
    if (!rows && !refusal) openHead(isLast);
    if (!rows || refusal || hasEnded) return;
    const outcome = rows.read(buffer, held, isLast);
    consume(outcome.used);
    if (outcome.refusal) refusal = outcome.refusal;
    if (outcome.hasEnded) hasEnded = true;
    if (held === buffer.length) {
      const larger = new Uint8Array(buffer.length * 2);
      larger.set(buffer);
      buffer = larger;
    }
  };

  return {
    push(chunk) {
      const bytes = typeof chunk === 'string' ? encodeUtf8(chunk) : chunk;
      bytesSeen += bytes.length;
      let from = 0;
      while (from < bytes.length && !refusal && !hasEnded) {
        const take = Math.min(bytes.length - from, buffer.length - held);
        buffer.set(bytes.subarray(from, from + take), held);
        held += take;
        from += take;
        if (held === buffer.length || (!rows && held >= HEAD_BYTES)) work(false);
      }
      return !refusal && !hasEnded;
    },
    progress: () => ({
      rows: rows?.store.rows ?? 0,
      bytes: bytesSeen,
      fraction: options.totalBytes ? Math.min(1, bytesSeen / options.totalBytes) : undefined,
    }),
    finish() {
      if (!refusal && bytesSeen === 0) refusal = 'The log is empty: the file has no bytes.';
      if (!refusal) work(true);
      if (!refusal && rows) {
        const outcome = rows.finish();
        if (outcome.kind === 'refused') refusal = outcome.sentence;
        else return outcome;
      }
      return {
        kind: 'refused',
        sentence: refusal ?? 'The log is empty: it holds no line with anything in it.',
      };
    },
  };
}

interface RowReader {
  readonly store: ColumnStore;
  readonly refusal: string | undefined;
  read(
    bytes: Uint8Array,
    end: number,
    isLast: boolean,
  ): { used: number; refusal: string | undefined; hasEnded: boolean };
  finish(): LogOutcome;
}

function createRowReader(
  dialect: Dialect,
  keep: readonly string[] | undefined,
  mostColumns: number,
  longestLine: number,
): RowReader {
  const width = dialect.names.length;
  const kept = dialect.names.map((_, c) => c).filter((c) => !keep || keep.includes(dialect.names[c]));
  const absent = keep?.find((name) => !dialect.names.includes(name));
  const store = createColumnStore(kept.length);
  const findings = createLogFindings(dialect);
  const delimiter = dialect.delimiter.charCodeAt(0);
  const decimal = dialect.decimal.charCodeAt(0);
  const row = new Float64Array(kept.length);
  const cells = createRowCells(mostColumns);
  const cell: CellResult = { kind: 'missing', value: 0 };
  let line = dialect.dataLine;

  const takeRow = (bytes: Uint8Array, isCut: boolean): void => {
    const bounds = cells.bounds;
    if (cells.count === 1 && bounds[1] - bounds[0] === 0) return;
    if (bytes[bounds[0]] === 35 || bytes[bounds[0]] === 37) {
      findings.noteComment();
      return;
    }
    if (dialect.hasHeader && isHeaderAgain(bytes)) {
      findings.noteHeaderAgain(line);
      return;
    }
    if (cells.count < width && isCut) {
      findings.noteCutLine(line, cells.count);
      return;
    }
    if (cells.count !== width) findings.noteWidth(line, cells.count);
    for (let k = 0; k < kept.length; k++) {
      const c = kept[k];
      row[k] = Number.NaN;
      if (c >= cells.count) continue;
      readNumberCell(bytes, bounds[2 * c], bounds[2 * c + 1], decimal, cell);
      if (cell.kind === 'number') row[k] = cell.value;
      else if (cell.kind === 'missing') findings.noteMissing(c);
      else findings.noteBadCell(line, c, cell.kind, showValue(bytes, bounds[2 * c], bounds[2 * c + 1]));
    }
    store.append(row);
  };
  const isHeaderAgain = (bytes: Uint8Array): boolean => {
    const from = cells.bounds[0];
    const b = bytes[from] | 32;
    if (b < 97 || b > 122 || cells.count !== width) return false;
    return decodeUtf8(bytes, from, Math.min(cells.bounds[1], from + 200))
      .trim()
      .startsWith(dialect.names[0]);
  };

  return {
    store,
    refusal:
      absent === undefined
        ? undefined
        : `The log has no column "${absent}": it has ${dialect.names.join(', ')}.`,
    read(bytes, end, isLast) {
      let at = 0;
      while (at < end) {
        if (bytes[at] === 0) {
          findings.noteZeroTail(line);
          return { used: at, refusal: undefined, hasEnded: true };
        }
        splitRow(bytes, at, end, delimiter, isLast, cells);
        if (cells.next < 0) break;
        if (!cells.isClosed)
          return {
            used: at,
            refusal: `Line ${line} opens a quote (") that is never closed.`,
            hasEnded: true,
          };
        if (cells.count > mostColumns) {
          return {
            used: at,
            refusal: `Line ${line} has ${cells.count} columns; at most ${mostColumns} can be read.`,
            hasEnded: true,
          };
        }
        if (cells.next - at > longestLine) {
          return { used: at, refusal: `Line ${line} is longer than ${longestLine} bytes.`, hasEnded: true };
        }
        const ends = bytes[cells.next - 1];
        takeRow(bytes, isLast && cells.next === end && ends !== 10 && ends !== 13);
        line += cells.lines;
        at = cells.next;
      }
      const left = end - at;
      const refusal =
        left > longestLine
          ? `Line ${line} is longer than ${longestLine} bytes${cells.isClosed ? ' with no line end' : ': it opens a quote (") that is not closed'}.`
          : undefined;
      return { used: at, refusal, hasEnded: false };
    },
    finish: () => finishTable(dialect, kept, store, findings),
  };
}

function finishTable(
  dialect: Dialect,
  kept: readonly number[],
  store: ColumnStore,
  findings: LogFindings,
): LogOutcome {
  const rows = store.rows;
  const refusal = findings.refuse(rows, kept);
  if (refusal) return { kind: 'refused', sentence: refusal };
  const columns = store.take();
  const numeric = kept.map((c, k) => ({ c, k })).filter(({ c }) => !findings.isTextColumn(c, rows));
  return {
    kind: 'read',
    table: {
      names: numeric.map(({ c }) => dialect.names[c]),
      unitTexts: numeric.map(({ c }) => dialect.unitTexts[c]),
      columns: numeric.map(({ k }) => columns[k]),
      rows,
      dialect,
    },
    remarks: findings.remarks(rows, kept),
    issues: findings.issues,
  };
}

/**
 * Reads a whole log from a stream, with progress and a way to stop between pieces.
 *
 * @param chunks       pieces of the file in order
 * @param onProgress   called after each piece
 * @param isCancelled  asked before each piece; true ends the reading and drops what was read
 */
export async function readLog(
  chunks: AsyncIterable<Uint8Array | string> | Iterable<Uint8Array | string>,
  options: LogOptions = {},
  onProgress?: (progress: LogProgress) => void,
  isCancelled?: () => boolean,
): Promise<LogOutcome> {
  const reader = createLogReader(options);
  for await (const chunk of chunks) {
    if (isCancelled?.()) return { kind: 'cancelled', rows: reader.progress().rows };
    const goesOn = reader.push(chunk);
    onProgress?.(reader.progress());
    if (!goesOn) break;
  }
  if (isCancelled?.()) return { kind: 'cancelled', rows: reader.progress().rows };
  return reader.finish();
}
