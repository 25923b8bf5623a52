import { findInstant } from '../resampling';
import { correlationFactor, median, studentQuantile } from '../statistics';
import type { Phasor } from './phasor';

export type OrderOutcome =
  | {
      readonly kind: 'tracked';
      /** Vibration at wheel speed, in the signal's unit; angle as in phasor.ts. */
      readonly reading: Phasor;
      /** Half width of the 95 % interval in each direction. */
      readonly halfWidth: number;
      /** rad/s, mean over the turns used, and its relative spread. */
      readonly speed: number;
      readonly speedSpread: number;
      readonly turns: number;
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentence: string };

const LEAST_TURNS = 8;
const HARMONICS = 3;
const STEADY = 0.02;

/**
 * Instants at which a once-per-turn signal rises through the middle of its swing, between readings by a straight line.
 * Half the swing must be fallen through again before the next one counts, so noise on the edge gives no second mark.
 */
export function findMarks(time: Float64Array, signal: Float64Array): Float64Array {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < signal.length; i++) {
    if (signal[i] < low) low = signal[i];
    if (signal[i] > high) high = signal[i];
  }
  const middle = 0.5 * (low + high);
  const lower = low + 0.25 * (high - low);
  const marks: number[] = [];
  let isArmed = signal[0] < middle;
  for (let i = 1; i < signal.length; i++) {
    if (signal[i] < lower) isArmed = true;
    if (isArmed && signal[i] >= middle && signal[i - 1] < middle) {
      const share = (middle - signal[i - 1]) / (signal[i] - signal[i - 1]);
      marks.push(time[i - 1] + share * (time[i] - time[i - 1]));
      isArmed = false;
    }
  }
  return Float64Array.from(marks);
}

/**
 * Vibration at wheel speed from a raw log: amplitude and angle against a once-per-turn mark.
 *
 * The turn angle between marks is interpolated evenly, and over whole turns the signal is fitted by least squares with a
 * mean and the first three orders, so that a small change of speed does not smear the answer and 2x does not leak in.
 *
 * @param time, signal  n, s and any unit (m/s^2 usually); NaN readings are left out
 * @param marks         s, instants of the mark, rising
 * @returns refused with too few turns, an unsteady speed, marks that are missing, or too slow a log
 */
export function trackOrder(time: Float64Array, signal: Float64Array, marks: Float64Array): OrderOutcome {
  const refuse = (sentence: string): OrderOutcome => ({ kind: 'refused', sentence });
  const first = findInstant(marks, time[0]);
  let last = findInstant(marks, time[time.length - 1]);
  if (last === marks.length || marks[last] > time[time.length - 1]) last--;
  const turns = last - first;
  if (turns < LEAST_TURNS)
    return refuse(
      `The log shows ${Math.max(0, turns)} whole turns between marks; ${LEAST_TURNS} are needed.`,
    );
  const periods = Float64Array.from({ length: turns }, (_, k) => marks[first + k + 1] - marks[first + k]);
  const usual = median(periods);
  const odd = periods.findIndex((p) => p > 1.6 * usual || p < 0.6 * usual);
  if (odd >= 0) {
    return refuse(
      `A mark is ${periods[odd] > usual ? 'missing' : 'doubled'} at ${marks[first + odd].toPrecision(6)} s: that turn takes ${periods[odd].toPrecision(3)} s, the others ${usual.toPrecision(3)} s.`,
    );
  }
  const spread = (Math.max(...periods) - Math.min(...periods)) / usual;
  if (spread > 0.1)
    return refuse(`The speed changes by ${(100 * spread).toFixed(0)} % over the log: hold it steady.`);
  const from = findInstant(time, marks[first]);
  const to = findInstant(time, marks[last]);
  const perTurn = (to - from) / turns;
  if (perTurn < 2 * HARMONICS + 2)
    return refuse(
      `The log has ${perTurn.toFixed(1)} readings a turn; at least ${2 * HARMONICS + 2} are needed: log faster or turn slower.`,
    );
  const fit = fitOrders(time, signal, marks, first, from, to);
  const remarks: string[] = [];
  if (spread > STEADY) remarks.push(`The speed changes by ${(100 * spread).toFixed(1)} % over the log.`);
  const size = Math.sqrt(fit.reading.re ** 2 + fit.reading.im ** 2);
  if (size < fit.halfWidth) remarks.push('The vibration at wheel speed cannot be told from none.');
  return {
    kind: 'tracked',
    reading: fit.reading,
    halfWidth: fit.halfWidth,
    speed: (2 * Math.PI * turns) / (marks[last] - marks[first]),
    speedSpread: spread,
    turns,
    remarks,
  };
}

function fitOrders(
  time: Float64Array,
  signal: Float64Array,
  marks: Float64Array,
  first: number,
  from: number,
  to: number,
): { reading: Phasor; halfWidth: number } {
  const p = 2 * HARMONICS + 1;
  const N = new Float64Array(p * p);
  const r = new Float64Array(p);
  const g = new Float64Array(p);
  const basis = (i: number, turn: number): void => {
    const share = (time[i] - marks[turn]) / (marks[turn + 1] - marks[turn]);
    g[0] = 1;
    for (let k = 1; k <= HARMONICS; k++) {
      // amplitude * cos(turn + angle) = re * cos(turn) - im * sin(turn).
      g[2 * k - 1] = Math.cos(2 * Math.PI * k * share);
      g[2 * k] = -Math.sin(2 * Math.PI * k * share);
    }
  };
  let turn = first;
  let count = 0;
  for (let i = from; i < to; i++) {
    if (!Number.isFinite(signal[i])) continue;
    while (turn + 2 < marks.length && time[i] >= marks[turn + 1]) turn++;
    basis(i, turn);
    count++;
    for (let a = 0; a < p; a++) {
      r[a] += g[a] * signal[i];
      for (let b = 0; b < p; b++) N[a * p + b] += g[a] * g[b];
    }
  }
  const inverse = invert(N, p);
  const x = new Float64Array(p);
  for (let a = 0; a < p; a++) for (let b = 0; b < p; b++) x[a] += inverse[a * p + b] * r[b];
  const residuals: number[] = [];
  turn = first;
  let square = 0;
  for (let i = from; i < to; i++) {
    if (!Number.isFinite(signal[i])) continue;
    while (turn + 2 < marks.length && time[i] >= marks[turn + 1]) turn++;
    basis(i, turn);
    let e = signal[i];
    for (let a = 0; a < p; a++) e -= g[a] * x[a];
    square += e * e;
    if (residuals.length < 50_000) residuals.push(e);
  }
  const dof = count - p;
  const factor = correlationFactor(residuals);
  const variance = ((factor * square) / dof) * Math.max(inverse[p + 1], inverse[2 * p + 2]);
  return {
    reading: { re: x[1], im: x[2] },
    halfWidth: studentQuantile(0.95, Math.max(1, dof / factor)) * Math.sqrt(variance),
  };
}

/** Inverse of a small symmetric positive matrix by Gauss and Jordan; well conditioned here, orders being all but orthogonal. */
function invert(A: Float64Array, n: number): Float64Array {
  const m = Float64Array.from(A);
  const out = new Float64Array(n * n);
  for (let i = 0; i < n; i++) out[i * n + i] = 1;
  for (let k = 0; k < n; k++) {
    const d = m[k * n + k];
    for (let j = 0; j < n; j++) {
      m[k * n + j] /= d;
      out[k * n + j] /= d;
    }
    for (let i = 0; i < n; i++) {
      if (i === k) continue;
      const f = m[i * n + k];
      for (let j = 0; j < n; j++) {
        m[i * n + j] -= f * m[k * n + j];
        out[i * n + j] -= f * out[k * n + j];
      }
    }
  }
  return out;
}
