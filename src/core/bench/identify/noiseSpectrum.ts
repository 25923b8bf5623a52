import FFT from 'fft.js';

/** A spectrum gathered in bins: mean periodogram, how many independent ordinates stand behind it, and the model's shapes. */
export interface NoiseBins {
  readonly frequency: Float64Array;
  readonly power: Float64Array;
  readonly weight: Float64Array;
  /** 3 a bin: two-sided density of unit white, flicker and random-walk noise, sampled. */
  readonly shapes: Float64Array;
}

/** Variance factor of a Hann-tapered periodogram against independent ordinates: n sum h^4 / (sum h^2)^2 = 35/18. */
export const HANN_FACTOR = 35 / 18;
/** Ordinates below this many cycles in the log are left out: the taper mixes them with the mean. */
const LEAST_CYCLES = 3;

/**
 * Two-sided power density of even samples, Hann-tapered, gathered in ever wider bins.
 *
 * @param values  n, even samples
 * @param step    s
 * O(n log n). Source: Percival and Walden, Spectral Analysis for Physical Applications, 1993, ch. 6; shapes from IEEE
 * Std 952 annex C with 2 pi f replaced by (2/step) sin(pi f step), which is exact for sampled noise.
 */
export function gatherSpectrum(values: Float64Array, step: number): NoiseBins {
  const n = values.length;
  const size = 2 ** Math.ceil(Math.log2(n));
  const fft = new FFT(size);
  const tapered = new Float64Array(size);
  let sumTaper = 0;
  let square = 0;
  let mean = 0;
  const taper = (i: number): number => 0.5 - 0.5 * Math.cos((2 * Math.PI * (i + 0.5)) / n);
  for (let i = 0; i < n; i++) {
    const h = taper(i);
    sumTaper += h;
    square += h * h;
    mean += h * values[i];
  }
  mean /= sumTaper;
  for (let i = 0; i < n; i++) tapered[i] = taper(i) * (values[i] - mean);
  const spectrum = fft.createComplexArray();
  fft.realTransform(spectrum, tapered);
  const scale = step / square;
  const share = n / size;
  const first = Math.ceil((LEAST_CYCLES * size) / n);
  const frequency: number[] = [];
  const power: number[] = [];
  const weight: number[] = [];
  const shapes: number[] = [];
  for (let k = first; k < size / 2; ) {
    const to = Math.min(size / 2, Math.max(k + 1, Math.floor(k * 1.03)));
    let sum = 0;
    const shape = [0, 0, 0];
    for (let j = k; j < to; j++) {
      sum += spectrum[2 * j] ** 2 + spectrum[2 * j + 1] ** 2;
      const s = (2 / step) * Math.sin((Math.PI * j) / size);
      shape[0] += 1;
      shape[1] += 1 / s;
      shape[2] += 1 / (s * s);
    }
    const count = to - k;
    frequency.push((0.5 * (k + to - 1)) / (size * step));
    power.push((sum * scale) / count);
    weight.push(count * share);
    shapes.push(shape[0] / count, shape[1] / count, shape[2] / count);
    k = to;
  }
  return {
    frequency: Float64Array.from(frequency),
    power: Float64Array.from(power),
    weight: Float64Array.from(weight),
    shapes: Float64Array.from(shapes),
  };
}

/** Whittle's log-likelihood, up to a constant: -sum w (log S + I / S). */
function likelihood(bins: NoiseBins, t: Float64Array): number {
  let sum = 0;
  for (let b = 0; b < bins.power.length; b++) {
    const s = t[0] * bins.shapes[3 * b] + t[1] * bins.shapes[3 * b + 1] + t[2] * bins.shapes[3 * b + 2];
    if (!(s > 0)) return Number.NEGATIVE_INFINITY;
    sum -= bins.weight[b] * (Math.log(s) + bins.power[b] / s);
  }
  return sum;
}

export interface NoiseFit {
  /** N^2, B^2 and K^2 of white, flicker and walk, each not below zero. */
  readonly variances: Float64Array;
  readonly logLikelihood: number;
}

/**
 * Maximum-likelihood variances of the three noises, none below zero; `held` fixes one of them.
 *
 * Fisher scoring: each step is a weighted least-squares fit of the periodogram, solved for every choice of which
 * variances are zero, the best feasible one taken, and the step halved until the likelihood rises.
 * Source: Whittle 1953; scoring as in generalised linear models with gamma errors.
 */
export function fitNoise(
  bins: NoiseBins,
  start: Float64Array,
  held?: { readonly index: number; readonly value: number },
): NoiseFit {
  const t = Float64Array.from(start);
  if (held) t[held.index] = held.value;
  let best = likelihood(bins, t);
  const next = new Float64Array(3);
  for (let round = 0; round < 100; round++) {
    const goal = scoreStep(bins, t, held?.index ?? -1);
    let share = 1;
    let hasRisen = false;
    for (let k = 0; k < 30 && !hasRisen; k++, share *= 0.5) {
      for (let j = 0; j < 3; j++) next[j] = t[j] + share * (goal[j] - t[j]);
      const value = likelihood(bins, next);
      if (value > best) {
        hasRisen = true;
        const gain = value - best;
        t.set(next);
        best = value;
        if (gain < 1e-7) return { variances: t, logLikelihood: best };
      }
    }
    if (!hasRisen) break;
  }
  return { variances: t, logLikelihood: best };
}

/** Weighted least-squares target of the next scoring step, the held variance kept. */
function scoreStep(bins: NoiseBins, t: Float64Array, held: number): Float64Array {
  const F = new Float64Array(9);
  const g = new Float64Array(3);
  for (let b = 0; b < bins.power.length; b++) {
    const a = [bins.shapes[3 * b], bins.shapes[3 * b + 1], bins.shapes[3 * b + 2]];
    const s = t[0] * a[0] + t[1] * a[1] + t[2] * a[2];
    const w = bins.weight[b] / (s * s);
    for (let i = 0; i < 3; i++) {
      g[i] += w * a[i] * bins.power[b];
      for (let j = 0; j < 3; j++) F[3 * i + j] += w * a[i] * a[j];
    }
  }
  let found: Float64Array = Float64Array.from(t);
  let least = Number.POSITIVE_INFINITY;
  for (let mask = 1; mask < 8; mask++) {
    if (held >= 0 && mask & (1 << held)) continue;
    const free = [0, 1, 2].filter((j) => mask & (1 << j));
    const x = solveFree(F, g, free, held, t);
    if (!x || free.some((j) => x[j] < 0)) continue;
    let cost = 0;
    for (let i = 0; i < 3; i++) {
      cost -= 2 * g[i] * x[i];
      for (let j = 0; j < 3; j++) cost += x[i] * F[3 * i + j] * x[j];
    }
    if (cost < least) [least, found] = [cost, x];
  }
  return found;
}

function solveFree(
  F: Float64Array,
  g: Float64Array,
  free: readonly number[],
  held: number,
  t: Float64Array,
): Float64Array | undefined {
  const n = free.length;
  const x = new Float64Array(3);
  if (held >= 0) x[held] = t[held];
  const d = free.map((i) => Math.sqrt(F[3 * i + i]));
  const A = free.map((i, r) => [
    ...free.map((j, c) => F[3 * i + j] / (d[r] * d[c])),
    (g[i] - (held >= 0 ? F[3 * i + held] * t[held] : 0)) / d[r],
  ]);
  for (let k = 0; k < n; k++) {
    if (!(Math.abs(A[k][k]) > 1e-13)) return undefined;
    for (let r = k + 1; r < n; r++) {
      const f = A[r][k] / A[k][k];
      for (let c = k; c <= n; c++) A[r][c] -= f * A[k][c];
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    let s = A[k][n];
    for (let c = k + 1; c < n; c++) s -= A[k][c] * x[free[c]] * d[c];
    x[free[k]] = s / A[k][k] / d[k];
  }
  return x;
}

/**
 * 95 % interval of one variance by the profile likelihood, the drop widened for the taper.
 *
 * @returns [low, high]; low is 0 when zero lies inside
 */
export function profileInterval(bins: NoiseBins, best: NoiseFit, index: number): [number, number] {
  const drop = 0.5 * 3.841_459 * HANN_FACTOR;
  const isInside = (value: number): boolean =>
    best.logLikelihood - fitNoise(bins, best.variances, { index, value }).logLikelihood <= drop;
  let scale = best.variances[index];
  if (!(scale > 0)) {
    let floor = Number.POSITIVE_INFINITY;
    for (let b = 0; b < bins.power.length; b++)
      floor = Math.min(floor, bins.power[b] / bins.shapes[3 * b + index]);
    scale = 1e-3 * floor;
  }
  let outer = 2 * scale;
  while (isInside(outer)) outer *= 2;
  const high = bisect(isInside, Math.max(best.variances[index], outer / 2), outer);
  if (isInside(best.variances[index] * 1e-6)) return [0, high];
  return [bisect(isInside, best.variances[index], best.variances[index] * 1e-6), high];
}

function bisect(isInside: (value: number) => boolean, inner: number, outer: number): number {
  let a = inner;
  let b = outer;
  for (let k = 0; k < 30 && Math.abs(b - a) > 1e-4 * Math.abs(a + b); k++) {
    const middle = Math.abs(b / a) > 4 || Math.abs(a / b) > 4 ? Math.sqrt(a * b) : 0.5 * (a + b);
    if (isInside(middle)) a = middle;
    else b = middle;
  }
  return b;
}
