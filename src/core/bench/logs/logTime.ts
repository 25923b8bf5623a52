import { median } from '../statistics';

export type TimeUnit = 's' | 'ms' | 'us';

export const TIME_UNITS: Readonly<Record<TimeUnit, number>> = { s: 1, ms: 1e-3, us: 1e-6 };

export interface TimeUnitGuess {
  readonly unit: TimeUnit;
  /** False when another unit would make sense too: ask. */
  readonly isCertain: boolean;
  readonly reason: string;
}

/** What stamps became: seconds from the first, strictly rising, and which row of the log each came from. */
export interface LogClock {
  readonly time: Float64Array;
  /** Row of the log behind each stamp; undefined when every row was kept in place. */
  readonly order: Uint32Array | undefined;
  /** s, middle value of the steps. */
  readonly step: number;
  readonly remarks: readonly string[];
}

export type ClockOutcome =
  | { readonly kind: 'timed'; readonly clock: LogClock }
  | { readonly kind: 'refused'; readonly sentence: string };

const COUNTER_TURN = 2 ** 32;
/** A stamp that leaps by more than this many steps, and the next leaps back, is a misread stamp. */
const LEAP = 100;

function middleStep(raw: Float64Array): number {
  const steps: number[] = [];
  const stride = Math.max(1, Math.floor(raw.length / 20_000));
  for (let i = 1; i < raw.length; i += stride) {
    const d = raw[i] - raw[i - 1];
    if (d > 0) steps.push(d);
  }
  return median(steps);
}

/**
 * Guesses the unit of time stamps from the header, else from the size of the stamps and of their steps.
 *
 * @param raw      stamps as logged
 * @param name     column name
 * @param unitText unit in the header, '' when none
 */
export function guessTimeUnit(raw: Float64Array, name: string, unitText = ''): TimeUnitGuess {
  const named = `${unitText} ${name}`.toLowerCase();
  const says = (unit: TimeUnit): TimeUnitGuess => ({
    unit,
    isCertain: true,
    reason: `the header says so ("${unitText || name}")`,
  });
  if (/(^|[\s_])(us|µs|μs|usec|micros?|microseconds?)($|[\s_])/.test(named)) return says('us');
  if (/(^|[\s_])(ms|msec|millis?|milliseconds?)($|[\s_])/.test(named)) return says('ms');
  if (/(^|[\s_])(s|sec|secs|seconds?)($|[\s_])/.test(named)) return says('s');
  const first = Math.abs(raw[0]);
  if (first > 1e14)
    return { unit: 'us', isCertain: true, reason: 'the stamps are as large as microseconds since 1970' };
  if (first > 1e11 && first < 1e13)
    return { unit: 'ms', isCertain: true, reason: 'the stamps are as large as milliseconds since 1970' };
  const step = middleStep(raw);
  let isWhole = true;
  for (let i = 0; i < Math.min(raw.length, 1000) && isWhole; i++)
    isWhole = Number.isInteger(raw[i]) || Number.isNaN(raw[i]);
  const each = `the stamps step by ${Number(step.toPrecision(3))}`;
  if (!isWhole || step < 0.5) {
    if (step < 0.5) return { unit: 's', isCertain: step < 0.2, reason: `${each}, with decimals` };
    return { unit: step > 50 ? 'us' : 'ms', isCertain: false, reason: `${each}, with decimals` };
  }
  if (step >= 200) return { unit: 'us', isCertain: step < 50_000, reason: `${each} in whole numbers` };
  return { unit: 'ms', isCertain: step >= 2 && step <= 50, reason: `${each} in whole numbers` };
}

/**
 * Turns raw stamps into a rising clock.
 *
 * Handled, and each reported in a sentence: rows with no stamp are left out; a 32-bit counter that turned over is
 * carried on; a lone stamp that leaps away and back is left out; where the clock starts anew the longest run is
 * kept; rows out of order are sorted; of rows with one and the same stamp the first is kept.
 *
 * @param raw   stamps as logged, in `unit`
 * @param unit  their unit
 * @param line  line number of the first row, for the sentences
 * O(n) for stamps in order, O(n log n) otherwise.
 */
export function readClock(raw: Float64Array, unit: TimeUnit, line = 2): ClockOutcome {
  const remarks: string[] = [];
  const step = middleStep(raw);
  if (!(step > 0)) {
    return {
      kind: 'refused',
      sentence: `The time column does not rise: its first stamps are ${[...raw.subarray(0, 3)].join(', ')} (line ${line} on).`,
    };
  }
  const stamps = Float64Array.from(raw);
  let rows = dropBadStamps(stamps, step, line, remarks);
  rows = keepLongestRun(stamps, rows, step, line, remarks);
  rows = sortRows(stamps, rows, line, remarks);
  rows = dropDuplicates(stamps, rows, line, remarks);
  if (rows.length < 2) return { kind: 'refused', sentence: 'Fewer than two different time stamps are left.' };
  const scale = TIME_UNITS[unit];
  const time = new Float64Array(rows.length);
  for (let i = 0; i < rows.length; i++) time[i] = (stamps[rows[i]] - stamps[rows[0]]) * scale;
  noteGaps(time, step * scale, rows, line, remarks);
  const isWhole = rows.length === raw.length && rows.every((r, i) => r === i);
  return { kind: 'timed', clock: { time, order: isWhole ? undefined : rows, step: step * scale, remarks } };
}

function dropBadStamps(stamps: Float64Array, step: number, line: number, remarks: string[]): Uint32Array {
  const kept = new Uint32Array(stamps.length);
  let n = 0;
  let blanks = 0;
  let firstBlank = 0;
  let leaps = 0;
  let firstLeap = 0;
  let turns = 0;
  let last = Number.NaN;
  for (let i = 0; i < stamps.length; i++) {
    if (Number.isNaN(stamps[i])) {
      if (blanks++ === 0) firstBlank = i;
      continue;
    }
    stamps[i] += turns * COUNTER_TURN;
    if (stamps[i] - last < -COUNTER_TURN / 2 && last - turns * COUNTER_TURN <= COUNTER_TURN) {
      turns++;
      stamps[i] += COUNTER_TURN;
    }
    const next = i + 1 < stamps.length ? stamps[i + 1] + turns * COUNTER_TURN : Number.NaN;
    const leapsAway = Math.abs(stamps[i] - last) > LEAP * step && next >= last && next - last <= LEAP * step;
    if (leapsAway) {
      if (leaps++ === 0) firstLeap = i;
      continue;
    }
    last = stamps[i];
    kept[n++] = i;
  }
  if (blanks > 0)
    remarks.push(
      `${blanks} rows with no time stamp left out, the first at row ${firstBlank + 1} (about line ${line + firstBlank}).`,
    );
  if (turns > 0)
    remarks.push(
      `The 32-bit time counter turned over ${turns === 1 ? 'once' : `${turns} times`} and was carried on.`,
    );
  if (leaps > 0)
    remarks.push(
      `${leaps} stamps leap away and back and are left out, the first ${stamps[firstLeap]} at row ${firstLeap + 1} (about line ${line + firstLeap}).`,
    );
  return kept.subarray(0, n);
}

function keepLongestRun(
  stamps: Float64Array,
  rows: Uint32Array,
  step: number,
  line: number,
  remarks: string[],
): Uint32Array {
  let bestFrom = 0;
  let bestTo = 0;
  let from = 0;
  let runs = 1;
  let firstRestart = 0;
  for (let i = 1; i <= rows.length; i++) {
    const isRestart = i < rows.length && stamps[rows[i]] < stamps[rows[i - 1]] - LEAP * step;
    if (i < rows.length && !isRestart) continue;
    if (i - from > bestTo - bestFrom) [bestFrom, bestTo] = [from, i];
    if (isRestart) {
      if (runs++ === 1) firstRestart = rows[i];
      from = i;
    }
  }
  if (runs > 1) {
    remarks.push(
      `The clock starts anew ${runs - 1} times, first at row ${firstRestart + 1} (about line ${line + firstRestart}, stamp ${stamps[firstRestart]}): the longest run of ${bestTo - bestFrom} rows is kept.`,
    );
  }
  return rows.subarray(bestFrom, bestTo);
}

function sortRows(stamps: Float64Array, rows: Uint32Array, line: number, remarks: string[]): Uint32Array {
  let late = 0;
  let firstLate = 0;
  for (let i = 1; i < rows.length; i++) {
    if (stamps[rows[i]] < stamps[rows[i - 1]] && late++ === 0) firstLate = rows[i];
  }
  if (late === 0) return rows;
  remarks.push(
    `${late} rows come out of order, the first with stamp ${stamps[firstLate]} at row ${firstLate + 1} (about line ${line + firstLate}): rows were sorted by time.`,
  );
  return Uint32Array.from(rows).sort((a, b) => stamps[a] - stamps[b] || a - b);
}

function dropDuplicates(
  stamps: Float64Array,
  rows: Uint32Array,
  line: number,
  remarks: string[],
): Uint32Array {
  let n = 0;
  let twice = 0;
  let firstTwice = 0;
  const kept = new Uint32Array(rows.length);
  for (let i = 0; i < rows.length; i++) {
    if (n > 0 && stamps[rows[i]] === stamps[kept[n - 1]]) {
      if (twice++ === 0) firstTwice = rows[i];
      continue;
    }
    kept[n++] = rows[i];
  }
  if (twice > 0)
    remarks.push(
      `${twice} rows repeat a time stamp, the first ${stamps[firstTwice]} at row ${firstTwice + 1} (about line ${line + firstTwice}): the first of each is kept.`,
    );
  return kept.subarray(0, n);
}

function noteGaps(
  time: Float64Array,
  step: number,
  rows: Uint32Array,
  line: number,
  remarks: string[],
): void {
  let gaps = 0;
  let longest = 0;
  let at = 0;
  for (let i = 1; i < time.length; i++) {
    const d = time[i] - time[i - 1];
    if (d <= 1.5 * step) continue;
    gaps++;
    if (d > longest) [longest, at] = [d, i];
  }
  if (gaps > 0) {
    remarks.push(
      `Rows are missing in ${gaps} places; the longest gap is ${Number(longest.toPrecision(4))} s at ${Number(time[at - 1].toPrecision(6))} s (about line ${line + rows[at]}).`,
    );
  }
}
