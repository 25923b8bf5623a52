import FFT from 'fft.js';
import { dropMissing, resampleEvenly, type Samples } from './resampling';

export type AlignmentOutcome =
  | {
      readonly kind: 'aligned';
      /** s to add to the log's time so that it lies on the plan. */
      readonly shift: number;
      /** Correlation at the best shift, -1 to 1. */
      readonly correlation: number;
      /** Correlation of the best rival further than one main lobe away; near `correlation` when the signal repeats. */
      readonly rival: number;
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentence: string };

/** Below this the log and the plan cannot be said to show the same thing. Common practice. */
const LEAST_CORRELATION = 0.5;
const MOST_POINTS = 2 ** 20;

/**
 * Finds the shift that lays a log on the plan, by normalised cross-correlation over the overlap.
 *
 * Both are put on one even grid (the finer of the two, at most 2^20 points), means taken out over each overlap, and the
 * correlation coefficient is computed for every shift by FFT; a parabola through the peak gives the fraction of a step.
 *
 * @param log, plan    samples in the same unit
 * @param leastOverlap share of the shorter of the two that must overlap, 0 to 1
 * @returns 'refused' when nothing varies or nothing matches; a remark when a second shift fits about as well
 *
 * O(N log N). Source: Lewis, Fast Normalized Cross-Correlation, 1995.
 */
export function alignSamples(log: Samples, plan: Samples, leastOverlap = 0.5): AlignmentOutcome {
  const a = dropMissing(log);
  const b = dropMissing(plan);
  if (a.time.length < 8 || b.time.length < 8)
    return {
      kind: 'refused',
      sentence: 'Too few readings to align: 8 are needed in the log and in the plan.',
    };
  const spanA = a.time[a.time.length - 1] - a.time[0];
  const spanB = b.time[b.time.length - 1] - b.time[0];
  const step = Math.max(
    Math.min(spanA / (a.time.length - 1), spanB / (b.time.length - 1)),
    (spanA + spanB) / MOST_POINTS,
  );
  const nA = Math.floor(spanA / step + 1e-9) + 1;
  const nB = Math.floor(spanB / step + 1e-9) + 1;
  const x = resampleEvenly(a, a.time[0], step, nA, Number.POSITIVE_INFINITY);
  const y = resampleEvenly(b, b.time[0], step, nB, Number.POSITIVE_INFINITY);
  const flat = isFlat(x) ? 'log' : isFlat(y) ? 'plan' : undefined;
  if (flat) return { kind: 'refused', sentence: `The ${flat} does not vary: nothing to align by.` };
  const coefficient = correlateEverywhere(x, y, Math.ceil(leastOverlap * Math.min(nA, nB)));
  // Index k means: log sample i lies on plan sample i + k - (nA - 1).
  let best = 0;
  for (let k = 0; k < coefficient.length; k++) if (coefficient[k] > coefficient[best]) best = k;
  const peak = coefficient[best];
  if (!(peak >= LEAST_CORRELATION)) {
    return {
      kind: 'refused',
      sentence: `The log does not look like the plan at any shift: the best correlation is ${peak.toFixed(2)}, and ${LEAST_CORRELATION} is the least that counts.`,
    };
  }
  let fraction = 0;
  if (best > 0 && best < coefficient.length - 1) {
    const l = coefficient[best - 1];
    const r = coefficient[best + 1];
    const bend = l - 2 * peak + r;
    if (bend < 0 && l > -1 && r > -1) fraction = (0.5 * (l - r)) / bend;
  }
  const rival = findRival(coefficient, best);
  const shift = b.time[0] - a.time[0] + (best - (nA - 1) + fraction) * step;
  const remarks =
    rival > peak - 0.02
      ? [
          `Another shift fits about as well (correlation ${rival.toFixed(3)} against ${peak.toFixed(3)}): the signal repeats itself.`,
        ]
      : [];
  return { kind: 'aligned', shift, correlation: peak, rival, remarks };
}

function isFlat(x: Float64Array): boolean {
  let low = x[0];
  let high = x[0];
  for (let i = 1; i < x.length; i++) {
    if (x[i] < low) low = x[i];
    if (x[i] > high) high = x[i];
  }
  return !(high - low > 1e-12 * Math.max(Math.abs(low), Math.abs(high)));
}

/** Largest coefficient beyond the first dip below half the peak on either side. */
function findRival(coefficient: Float64Array, best: number): number {
  let left = best;
  while (left > 0 && coefficient[left] > 0.5 * coefficient[best]) left--;
  let right = best;
  while (right < coefficient.length - 1 && coefficient[right] > 0.5 * coefficient[best]) right++;
  let rival = -1;
  for (let k = 0; k < coefficient.length; k++) {
    if ((k < left || k > right) && coefficient[k] > rival) rival = coefficient[k];
  }
  return rival;
}

/** Pearson's coefficient of the overlap for each of nA + nB - 1 shifts; -1 where the overlap is too short. */
function correlateEverywhere(x: Float64Array, y: Float64Array, leastOverlap: number): Float64Array {
  const nA = x.length;
  const nB = y.length;
  const size = 2 ** Math.ceil(Math.log2(nA + nB));
  const fft = new FFT(size);
  const mean = (v: Float64Array): number => v.reduce((s, u) => s + u, 0) / v.length;
  const mx = mean(x);
  const my = mean(y);
  // Time-reversed log, so that the product of spectra is a correlation.
  const px = new Float64Array(size);
  const py = new Float64Array(size);
  for (let i = 0; i < nA; i++) px[nA - 1 - i] = x[i] - mx;
  for (let i = 0; i < nB; i++) py[i] = y[i] - my;
  const fx = fft.createComplexArray();
  const fy = fft.createComplexArray();
  fft.realTransform(fx, px);
  fft.realTransform(fy, py);
  fft.completeSpectrum(fx);
  fft.completeSpectrum(fy);
  for (let i = 0; i < size; i++) {
    const re = fx[2 * i] * fy[2 * i] - fx[2 * i + 1] * fy[2 * i + 1];
    fx[2 * i + 1] = fx[2 * i] * fy[2 * i + 1] + fx[2 * i + 1] * fy[2 * i];
    fx[2 * i] = re;
  }
  fft.inverseTransform(fy, fx);
  const sums = (v: Float64Array, m: number): [Float64Array, Float64Array] => {
    const s = new Float64Array(v.length + 1);
    const q = new Float64Array(v.length + 1);
    for (let i = 0; i < v.length; i++) {
      s[i + 1] = s[i] + (v[i] - m);
      q[i + 1] = q[i] + (v[i] - m) ** 2;
    }
    return [s, q];
  };
  const [sx, qx] = sums(x, mx);
  const [sy, qy] = sums(y, my);
  const out = new Float64Array(nA + nB - 1).fill(-1);
  for (let k = 0; k < out.length; k++) {
    const lag = k - (nA - 1);
    const from = Math.max(0, -lag);
    const to = Math.min(nA, nB - lag);
    const n = to - from;
    if (n < Math.max(4, leastOverlap)) continue;
    const dx = sx[to] - sx[from];
    const dy = sy[to + lag] - sy[from + lag];
    const vx = qx[to] - qx[from] - (dx * dx) / n;
    const vy = qy[to + lag] - qy[from + lag] - (dy * dy) / n;
    if (!(vx > 1e-12 * qx[nA] && vy > 1e-12 * qy[nB])) continue;
    out[k] = (fy[2 * k] - (dx * dy) / n) / Math.sqrt(vx * vy);
  }
  return out;
}
