/**
 * What a device says, a line at a time.
 *
 * CSV:   a header line of names ("t,roll,tilt"), then lines of as many numbers ("0.010,0.021,-0.11"). The header may come
 *        again at any time; after a reconnection the old one holds until it does.
 * JSON:  one object a line, names to numbers ({"t":0.010,"roll":0.021}). The first object fixes the names; others may leave
 *        names out (missing) but not bring new ones.
 * Notes: a line that starts with # is shown and kept, not parsed.
 * Answers to numbered commands, in either format: "<7,ok" or "<7,no,reason".
 */
export type DeviceLine =
  | { readonly kind: 'header'; readonly names: readonly string[]; readonly isChange: boolean }
  | { readonly kind: 'sample'; readonly values: Float64Array }
  | { readonly kind: 'note'; readonly text: string }
  | { readonly kind: 'answer'; readonly id: number; readonly isDone: boolean; readonly reason: string }
  | { readonly kind: 'bad'; readonly sentence: string };

export interface LineReader {
  readonly names: readonly string[];
  read(text: string): DeviceLine;
}

const ANSWER = /^<(\d+),(ok|no)(?:,(.*))?$/;
const shorten = (text: string): string => (text.length > 60 ? `${text.slice(0, 60)}...` : text);

/** Reads lines of either format, told apart by their first character; `lineNumber` counts for the sentences. */
export function createLineReader(): LineReader {
  let names: readonly string[] = [];
  let line = 0;
  const bad = (why: string): DeviceLine => ({ kind: 'bad', sentence: `Line ${line}: ${why}` });

  const setNames = (next: readonly string[]): DeviceLine => {
    const empty = next.indexOf('');
    if (empty >= 0) return bad(`the header has no name in column ${empty + 1}.`);
    const twice = next.find((n, i) => next.indexOf(n) !== i);
    if (twice !== undefined) return bad(`the header names "${twice}" twice.`);
    const isChange =
      names.length > 0 && (next.length !== names.length || next.some((n, i) => n !== names[i]));
    names = next;
    return { kind: 'header', names, isChange };
  };
  const readJson = (text: string): DeviceLine => {
    let value: unknown;
    try {
      value = JSON.parse(text);
    } catch {
      return bad(`"${shorten(text)}" is no whole JSON object.`);
    }
    if (typeof value !== 'object' || value === null || Array.isArray(value))
      return bad(`"${shorten(text)}" is no JSON object.`);
    const entries = Object.entries(value);
    const wrong = entries.find(([, v]) => v !== null && typeof v !== 'number');
    if (wrong) return bad(`"${wrong[0]}" is ${shorten(JSON.stringify(wrong[1]))}, which is no number.`);
    if (names.length === 0) names = entries.map(([k]) => k);
    const unknown = entries.find(([k]) => !names.includes(k));
    if (unknown)
      return bad(`"${unknown[0]}" is not among the names of the first object (${names.join(', ')}).`);
    const values = new Float64Array(names.length).fill(Number.NaN);
    for (const [k, v] of entries) if (typeof v === 'number') values[names.indexOf(k)] = v;
    return { kind: 'sample', values };
  };
  const readCsv = (text: string): DeviceLine => {
    const cells = text.split(',').map((c) => c.trim());
    const first = cells.find((c) => c !== '');
    if (first !== undefined && /^[A-Za-z_]/.test(first) && !/^(nan|inf)/i.test(first)) return setNames(cells);
    if (names.length === 0) return bad(`numbers before any header: "${shorten(text)}".`);
    if (cells.length !== names.length)
      return bad(`${cells.length} cells where the header has ${names.length}: "${shorten(text)}".`);
    const values = new Float64Array(cells.length);
    for (let i = 0; i < cells.length; i++) {
      const cell = cells[i];
      values[i] =
        cell === '' || /^nan$/i.test(cell)
          ? Number.NaN
          : /^[+-]?[\d.]/.test(cell)
            ? Number(cell)
            : Number.POSITIVE_INFINITY;
      const isRead = Number.isNaN(values[i])
        ? cell === '' || /^nan$/i.test(cell)
        : Number.isFinite(values[i]);
      if (!isRead) return bad(`column "${names[i]}" is "${shorten(cell)}", which is no number.`);
    }
    return { kind: 'sample', values };
  };
  return {
    get names() {
      return names;
    },
    read(text) {
      line++;
      const answer = ANSWER.exec(text.trim());
      if (answer)
        return { kind: 'answer', id: Number(answer[1]), isDone: answer[2] === 'ok', reason: answer[3] ?? '' };
      if (text.startsWith('#')) return { kind: 'note', text: text.slice(1).trim() };
      if (text.startsWith('{')) return readJson(text);
      return readCsv(text);
    },
  };
}
