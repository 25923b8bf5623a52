/** The log that is open at the bench: its columns, what they are, the part that is looked at, its shift to the plan. */
import { create } from 'zustand';
import type { AlignmentOutcome, ColumnMapping, LogQuantity } from '../../../core/bench';
import { type Bencher, createBencher, type LogMapping, type LogOpening } from '../../../workers';
import { useNotices } from '../../state/notices';
import { recallMapping, rememberMapping } from './mappingStore';
import { predictionOf } from './prediction';

type Opened = Extract<LogOpening, { kind: 'open' }>;
type Mapped = Extract<LogMapping, { kind: 'mapped' }>;

/** s, of the log's own clock. */
export interface Span {
  readonly from: number;
  readonly to: number;
}

export interface OpenLog {
  /** Counts up with each log, so that what was asked of an older one is told apart. */
  readonly serial: number;
  readonly file: string;
  readonly opened: Opened;
  readonly mapping: ColumnMapping;
  readonly isRecalled: boolean;
  /** Undefined while the mapping as it stands is refused. */
  readonly mapped: Mapped | undefined;
  readonly refusal: string | undefined;
  readonly cut: Span;
  /** s to add to the log's clock so that it lies on the plan; undefined until it is aligned. */
  readonly shift: number | undefined;
  readonly alignment: AlignmentOutcome | undefined;
}

interface Reading {
  readonly file: string;
  /** 0 to 1. */
  readonly fraction: number;
  readonly rows: number;
}

interface BenchLogState {
  readonly log: OpenLog | undefined;
  readonly reading: Reading | undefined;
}

export const useBenchLog = create<BenchLogState>()(() => ({ log: undefined, reading: undefined }));

/** The worker that holds the open log, and the one that reads the next. */
let holder: Bencher | undefined;
let reader: Bencher | undefined;
let serial = 0;

/** The worker with the open log. */
export const logHolder = (): Bencher | undefined => holder;

const because = (error: unknown): string => (error instanceof Error ? error.message : String(error));

const refuse = (file: string, sentence: string): void =>
  useNotices.getState().show({
    id: 'bench-log',
    kind: 'fault',
    sentences: [`${file} was not opened.`, sentence, 'The bench is as it was.'],
  });

/** Reads a log in a worker of its own; only one that can be used takes the place of the log before it. */
export async function openLog(file: File): Promise<void> {
  cancelReading();
  const mine = createBencher();
  reader = mine;
  useBenchLog.setState({ reading: { file: file.name, fraction: 0, rows: 0 } });
  try {
    const opened = await mine.open(file, ({ fraction, rows }) => {
      if (reader === mine)
        useBenchLog.setState({ reading: { file: file.name, fraction: fraction ?? 0, rows } });
    });
    if (reader !== mine) return mine.close();
    if (opened.kind === 'refused') {
      cancelReading();
      return refuse(file.name, opened.sentence);
    }
    const recalled = await recallMapping(opened.names);
    const mapping = recalled ?? opened.suggestion;
    const outcome = await mine.calls.map(mapping);
    if (reader !== mine) return mine.close();
    reader = undefined;
    holder?.close();
    holder = mine;
    useNotices.getState().dismiss('bench-log');
    serial++;
    useBenchLog.setState({
      reading: undefined,
      log: {
        serial,
        file: file.name,
        opened,
        mapping,
        isRecalled: recalled !== undefined,
        ...whatItMapsTo(outcome),
        shift: undefined,
        alignment: undefined,
      },
    });
  } catch (error) {
    if (reader !== mine) return;
    cancelReading();
    refuse(file.name, `It could not be read: ${because(error)}.`);
  }
}

const whatItMapsTo = (outcome: LogMapping): Pick<OpenLog, 'mapped' | 'refusal' | 'cut'> =>
  outcome.kind === 'mapped'
    ? { mapped: outcome, refusal: undefined, cut: { from: outcome.from, to: outcome.to } }
    : { mapped: undefined, refusal: outcome.sentence, cut: { from: 0, to: 0 } };

/** Breaks off the reading under way; the log that was open stays. */
export function cancelReading(): void {
  reader?.close();
  reader = undefined;
  useBenchLog.setState({ reading: undefined });
}

export function closeLog(): void {
  holder?.close();
  holder = undefined;
  useBenchLog.setState({ log: undefined });
}

const change = (part: Partial<OpenLog>): void =>
  useBenchLog.setState(({ log }) => ({ log: log && { ...log, ...part } }));

/** Says which column is what; remembered for the next log with the same columns. */
export async function chooseMapping(mapping: ColumnMapping): Promise<void> {
  const { log } = useBenchLog.getState();
  if (!log || !holder) return;
  change({ mapping, isRecalled: false });
  const outcome = await holder.calls.map(mapping);
  if (useBenchLog.getState().log?.mapping !== mapping) return;
  const next = whatItMapsTo(outcome);
  const isSameClock =
    next.mapped && log.mapped && next.mapped.from === log.mapped.from && next.mapped.to === log.mapped.to;
  change({
    ...next,
    ...(isSameClock ? { cut: log.cut } : { shift: undefined, alignment: undefined }),
  });
  if (outcome.kind === 'mapped') void rememberMapping(log.opened.names, mapping);
}

/** Looks at a part only; the whole again without a span. */
export function cutLog(span?: Span): void {
  const mapped = useBenchLog.getState().log?.mapped;
  if (!mapped) return;
  const from = Math.max(mapped.from, Math.min(span?.from ?? mapped.from, mapped.to));
  const to = Math.min(mapped.to, Math.max(span?.to ?? mapped.to, from));
  // A tap is no cut.
  if (to - from < 2 * mapped.step) return;
  change({ cut: { from, to } });
}

/** Lays the log on the plan by what both have of one quantity. */
export async function alignLog(quantity: LogQuantity): Promise<void> {
  const { log } = useBenchLog.getState();
  const plan = predictionOf(quantity);
  if (!log || !holder) return;
  if (!plan) {
    change({
      alignment: { kind: 'refused', sentence: 'The preview has no such quantity: choose another.' },
      shift: undefined,
    });
    return;
  }
  const alignment = await holder.calls.align(quantity, log.cut.from, log.cut.to, plan);
  if (useBenchLog.getState().log?.serial !== log.serial) return;
  change({ alignment, shift: alignment.kind === 'aligned' ? alignment.shift : undefined });
}
