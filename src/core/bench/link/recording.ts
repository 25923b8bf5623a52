import { type ColumnStore, createColumnStore } from '../logs/columnStore';
import { createLineAssembler } from './lineAssembler';
import { createLineReader, type DeviceLine } from './lineFormat';

/** A live recording: every line received is a row, an answer, a note, a bad line or a fragment; their counts add up. */
export interface LiveRecording {
  /** Takes bytes; the lines they complete come back, for answers and for the live plot. */
  push(bytes: Uint8Array): readonly DeviceLine[];
  /** The connection is gone. The recording goes on when bytes come again. */
  breakOff(): void;
  readonly counts: RecordingCounts;
  readonly names: readonly string[];
  readonly rows: number;
  /** One column by name from row `from` on; undefined when there is none. */
  read(name: string, from: number): Float64Array | undefined;
  /** First few sentences about lines that could not be used. */
  readonly faults: readonly string[];
}

export interface RecordingCounts {
  readonly lines: number;
  readonly rows: number;
  readonly answers: number;
  readonly headers: number;
  readonly notes: number;
  readonly bad: number;
  readonly fragments: number;
  readonly breaks: number;
  /** Lines missing by the counter column "n", if the device sends one. */
  readonly missing: number;
}

const MOST_FAULTS = 50;

/**
 * Records what a device sends. Where a column is called "n" it is taken as a counter that goes up by one a line, and gaps in
 * it are counted as lines the device sent and nobody received.
 */
export function createRecording(): LiveRecording {
  const assembler = createLineAssembler();
  const reader = createLineReader();
  const counts = {
    lines: 0,
    rows: 0,
    answers: 0,
    headers: 0,
    notes: 0,
    bad: 0,
    fragments: 0,
    breaks: 0,
    missing: 0,
  };
  const faults: string[] = [];
  let store: ColumnStore | undefined;
  let names: readonly string[] = [];
  let last = Number.NaN;
  const note = (sentence: string): void => {
    if (faults.length < MOST_FAULTS) faults.push(sentence);
  };
  const takeRow = (values: Float64Array): void => {
    if (!store) {
      names = reader.names;
      store = createColumnStore(names.length);
    }
    store.append(values);
    counts.rows++;
    const at = names.indexOf('n');
    if (at < 0) return;
    const n = values[at];
    if (n > last + 1) counts.missing += n - last - 1;
    last = n;
  };
  const take = (text: string, isWhole: boolean): DeviceLine | undefined => {
    if (!isWhole) {
      counts.fragments++;
      note(`The connection broke within a line: "${text.slice(0, 60)}" is all that came of it.`);
      return undefined;
    }
    counts.lines++;
    const line = reader.read(text);
    if (line.kind === 'sample') takeRow(line.values);
    else if (line.kind === 'answer') counts.answers++;
    else if (line.kind === 'note') counts.notes++;
    else if (line.kind === 'header') {
      counts.headers++;
      if (line.isChange && store)
        note(`The header changed to ${line.names.join(', ')}: start a new recording for it.`);
    } else {
      counts.bad++;
      note(line.sentence);
    }
    return line;
  };
  return {
    push(bytes) {
      const out: DeviceLine[] = [];
      for (const { text, isWhole } of assembler.push(bytes)) {
        const line = take(text, isWhole);
        if (line) out.push(line);
      }
      return out;
    },
    breakOff() {
      counts.breaks++;
      for (const { text } of assembler.breakOff()) take(text, false);
    },
    counts,
    get names() {
      return names;
    },
    get rows() {
      return store?.rows ?? 0;
    },
    read(name, from) {
      const at = names.indexOf(name);
      return at < 0 || !store ? undefined : store.slice(at, from, store.rows);
    },
    faults,
  };
}
