import type { Dialect } from './dialect';
import type { CellKind } from './numberCell';
import { decodeUtf8 } from './utf8';

/** One thing wrong with one place of a log, in a sentence that names line, column and value. */
export interface LogIssue {
  readonly line: number;
  readonly column: string;
  readonly value: string;
  readonly sentence: string;
}

/** Collects what a log does wrong while it is read: the first few in words, the rest as counts. */
export interface LogFindings {
  readonly issues: readonly LogIssue[];
  noteBadCell(line: number, column: number, kind: CellKind, value: string): void;
  noteMissing(column: number): void;
  noteWidth(line: number, count: number): void;
  noteCutLine(line: number, count: number): void;
  noteHeaderAgain(line: number): void;
  noteComment(): void;
  noteZeroTail(line: number): void;
  isTextColumn(column: number, rows: number): boolean;
  refuse(rows: number, kept: readonly number[]): string | undefined;
  remarks(rows: number, kept: readonly number[]): string[];
}

const MOST_ISSUES = 20;

/** A cell as it can be shown: control characters spelt out, at most 40 characters. */
export function showValue(bytes: Uint8Array, from: number, to: number): string {
  const text = decodeUtf8(bytes, from, Math.min(to, from + 40));
  let shown = '';
  for (const ch of text) {
    const code = ch.charCodeAt(0);
    shown += code < 32 || code === 127 ? `\\x${code.toString(16).padStart(2, '0')}` : ch;
  }
  return to - from > 40 ? `${shown}...` : shown;
}

const count = (n: number, one: string, many: string): string => `${n} ${n === 1 ? one : many}`;

export function createLogFindings(dialect: Dialect): LogFindings {
  const width = dialect.names.length;
  const bad = new Float64Array(width);
  const missing = new Float64Array(width);
  const firstBad: (LogIssue | undefined)[] = new Array(width).fill(undefined);
  const issues: LogIssue[] = [];
  const tail: string[] = [];
  let badRows = 0;
  let wrongWidth = 0;
  let firstWrongWidth = '';
  let headersAgain = 0;
  let comments = 0;
  let lastBadLine = -1;

  const add = (issue: LogIssue): void => {
    if (issues.length < MOST_ISSUES) issues.push(issue);
  };
  const isTextColumn = (column: number, rows: number): boolean => 2 * bad[column] > rows;
  return {
    issues,
    noteBadCell(line, column, kind, value) {
      bad[column]++;
      if (line !== lastBadLine) badRows++;
      lastBadLine = line;
      if (firstBad[column] && issues.length >= MOST_ISSUES) return;
      const name = dialect.names[column];
      const why =
        kind === 'too-large' ? 'is too large for a measurement (the limit is 1e100)' : 'is no number';
      const issue = {
        line,
        column: name,
        value,
        sentence: `Line ${line}, column "${name}": "${value}" ${why}.`,
      };
      firstBad[column] ??= issue;
      add(issue);
    },
    noteMissing(column) {
      missing[column]++;
    },
    noteWidth(line, n) {
      wrongWidth++;
      const isShort = n < width;
      if (firstWrongWidth && issues.length >= MOST_ISSUES) return;
      const column = isShort ? dialect.names[n] : `column ${width + 1}`;
      const what = isShort ? 'the rest is left empty' : 'the surplus is left out';
      const sentence = `Line ${line} has ${count(n, 'cell', 'cells')} where ${width} are expected, from column "${column}" on: ${what}.`;
      firstWrongWidth ||= sentence;
      add({ line, column, value: String(n), sentence });
    },
    noteCutLine(line, n) {
      const column = dialect.names[n];
      const sentence = `Line ${line}, the last, is cut short before column "${column}" (${count(n, 'cell', 'cells')} of ${width}): it is left out.`;
      add({ line, column, value: String(n), sentence });
      tail.push(sentence);
    },
    noteHeaderAgain(line) {
      headersAgain++;
      if (headersAgain === 1) tail.push(`The header comes again at line ${line}: the logger was restarted.`);
    },
    noteComment() {
      comments++;
    },
    noteZeroTail(line) {
      tail.push(
        `From line ${line} on the file holds zero bytes, as a logger that lost power leaves them: reading stopped there.`,
      );
    },
    isTextColumn,
    refuse(rows, kept) {
      if (rows === 0)
        return `The log holds no row of numbers: line ${dialect.dataLine} is the first that was looked at.`;
      if (kept.every((c) => isTextColumn(c, rows))) {
        return `No column of the log holds numbers. ${firstBad[kept[0]]?.sentence ?? ''}`.trim();
      }
      if (2 * wrongWidth > rows) {
        return `Most lines do not have the ${width} cells of the first (${wrongWidth} of ${rows}). ${firstWrongWidth}`.trim();
      }
      return undefined;
    },
    remarks(rows, kept) {
      const out: string[] = [];
      if (dialect.skippedLines > 0)
        out.push(`${count(dialect.skippedLines, 'line', 'lines')} above the header left out.`);
      if (!dialect.hasHeader) out.push('The log has no header: columns are numbered from the left.');
      if (width === 1)
        out.push(
          `The log has one column, "${dialect.names[0]}", and so no time stamps: give the sample rate.`,
        );
      for (const c of kept) {
        if (isTextColumn(c, rows))
          out.push(
            `Column "${dialect.names[c]}" is left out: most of it is no number. ${firstBad[c]?.sentence}`,
          );
        else if (bad[c] > 0)
          out.push(
            `Column "${dialect.names[c]}" has ${count(bad[c], 'cell', 'cells')} that cannot be read. ${firstBad[c]?.sentence}`,
          );
        if (missing[c] > 0)
          out.push(
            `Column "${dialect.names[c]}" has ${count(missing[c], 'cell', 'cells')} missing of ${rows}.`,
          );
      }
      if (wrongWidth > 0)
        out.push(
          `${count(wrongWidth, 'line has', 'lines have')} too few or too many cells. ${firstWrongWidth}`.trim(),
        );
      if (headersAgain > 1) out.push(`The header comes ${headersAgain} more times.`);
      if (comments > 0) out.push(`${count(comments, 'comment line', 'comment lines')} left out.`);
      if (badRows > 0)
        out.push(`${count(badRows, 'row has', 'rows have')} at least one cell that cannot be read.`);
      out.push(...tail);
      return out;
    },
  };
}
