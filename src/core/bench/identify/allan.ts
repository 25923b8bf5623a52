/**
 * Allan deviations of evenly sampled rates (frequency-type data in the words of the source).
 * Source: Riley, Handbook of Frequency Stability Analysis, NIST Special Publication 1065, 2008, section 5.
 */

/** Running sum with x[0] = 0: n rates give n + 1 phases, in units of rate times step. */
function integrateRates(rates: ArrayLike<number>): Float64Array {
  const phase = new Float64Array(rates.length + 1);
  let mean = 0;
  for (let i = 0; i < rates.length; i++) mean += rates[i] / rates.length;
  // The mean drops out of every second difference; taken out, the sum keeps its digits.
  for (let i = 0; i < rates.length; i++) phase[i + 1] = phase[i] + (rates[i] - mean);
  return phase;
}

/** Original Allan deviation at averaging factor m: adjacent means of m, not overlapping. NaN with fewer than 2 means. */
export function allanDeviation(rates: ArrayLike<number>, m: number): number {
  const x = integrateRates(rates);
  const means = Math.floor(rates.length / m);
  let sum = 0;
  for (let i = 0; i + 1 < means; i++) sum += (x[(i + 2) * m] - 2 * x[(i + 1) * m] + x[i * m]) ** 2;
  return means > 1 ? Math.sqrt(sum / (2 * (means - 1))) / m : Number.NaN;
}

/** Overlapping Allan deviation at averaging factor m (SP 1065 eq. 11). NaN with fewer than 2 m rates. O(n). */
export function overlappingAllanDeviation(rates: ArrayLike<number>, m: number): number {
  return overlappingFromPhase(integrateRates(rates), m);
}

function overlappingFromPhase(x: Float64Array, m: number): number {
  const terms = x.length - 2 * m;
  let sum = 0;
  for (let i = 0; i < terms; i++) {
    const d = x[i + 2 * m] - 2 * x[i + m] + x[i];
    sum += d * d;
  }
  return terms > 0 ? Math.sqrt(sum / (2 * terms)) / m : Number.NaN;
}

/** Modified Allan deviation at averaging factor m (SP 1065 eq. 14). O(n). */
export function modifiedAllanDeviation(rates: ArrayLike<number>, m: number): number {
  const x = integrateRates(rates);
  const terms = x.length - 3 * m + 1;
  if (terms < 1) return Number.NaN;
  let window = 0;
  for (let i = 0; i < m; i++) window += x[i + 2 * m] - 2 * x[i + m] + x[i];
  let sum = window * window;
  for (let j = 1; j < terms; j++) {
    window += x[j + 3 * m - 1] - 3 * x[j + 2 * m - 1] + 3 * x[j + m - 1] - x[j - 1];
    sum += window * window;
  }
  return Math.sqrt(sum / (2 * terms)) / (m * m);
}

export type NoiseKind = 'white' | 'flicker' | 'walk';

/**
 * Equivalent degrees of freedom of the overlapping Allan variance, by the kind of noise that rules at m.
 * Source: Howe, Allan, Barnes 1981, as given in SP 1065 section 5.4.
 */
export function allanFreedom(kind: NoiseKind, rates: number, m: number): number {
  const N = rates + 1;
  if (kind === 'white')
    return ((3 * (N - 1)) / (2 * m) - (2 * (N - 2)) / N) * ((4 * m * m) / (4 * m * m + 5));
  if (kind === 'flicker')
    return m === 1 ? (2 * (N - 2) ** 2) / (2.3 * N - 4.9) : (5 * N * N) / (4 * m * (N + 3 * m));
  return (((N - 2) / m) * ((N - 1) ** 2 - 3 * m * (N - 1) + 4 * m * m)) / (N - 3) ** 2;
}

/** Quantile of chi-squared by Wilson and Hilferty (1931), `z` the normal quantile of the wanted probability. */
const chiSquared = (dof: number, z: number): number =>
  dof * Math.max(1e-3, 1 - 2 / (9 * dof) + z * Math.sqrt(2 / (9 * dof))) ** 3;

export interface AllanPoint {
  /** s. */
  readonly tau: number;
  readonly deviation: number;
  /** 95 % interval. */
  readonly low: number;
  readonly high: number;
}

/**
 * Overlapping Allan deviation on a ladder of averaging times, four a factor of two, up to a quarter of the log.
 *
 * @param rates  n, even samples
 * @param step   s
 * @param kindAt which noise rules at an averaging time, for the interval
 * O(n log n).
 */
export function computeAllanCurve(
  rates: ArrayLike<number>,
  step: number,
  kindAt: (tau: number) => NoiseKind,
): AllanPoint[] {
  const x = integrateRates(rates);
  const curve: AllanPoint[] = [];
  let last = 0;
  for (let k = 0; ; k++) {
    const m = Math.round(2 ** (k / 4));
    if (m > rates.length / 4) break;
    if (m === last) continue;
    last = m;
    const tau = m * step;
    const deviation = overlappingFromPhase(x, m);
    const dof = Math.max(1, allanFreedom(kindAt(tau), rates.length, m));
    curve.push({
      tau,
      deviation,
      low: deviation * Math.sqrt(dof / chiSquared(dof, 1.959_964)),
      high: deviation * Math.sqrt(dof / chiSquared(dof, -1.959_964)),
    });
  }
  return curve;
}
