import {
  createRowCells,
  DELIMITERS,
  type DecimalMark,
  type Delimiter,
  type RowCells,
  splitRow,
} from './lineSplit';
import { type CellResult, readNumberCell } from './numberCell';
import { decodeUtf8 } from './utf8';

/** How a log is written, as guessed from its head or as told. */
export interface Dialect {
  readonly delimiter: Delimiter;
  readonly decimal: DecimalMark;
  readonly names: readonly string[];
  /** Unit text found in the header, '' where none. */
  readonly unitTexts: readonly string[];
  readonly hasHeader: boolean;
  /** Byte offset and line number (from 1) of the first row of numbers. */
  readonly dataOffset: number;
  readonly dataLine: number;
  readonly skippedLines: number;
}

export interface DialectChoice {
  readonly delimiter?: Delimiter;
  readonly decimal?: DecimalMark;
  readonly hasHeader?: boolean;
}

export type DialectOutcome =
  | { readonly kind: 'known'; readonly dialect: Dialect }
  | { readonly kind: 'refused'; readonly sentence: string };

interface HeadRow {
  readonly line: number;
  readonly offset: number;
  readonly cells: readonly string[];
  readonly numbers: number;
  readonly blanks: number;
  readonly isComment: boolean;
}

interface HeadView {
  readonly delimiter: Delimiter;
  readonly decimal: DecimalMark;
  readonly rows: readonly HeadRow[];
  readonly width: number;
  readonly score: number;
}

const HEAD_ROWS = 200;
const byteOf = (mark: string): number => mark.charCodeAt(0);

function readHead(
  bytes: Uint8Array,
  end: number,
  isLast: boolean,
  delimiter: Delimiter,
  decimal: DecimalMark,
  cells: RowCells,
): HeadView {
  const rows: HeadRow[] = [];
  const cell: CellResult = { kind: 'missing', value: 0 };
  let line = 1;
  let offset = 0;
  while (offset < end && rows.length < HEAD_ROWS) {
    splitRow(bytes, offset, end, byteOf(delimiter), isLast, cells);
    if (cells.next < 0) break;
    const stored = Math.min(cells.count, cells.bounds.length / 2);
    const texts: string[] = [];
    let numbers = 0;
    let blanks = 0;
    for (let c = 0; c < stored; c++) {
      const from = cells.bounds[2 * c];
      const to = cells.bounds[2 * c + 1];
      readNumberCell(bytes, from, to, byteOf(decimal), cell);
      if (cell.kind === 'number' || cell.kind === 'too-large') numbers++;
      else if (cell.kind === 'missing') blanks++;
      texts.push(decodeUtf8(bytes, from, Math.min(to, from + 200)).trim());
    }
    const isComment = /^(#|%|\/\/)/.test(texts[0] ?? '');
    const isBlank = texts.every((t) => t === '');
    if (!isBlank) rows.push({ line, offset, cells: texts, numbers, blanks, isComment });
    line += cells.lines;
    offset = cells.next;
  }
  return scoreHead(rows, delimiter, decimal);
}

/** Score: share of rows that have the usual width, times the share of their cells that are numbers. */
function scoreHead(rows: readonly HeadRow[], delimiter: Delimiter, decimal: DecimalMark): HeadView {
  const counts = new Map<number, number>();
  for (const row of rows) {
    if (!row.isComment && row.numbers > 0)
      counts.set(row.cells.length, (counts.get(row.cells.length) ?? 0) + 1);
  }
  let width = 0;
  let usual = 0;
  for (const [w, n] of counts) if (n > usual || (n === usual && w > width)) [width, usual] = [w, n];
  let numbers = 0;
  let cells = 0;
  for (const row of rows) {
    if (row.isComment || row.cells.length !== width || row.numbers === 0) continue;
    numbers += row.numbers + 0.9 * row.blanks;
    cells += width;
  }
  const plain = rows.filter((r) => !r.isComment).length;
  // "1,5" is two columns before it is one with a decimal comma: a log of one column is rare.
  const rarity = width === 1 ? 0.5 : 1;
  const score = cells > 0 ? rarity * (usual / plain) * (numbers / cells) : 0;
  return { delimiter, decimal, rows, width, score };
}

/**
 * Guesses delimiter, decimal mark, header and units row from the head of a log.
 *
 * @param bytes   head of the file, byte-order mark removed
 * @param end     valid bytes
 * @param isLast  whether the file ends there
 * @param choice  what the user has fixed; the rest is guessed
 *
 * Every pairing of delimiter and decimal mark is tried and the one that makes most cells numbers is taken; between
 * equals the one with more columns. O(head) for each of nine pairings.
 */
export function guessDialect(
  bytes: Uint8Array,
  end: number,
  isLast: boolean,
  choice: DialectChoice,
  mostColumns: number,
): DialectOutcome {
  const cells = createRowCells(mostColumns);
  let best: HeadView | undefined;
  for (const delimiter of choice.delimiter ? [choice.delimiter] : DELIMITERS) {
    for (const decimal of choice.decimal ? [choice.decimal] : (['.', ','] as const)) {
      if (decimal === delimiter) continue;
      const view = readHead(bytes, end, isLast, delimiter, decimal, cells);
      const isBetter =
        !best ||
        view.score > best.score + 1e-9 ||
        (Math.abs(view.score - best.score) <= 1e-9 && view.width > best.width);
      if (isBetter) best = view;
    }
  }
  if (!best || best.rows.length === 0)
    return { kind: 'refused', sentence: 'The log is empty: it holds no line with anything in it.' };
  if (best.width === 0) {
    const first = best.rows[0];
    const shown = first.cells.join(best.delimiter).slice(0, 60);
    return {
      kind: 'refused',
      sentence:
        best.rows.length === 1
          ? `The log has a header and no rows: line ${first.line} reads "${shown}" and nothing follows.`
          : `The log holds no row of numbers: line ${first.line} starts with "${shown}", and so it goes on for ${best.rows.length} lines.`,
    };
  }
  return { kind: 'known', dialect: describeHead(best, choice) };
}

function describeHead(view: HeadView, choice: DialectChoice): Dialect {
  const { rows, width } = view;
  const first = rows.findIndex(
    (r) => !r.isComment && r.cells.length === width && 2 * (r.numbers + r.blanks) >= width && r.numbers > 0,
  );
  const firstData = Math.max(0, first);
  const above: HeadRow[] = [];
  for (let i = firstData - 1; i >= 0 && above.length < 2; i--) {
    if (rows[i].cells.length !== width) break;
    above.unshift(rows[i]);
    if (rows[i].isComment) break;
  }
  const hasHeader = choice.hasHeader ?? above.length > 0;
  let names: readonly string[] = [];
  let units: readonly string[] = [];
  if (hasHeader && above.length > 0) {
    const unitsRow = above.length === 2 && above[1].cells.every((c) => c.length <= 12) ? above[1] : undefined;
    names = (unitsRow ? above[0] : above[above.length - 1]).cells;
    units = unitsRow ? unitsRow.cells : [];
  }
  const parts = Array.from({ length: width }, (_, c) => splitName(names[c] ?? '', c));
  return {
    delimiter: view.delimiter,
    decimal: view.decimal,
    names: makeUnique(parts.map((p) => p.name)),
    unitTexts: parts.map((p, c) => (units[c] ? units[c].replace(/^[[(]\s*|\s*[\])]$/g, '') : p.unit)),
    hasHeader: hasHeader && names.length > 0,
    dataOffset: rows[firstData].offset,
    dataLine: rows[firstData].line,
    skippedLines: firstData - (hasHeader ? above.length : 0),
  };
}

/** "roll [deg]" and "roll (deg)" are the name roll and the unit deg. */
function splitName(raw: string, column: number): { name: string; unit: string } {
  const clean = raw
    .replace(/^(#|%|\/\/)\s*/, '')
    .replaceAll('""', '"')
    .trim();
  const match = /^(.*?)\s*[[(]([^\])]*)[\])]$/.exec(clean);
  const name = (match ? match[1] : clean).trim();
  return { name: name === '' ? `column ${column + 1}` : name, unit: match ? match[2].trim() : '' };
}

function makeUnique(names: readonly string[]): string[] {
  const seen = new Map<string, number>();
  return names.map((name) => {
    const n = (seen.get(name) ?? 0) + 1;
    seen.set(name, n);
    return n === 1 ? name : `${name} (${n})`;
  });
}
