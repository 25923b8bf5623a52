/** Motion from files: keyframes of the feet, floor shakes and recorded moments, each a table of numbers with time first. */
import type { Refusal } from '../rig';
import { GROUND, type KeyframeGait, keyframeTracks } from './keyframes';
import { readNumberTable } from './numberTable';

export type KeyframeFile =
  | { readonly kind: 'read'; readonly gait: KeyframeGait }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

export type SeriesFile =
  | { readonly kind: 'read'; readonly interval: number; readonly values: readonly number[] }
  | { readonly kind: 'refused'; readonly sentence: string };

const refuse = (sentence: string): KeyframeFile => ({
  kind: 'refused',
  refusals: [{ field: 'jobs.gait', sentence }],
});

/** Most keyframes of a gait, and most samples of a series; the same bounds as in the rig file. */
const MOST_KEYFRAMES = 2000;
const MOST_SAMPLES = 200_000;
const FARTHEST = 50;
const LONGEST = 600;

/** Factor to SI of a column from the unit in its heading, such as `time (ms)`, `x_mm` or `FL x [cm]`; 1 for none. */
function unitFactor(heading: string | undefined): number {
  const unit = /(?:[([_ ])(ms|s|mm|cm|m|in)[)\]]?$/i.exec(heading?.trim() ?? '')?.[1]?.toLowerCase();
  return { ms: 1e-3, mm: 1e-3, cm: 1e-2, in: 0.0254, s: 1, m: 1 }[unit ?? 'm'] ?? 1;
}

/**
 * Reads keyframes: time, then x, y and z of each sole in the body frame, in leg order; seconds and metres unless
 * a heading ends in another unit (ms, mm, cm, in).
 *
 * @param legs  number of legs of the body
 * @returns a gait that `keyframeTracks` accepts, or sentences that name line, value, range and unit
 */
export function readKeyframes(text: string, legs: number): KeyframeFile {
  const table = readNumberTable(text);
  if (table.kind === 'refused') return refuse(table.sentence);
  const { columns, rows, values, header } = table;
  if (columns !== 1 + 3 * legs) {
    return refuse(
      `The table has ${columns} columns; ${legs} legs need ${1 + 3 * legs}: time, then x, y, z of each foot, left before right and front before back.`,
    );
  }
  if (rows < 2 || rows > MOST_KEYFRAMES) {
    return refuse(`The table has ${rows} keyframes; from 2 to ${MOST_KEYFRAMES} are allowed.`);
  }
  const factors = Array.from({ length: columns }, (_, i) => unitFactor(header[i]));
  const times: number[] = [];
  const feet: number[][] = [];
  for (let k = 0; k < rows; k++) {
    const row = Array.from(
      { length: columns },
      (_, i) => (values[k * columns + i] as number) * (factors[i] as number),
    );
    const [time, ...places] = row as [number, ...number[]];
    if (!(time >= 0 && time <= LONGEST)) {
      return refuse(`Keyframe ${k + 1}: time is ${time} s; from 0 to ${LONGEST} s is allowed.`);
    }
    const far = places.findIndex((x) => Math.abs(x) > FARTHEST);
    if (far >= 0) {
      return refuse(
        `Keyframe ${k + 1}, ${'xyz'[far % 3]} of foot ${Math.floor(far / 3) + 1}: ${places[far]} m; from -${FARTHEST} to ${FARTHEST} m is allowed. State the unit in the heading if it is not metres, such as x (mm).`,
      );
    }
    times.push(time);
    feet.push(places.map((x, i) => (i % 3 === 2 && Math.abs(x) <= GROUND ? 0 : x)));
  }
  const gait: KeyframeGait = { kind: 'keyframes', times, feet };
  const outcome = keyframeTracks(gait, legs);
  return outcome.kind === 'refused' ? outcome : { kind: 'read', gait };
}

/** Writes keyframes as a table that `readKeyframes` reads back to the same gait. */
export function writeKeyframes(gait: KeyframeGait, labels: readonly string[]): string {
  const heads = labels.flatMap((label) =>
    ['x', 'y', 'z'].map((axis) => `${label.toLowerCase()} ${axis} (m)`),
  );
  const lines = gait.times.map((time, k) => [time, ...(gait.feet[k] ?? [])].join(','));
  return `${['time (s)', ...heads].join(',')}\n${lines.join('\n')}\n`;
}

/**
 * Reads a series of one quantity, time in the first column and the value in the second, SI; a single column is
 * taken at the interval given. Times must be even to a hundredth of a step.
 *
 * @param interval  s, for a table without times
 * @param limit     greatest size allowed, in the unit named
 */
export function readSeries(text: string, interval: number, limit: number, unit: string): SeriesFile {
  const table = readNumberTable(text);
  if (table.kind === 'refused') return table;
  const { columns, rows, values, header } = table;
  const refuseSeries = (sentence: string): SeriesFile => ({ kind: 'refused', sentence });
  if (columns > 2)
    return refuseSeries(`The table has ${columns} columns; give time and value, or values alone.`);
  if (rows < 2 || rows > MOST_SAMPLES) {
    return refuseSeries(`The table has ${rows} samples; from 2 to ${MOST_SAMPLES} are allowed.`);
  }
  const factor = columns === 2 ? unitFactor(header[0]) : 1;
  const time = (k: number) => (values[k * columns] as number) * factor;
  const step = columns === 2 ? (time(rows - 1) - time(0)) / (rows - 1) : interval;
  if (!(step > 0))
    return refuseSeries(`The times run from ${time(0)} s to ${time(rows - 1)} s; they must rise.`);
  const out: number[] = [];
  for (let k = 0; k < rows; k++) {
    if (columns === 2 && Math.abs(time(k) - time(0) - k * step) > 0.01 * step) {
      return refuseSeries(
        `Sample ${k + 1} is at ${time(k)} s; evenly spaced by ${step} s it would be at ${time(0) + k * step} s. Resample it evenly.`,
      );
    }
    const value = values[k * columns + columns - 1] as number;
    if (Math.abs(value) > limit) {
      return refuseSeries(
        `Sample ${k + 1} is ${value} ${unit}; from -${limit} to ${limit} ${unit} is allowed.`,
      );
    }
    out.push(value);
  }
  return { kind: 'read', interval: step, values: out };
}
