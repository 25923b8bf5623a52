/** Tables of numbers as text: what spreadsheets and loggers write for motion, read with a sentence for each thing wrong. */

export type NumberTable =
  | {
      readonly kind: 'table';
      /** As written; empty when the first row is numbers. */
      readonly header: readonly string[];
      readonly columns: number;
      /** Row after row. */
      readonly values: Float64Array;
      readonly rows: number;
    }
  | { readonly kind: 'refused'; readonly sentence: string };

const refuse = (sentence: string): NumberTable => ({ kind: 'refused', sentence });

/** Text longer than this is no table of motion. */
const LONGEST_TEXT = 32 * 1024 * 1024;
const NUMBER = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/;

/** What parts the cells of a line: tab, semicolon, comma, or spaces, the first of them that occurs. */
const separatorOf = (line: string): string | RegExp =>
  line.includes('\t') ? '\t' : line.includes(';') ? ';' : line.includes(',') ? ',' : /\s+/;

/**
 * Reads a table of numbers: cells parted by comma, semicolon, tab or spaces; where it is not a comma, numbers may
 * have a decimal comma. Blank lines and lines that start with # are passed over; one header line may come first.
 *
 * @returns the numbers, or the first thing wrong with its line and cell. O(text).
 */
export function readNumberTable(text: string): NumberTable {
  if (text.length > LONGEST_TEXT) {
    return refuse(`The table is ${text.length} characters long; at most ${LONGEST_TEXT} are read.`);
  }
  const lines = text.replace(/^\uFEFF/, '').split(/\r\n|\n|\r/);
  let separator: string | RegExp | undefined;
  let header: readonly string[] = [];
  let columns = 0;
  const values: number[] = [];
  let rows = 0;
  for (let i = 0; i < lines.length; i++) {
    const line = (lines[i] as string).trim();
    if (line === '' || line.startsWith('#')) continue;
    separator ??= separatorOf(line);
    const cells = line.split(separator).map((cell) => cell.trim().replace(/^"(.*)"$/, '$1'));
    const numbers = cells.map((cell) => (separator === ',' ? cell : cell.replace(',', '.')));
    const bad = numbers.findIndex((cell) => !(NUMBER.test(cell) && Number.isFinite(Number(cell))));
    if (bad >= 0 && rows === 0 && header.length === 0 && numbers.every((cell) => !NUMBER.test(cell))) {
      header = cells;
      columns = cells.length;
      continue;
    }
    if (columns === 0) columns = cells.length;
    if (cells.length !== columns) {
      return refuse(
        `Line ${i + 1}: ${cells.length} cells where ${columns} are expected, as in the line before.`,
      );
    }
    if (bad >= 0) return refuse(`Line ${i + 1}, cell ${bad + 1}: "${cells[bad]}" is not a number.`);
    for (const cell of numbers) values.push(Number(cell));
    rows++;
  }
  if (rows === 0) return refuse('The table holds no line of numbers.');
  return { kind: 'table', header, columns, values: Float64Array.from(values), rows };
}
