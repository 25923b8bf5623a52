import { describe, expect, it } from 'vitest';
import { alignSamples } from '../../../src/core/bench/alignment';
import {
  applyMapping,
  findWrittenUnit,
  mappingKey,
  suggestMapping,
} from '../../../src/core/bench/logs/columnMapping';
import {
  createLogReader,
  type LogProgress,
  type LogTable,
  readLog,
} from '../../../src/core/bench/logs/logReader';
import { guessTimeUnit, readClock } from '../../../src/core/bench/logs/logTime';
import { averageBlocks, cutSamples, resampleEvenly } from '../../../src/core/bench/resampling';
import { expectClose } from '../../support/closeTo';
import { createSeededStream } from '../../support/seededStream';

const clockOf = (stamps: number[], unit: 's' | 'ms' | 'us' = 's') => {
  const outcome = readClock(Float64Array.from(stamps), unit);
  if (outcome.kind === 'refused') throw new Error(outcome.sentence);
  return outcome.clock;
};
const ramp = (n: number, step: number, from = 0): number[] =>
  Array.from({ length: n }, (_, i) => from + i * step);
const tableOf = (text: string): LogTable => {
  const reader = createLogReader();
  reader.push(text);
  const outcome = reader.finish();
  if (outcome.kind !== 'read') throw new Error('not read');
  return outcome.table;
};

describe('time stamps', () => {
  it('units: from the header, from the size, from the step; told when unsure', () => {
    const guess = (stamps: number[], name = 't', unit = '') =>
      guessTimeUnit(Float64Array.from(stamps), name, unit);
    expect(guess(ramp(50, 10), 'time', 'ms')).toMatchObject({ unit: 'ms', isCertain: true });
    expect(guess(ramp(50, 1000), 'micros')).toMatchObject({ unit: 'us', isCertain: true });
    expect(guess(ramp(50, 0.01))).toMatchObject({ unit: 's', isCertain: true });
    expect(guess(ramp(50, 10))).toMatchObject({ unit: 'ms', isCertain: true });
    expect(guess(ramp(50, 1000))).toMatchObject({ unit: 'us', isCertain: true });
    expect(guess(ramp(50, 10, 1.7e12))).toMatchObject({ unit: 'ms', isCertain: true });
    expect(guess(ramp(50, 1000, 1.7e15))).toMatchObject({ unit: 'us', isCertain: true });
    expect(guess(ramp(50, 1))).toMatchObject({ isCertain: false });
  });
  it('in order: nothing is touched', () => {
    const clock = clockOf(ramp(10, 20, 5000), 'ms');
    expect(clock.order).toBeUndefined();
    expect(clock.remarks).toEqual([]);
    expectClose(clock.time, ramp(10, 0.02), { abs: 1e-12 });
  });
  it('out of order: sorted, and said', () => {
    const clock = clockOf([0, 1, 3, 2, 4, 5]);
    expect([...clock.time]).toEqual([0, 1, 2, 3, 4, 5]);
    expect([...(clock.order as Uint32Array)]).toEqual([0, 1, 3, 2, 4, 5]);
    expect(clock.remarks.join()).toMatch(
      /1 rows come out of order, the first with stamp 2 at row 4 \(about line 5\)/,
    );
  });
  it('duplicated: the first is kept, and said', () => {
    const clock = clockOf([0, 1, 1, 1, 2, 3]);
    expect([...(clock.order as Uint32Array)]).toEqual([0, 1, 4, 5]);
    expect(clock.remarks.join()).toMatch(/2 rows repeat a time stamp, the first 1 at row 3/);
  });
  it('a 32-bit counter that turns over is carried on', () => {
    const clock = clockOf([2 ** 32 - 2000, 2 ** 32 - 1000, 0, 1000, 2000], 'us');
    expectClose(clock.time, [0, 1e-3, 2e-3, 3e-3, 4e-3], { abs: 1e-12 });
    expect(clock.remarks.join()).toMatch(/turned over once/);
  });
  it('a lone stamp that leaps away is left out; missing stamps are left out; gaps are told', () => {
    const stamps = ramp(400, 1);
    stamps[100] = 9e5;
    stamps[200] = Number.NaN;
    for (let i = 300; i < 400; i++) stamps[i] += 50;
    const clock = clockOf(stamps);
    expect(clock.time.length).toBe(398);
    expect(clock.remarks.join('\n')).toMatch(
      /1 rows with no time stamp.*row 201[\s\S]*leap away.*900000 at row 101[\s\S]*longest gap is 51 s at 299 s/,
    );
  });
  it('where the clock starts anew the longest run is kept', () => {
    const clock = clockOf([...ramp(300, 1), ...ramp(500, 1)]);
    expect(clock.time.length).toBe(500);
    expect(clock.remarks.join()).toMatch(/starts anew 1 times, first at row 301.*longest run of 500 rows/);
  });
  it('refuses stamps that never rise', () => {
    expect(readClock(Float64Array.from([5, 5, 5]), 's')).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not rise.*5, 5, 5/),
    });
  });
});

describe('columns', () => {
  const table = tableOf(
    'time_ms;roll [deg];gyro_x (dps);servo_cmd;wheel rpm;battery\n0;1,5;2;0,1;5000;x\n10;2,5;4;0,2;5001;y\n20;3,5;6;0,3;5002;z\n',
  );
  it('are proposed by name and unit', () => {
    const mapping = suggestMapping(table);
    expect(mapping).toMatchObject({ time: 'time_ms', timeUnit: 'ms' });
    expect(mapping.columns).toEqual([
      { column: 'roll', quantity: 'roll', unit: 'deg' },
      { column: 'gyro_x', quantity: 'rollRate', unit: '°/s' },
      { column: 'servo_cmd', quantity: 'tiltCommand', unit: '°' },
      { column: 'wheel rpm', quantity: 'wheelSpeed', unit: 'rpm' },
    ]);
  });
  it('become SI on one clock', () => {
    const outcome = applyMapping(table, suggestMapping(table));
    if (outcome.kind === 'refused') throw new Error(outcome.sentence);
    expectClose(outcome.log.time, [0, 0.01, 0.02], { abs: 1e-12 });
    expectClose(
      outcome.log.quantities.roll as Float64Array,
      [1.5, 2.5, 3.5].map((d) => (d * Math.PI) / 180),
      { rel: 1e-14 },
    );
    expectClose(
      outcome.log.quantities.wheelSpeed as Float64Array,
      [5000, 5001, 5002].map((r) => (r * Math.PI) / 30),
      { rel: 1e-14 },
    );
  });
  it('a wrong mapping is refused by name, and leaves the table as it was', () => {
    const columns = [{ column: 'roll', quantity: 'roll', unit: 'furlong' }] as const;
    expect(applyMapping(table, { time: 'time_ms', timeUnit: 'ms', columns })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/"roll": "furlong" is no unit of roll; use °, rad/),
    });
    expect(applyMapping(table, { time: 'when', timeUnit: 's', columns: [] })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/no time column "when"/),
    });
    expect(applyMapping(table, { time: undefined, timeUnit: 's', columns: [] })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/sample rate/),
    });
    expect(mappingKey(['T', ' roll '])).toBe(mappingKey(['t', 'roll']));
    expect(findWrittenUnit('angularRate', 'deg/s')).toBe('°/s');
    expect(findWrittenUnit('angle', 'bar')).toBeUndefined();
  });
});

describe('reading with progress and cancel', () => {
  const chunks = function* (count: number) {
    yield 't,roll\n';
    for (let k = 0; k < count; k++)
      yield Array.from({ length: 5000 }, (_, i) => `${(k * 5000 + i) / 1000},${i}.5\n`).join('');
  };
  it('reports progress that only rises, and reads all', async () => {
    const seen: LogProgress[] = [];
    const outcome = await readLog(chunks(20), { totalBytes: 1_500_000 }, (p) => seen.push(p));
    expect(outcome.kind === 'read' && outcome.table.rows).toBe(100_000);
    expect(seen.length).toBe(21);
    for (let i = 1; i < seen.length; i++) expect(seen[i].bytes).toBeGreaterThan(seen[i - 1].bytes);
    expect(seen[20].fraction).toBeGreaterThan(0.7);
  });
  it('stops between pieces when asked to', async () => {
    let pieces = 0;
    const outcome = await readLog(
      chunks(20),
      {},
      () => pieces++,
      () => pieces >= 5,
    );
    expect(outcome.kind).toBe('cancelled');
    expect(pieces).toBe(5);
  });
  it('keeps only the columns asked for', async () => {
    const outcome = await readLog(chunks(2), { keep: ['roll'] });
    expect(outcome.kind === 'read' && outcome.table.names).toEqual(['roll']);
  });
});

describe('cutting, resampling, aligning', () => {
  const time = Float64Array.from(ramp(1000, 0.01));
  const wave = (t: number): number =>
    Math.sin(2 * t) + 0.5 * Math.sin(5.3 * t + 1) + Math.tanh((t - 4) / 0.1);
  it('cuts with both ends in, and thins by averages', () => {
    const cut = cutSamples({ time, values: time }, 1, 2);
    expect([cut.time[0], cut.time[cut.time.length - 1], cut.time.length]).toEqual([1, 2, 101]);
    const thin = averageBlocks({ time, values: time }, 300);
    expect(thin.time.length).toBe(250);
    expectClose(thin.values, thin.time, { abs: 1e-12 });
  });
  it('bridges short gaps and leaves long ones empty', () => {
    const values = time.map((t, i) => ((i > 100 && i < 104) || (i > 500 && i < 600) ? Number.NaN : 3 * t));
    const even = resampleEvenly({ time, values }, 0.005, 0.01, 999, 0.06);
    expectClose(even[101], 3 * 1.015, { rel: 1e-12 });
    expect(Number.isNaN(even[550])).toBe(true);
  });
  it('finds the shift to a fraction of a step, through noise and another rate', () => {
    const stream = createSeededStream(11);
    const plan = { time, values: time.map(wave) };
    const late = Float64Array.from({ length: 500 }, (_, i) => 100 + i * 0.0137);
    const log = {
      time: late,
      values: late.map((t) => 0.3 * wave(t - 100 + 1.2345) + 4 + 0.02 * stream.normal()),
    };
    const outcome = alignSamples(log, plan);
    if (outcome.kind === 'refused') throw new Error(outcome.sentence);
    expectClose(outcome.shift, 1.2345 - 100, { abs: 0.003 }); // measured 5e-4
    expect(outcome.correlation).toBeGreaterThan(0.98);
    expect(outcome.remarks).toEqual([]);
  });
  it('warns when the signal repeats, refuses when it is flat or foreign', () => {
    const plan = { time, values: time.map((t) => Math.sin(10 * t)) };
    const part = cutSamples(plan, 3, 6);
    const outcome = alignSamples(part, plan);
    expect(outcome.kind === 'aligned' && outcome.remarks.join()).toMatch(/repeats itself/);
    expect(alignSamples({ time, values: time.map(() => 2) }, plan)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/log does not vary/),
    });
    const stream = createSeededStream(3);
    expect(alignSamples({ time, values: time.map(() => stream.normal()) }, plan, 0.9)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not look like the plan/),
    });
  });
});
