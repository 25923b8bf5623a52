import Papa from 'papaparse';
import { createLogReader, readLog } from '../../src/core/bench';
import { makeLongLog, rollOf } from '../../tests/support/longLog';
import type { Row } from './row';

const MB = 1e6;
const median = (values: number[]): number => values.sort((a, b) => a - b)[values.length >> 1];
/** Typed arrays and heap together, MB. */
const held = (): number => {
  const m = process.memoryUsage();
  return (m.arrayBuffers + m.heapUsed) / MB;
};

function readWhole(pieces: Iterable<Uint8Array>): {
  rows: number;
  seconds: number;
  lastRoll: number;
  peak: number;
  table: number;
} {
  const before = held();
  const reader = createLogReader({ totalBytes: 200 * MB });
  let nanoseconds = 0n;
  let peak = 0;
  let count = 0;
  for (const piece of pieces) {
    const start = process.hrtime.bigint();
    reader.push(piece);
    nanoseconds += process.hrtime.bigint() - start;
    if (count++ % 64 === 0) peak = Math.max(peak, held() - before - (16 * reader.progress().rows) / MB);
  }
  const start = process.hrtime.bigint();
  const outcome = reader.finish();
  nanoseconds += process.hrtime.bigint() - start;
  if (outcome.kind !== 'read') throw new Error('the log was not read');
  const { table } = outcome;
  return {
    rows: table.rows,
    seconds: Number(nanoseconds) / 1e9,
    lastRoll: table.columns[1][table.rows - 1],
    peak,
    table: (16 * table.rows) / MB,
  };
}

/** Reading a 200 MB log: time, memory beyond the columns themselves, and speed against a general CSV reader. */
export async function run(): Promise<Row[]> {
  const whole = readWhole(makeLongLog(200 * MB));
  if (whole.lastRoll !== rollOf(whole.rows - 1) / 1e5) throw new Error('the last row was read wrong');

  const pieces = [...makeLongLog(4 * MB)];
  const text = Buffer.concat(pieces).toString('latin1');
  const ours: number[] = [];
  const theirs: number[] = [];
  for (let k = 0; k < 5; k++) {
    ours.push(readWhole(pieces).seconds);
    const start = process.hrtime.bigint();
    const parsed = Papa.parse<number[]>(text, { dynamicTyping: true, skipEmptyLines: true });
    theirs.push(Number(process.hrtime.bigint() - start) / 1e9);
    if (parsed.data.length < 1000) throw new Error('the peer read nothing');
  }

  let pushed = 0;
  const cancelled = await readLog(
    makeLongLog(20 * MB),
    {},
    () => pushed++,
    () => pushed >= 10,
  );
  return [
    {
      name: 'log of 200 MB: rows',
      value: whole.rows,
      unit: '',
      target: 'about ten million',
      ok: whole.rows > 9e6,
    },
    { name: 'log of 200 MB: time to read', value: whole.seconds, unit: 's' },
    { name: 'log of 200 MB: columns themselves', value: whole.table, unit: 'MB' },
    {
      name: 'log of 200 MB: most memory beyond the columns',
      value: whole.peak,
      unit: 'MB',
      target: 'below 64 MB',
      ok: whole.peak < 64,
    },
    {
      name: 'log reading against papaparse, 4 MB',
      value: median(theirs) / median(ours),
      unit: 'times as fast',
      target: 'not slower',
      ok: median(theirs) >= median(ours),
    },
    {
      name: 'pieces read after cancel was asked at the 10th',
      value: pushed - 10,
      unit: '',
      target: '0',
      ok: cancelled.kind === 'cancelled' && pushed === 10,
    },
  ];
}
