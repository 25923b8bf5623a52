/**
 * Off the main thread: bench logs and what is made of them. One instance holds the log that is open; others fit, so
 * that a fit can be broken off by ending its worker while the log stays.
 */
import { expose, transfer } from 'comlink';
import {
  type AlignmentOutcome,
  alignSamples,
  applyMapping,
  type BenchLog,
  type ColumnMapping,
  createLogReader,
  cutSamples,
  findInstant,
  findMarks,
  type Identification,
  type IdentifyRequest,
  identifyLog,
  identifyPendulum,
  type LogProgress,
  type LogQuantity,
  type LogTable,
  type OrderOutcome,
  type PendulumOptions,
  type PendulumSetup,
  type PeriodSource,
  type Retuning,
  retune,
  type Samples,
  suggestMapping,
  trackOrder,
} from '../core/bench';
import type { Rig } from '../core/rig';
import { createEvaluationWork } from '../core/trial';
import { type BenchGivens, benchGivens, type GainList, listGains } from './benchGivens';
import { buffersOf } from './buffers';
import { type CurveView, reduceCurve } from './curveView';

/** What opening a log comes to: all of it but the numbers, which stay here. */
export type LogOpening =
  | {
      readonly kind: 'open';
      readonly dialect: LogTable['dialect'];
      readonly names: readonly string[];
      readonly unitTexts: readonly string[];
      readonly rows: number;
      /** What the reader had to put up with, in sentences. */
      readonly remarks: readonly string[];
      readonly suggestion: ColumnMapping;
    }
  | { readonly kind: 'refused'; readonly sentence: string };

export type LogMapping =
  | {
      readonly kind: 'mapped';
      readonly quantities: readonly LogQuantity[];
      /** s, of the log's own clock. */
      readonly from: number;
      readonly to: number;
      readonly step: number;
      readonly rows: number;
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentence: string };

let table: LogTable | undefined;
let log: BenchLog | undefined;

/** Bytes after which progress is told again. */
const PROGRESS_STEP = 4 * 1024 * 1024;

async function open(file: Blob, tell: (progress: LogProgress) => void): Promise<LogOpening> {
  const reader = createLogReader({ totalBytes: file.size });
  const source = file.stream().getReader();
  let told = 0;
  for (;;) {
    const { done, value } = await source.read();
    if (done) break;
    const goesOn = reader.push(value);
    const progress = reader.progress();
    if (progress.bytes - told >= PROGRESS_STEP) {
      told = progress.bytes;
      tell(progress);
    }
    if (!goesOn) {
      await source.cancel();
      break;
    }
  }
  const outcome = reader.finish();
  if (outcome.kind === 'cancelled') return { kind: 'refused', sentence: 'Reading was broken off.' };
  if (outcome.kind === 'refused') return outcome;
  table = outcome.table;
  log = undefined;
  const { dialect, names, unitTexts, rows } = table;
  const issues = outcome.issues.map(({ sentence }) => sentence);
  return {
    kind: 'open',
    dialect,
    names,
    unitTexts,
    rows,
    remarks: [...new Set([...outcome.remarks, ...issues])],
    suggestion: suggestMapping(table),
  };
}

function map(mapping: ColumnMapping): LogMapping {
  if (!table) return { kind: 'refused', sentence: 'No log is open.' };
  const outcome = applyMapping(table, mapping);
  if (outcome.kind === 'refused') return outcome;
  log = outcome.log;
  const { time, step, quantities, remarks } = log;
  return {
    kind: 'mapped',
    quantities: Object.keys(quantities) as LogQuantity[],
    from: time[0] as number,
    to: time[time.length - 1] as number,
    step,
    rows: time.length,
    remarks,
  };
}

const samplesOf = (quantity: LogQuantity): Samples | undefined => {
  const values = log?.quantities[quantity];
  return log && values ? { time: log.time, values } : undefined;
};

/** Least and greatest value of each pixel's stretch, so that ten million readings draw as fast as a thousand. */
function view(quantity: LogQuantity, from: number, to: number, pixels: number): CurveView | undefined {
  const samples = samplesOf(quantity);
  if (!samples) return undefined;
  const reduced = reduceCurve(samples, from, to, pixels);
  return transfer(reduced, [reduced.time.buffer, reduced.values.buffer] as ArrayBuffer[]);
}

function align(quantity: LogQuantity, from: number, to: number, plan: Samples): AlignmentOutcome {
  const samples = samplesOf(quantity);
  if (!samples) return { kind: 'refused', sentence: 'The log has no such column.' };
  return alignSamples(cutSamples(samples, from, to), plan);
}

/** The part of the open log between two instants, as copies that may be handed to another worker. */
function cut(from: number, to: number): BenchLog | undefined {
  if (!log) return undefined;
  const first = findInstant(log.time, from);
  let last = findInstant(log.time, to);
  if (last < log.time.length) last++;
  const quantities: Partial<Record<LogQuantity, Float64Array>> = {};
  for (const [name, values] of Object.entries(log.quantities))
    quantities[name as LogQuantity] = values.slice(first, last);
  const part: BenchLog = { ...log, time: log.time.slice(first, last), quantities };
  return transfer(part, buffersOf(part));
}

/** Vibration at wheel speed in the open log, against its mark. */
function readTurns(quantity: LogQuantity, from: number, to: number): OrderOutcome {
  const signal = samplesOf(quantity);
  const mark = samplesOf('turnMark');
  if (!signal) return { kind: 'refused', sentence: 'The log has no column of vibration: say which it is.' };
  if (!mark)
    return { kind: 'refused', sentence: 'The log has no column of the once-per-turn mark: say which it is.' };
  const { time, values } = cutSamples(signal, from, to);
  if (time.length < 2) return { kind: 'refused', sentence: 'The cut holds no readings.' };
  return trackOrder(time, values, findMarks(time, cutSamples(mark, from, to).values));
}

const identify = (part: BenchLog, request: IdentifyRequest): Identification => identifyLog(part, request);

const timePendulum = (setup: PendulumSetup, source: PeriodSource, options: PendulumOptions): Identification =>
  identifyPendulum(setup, source, options);

const calls = {
  open,
  map,
  view,
  align,
  cut,
  readTurns,
  identify,
  timePendulum,
  givens: (rig: Rig): BenchGivens | undefined => benchGivens(rig),
  gains: (rig: Rig): GainList => listGains(rig),
  retune: (before: Rig, after: Rig): Retuning =>
    retune(
      before,
      after,
      createEvaluationWork(() => performance.now() / 1000),
    ),
};

export type BenchCalls = typeof calls;

expose(calls);
