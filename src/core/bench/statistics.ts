/** Small statistics the fits need: Student's t, F and robust spread. */

/** Natural logarithm of the gamma function, x > 0. Lanczos approximation, g = 7, relative error near 1e-15. */
export function logGamma(x: number): number {
  const c = [
    0.999_999_999_999_809_93, 676.520_368_121_885_1, -1259.139_216_722_402_8, 771.323_428_777_653_13,
    -176.615_029_162_140_6, 12.507_343_278_686_905, -0.138_571_095_265_720_12, 9.984_369_578_019_572e-6,
    1.505_632_735_149_311_6e-7,
  ];
  if (x < 0.5) return Math.log(Math.PI / Math.sin(Math.PI * x)) - logGamma(1 - x);
  const y = x - 1;
  let sum = c[0];
  for (let i = 1; i < 9; i++) sum += c[i] / (y + i);
  const t = y + 7.5;
  return 0.5 * Math.log(2 * Math.PI) + (y + 0.5) * Math.log(t) - t + Math.log(sum);
}

/** Regularised incomplete beta I_x(a, b), by its continued fraction (Abramowitz & Stegun 26.5.8, Lentz's method). */
export function incompleteBeta(x: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (x >= 1) return 1;
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBeta(1 - x, b, a);
  const front =
    Math.exp(logGamma(a + b) - logGamma(a) - logGamma(b) + a * Math.log(x) + b * Math.log1p(-x)) / a;
  const tiny = 1e-300;
  let c = 1;
  let d = 1 - ((a + b) * x) / (a + 1);
  d = 1 / (Math.abs(d) < tiny ? tiny : d);
  let h = d;
  for (let m = 1; m < 500; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / nonZero(1 + even * d);
    c = nonZero(1 + even / c);
    h *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / nonZero(1 + odd * d);
    c = nonZero(1 + odd / c);
    const step = d * c;
    h *= step;
    if (Math.abs(step - 1) < 1e-15) break;
  }
  return front * h;
}

const nonZero = (x: number): number => (Math.abs(x) < 1e-300 ? 1e-300 : x);

/** Probability that |t| of Student's t with `dof` degrees of freedom exceeds |t|. */
export const studentTail = (t: number, dof: number): number =>
  incompleteBeta(dof / (dof + t * t), dof / 2, 0.5);

/** Probability that F with (a, b) degrees of freedom exceeds f. */
export const fisherTail = (f: number, a: number, b: number): number =>
  f <= 0 ? 1 : incompleteBeta(b / (b + a * f), b / 2, a / 2);

/**
 * Two-sided quantile of Student's t: |t| stays below it with probability `confidence` (0 to 1).
 * Bisection on the tail; `dof` > 0 need not be whole.
 */
export function studentQuantile(confidence: number, dof: number): number {
  const tail = 1 - confidence;
  let low = 0;
  let high = 2;
  while (studentTail(high, dof) > tail) high *= 2;
  for (let i = 0; i < 200 && high - low > 1e-14 * high; i++) {
    const middle = 0.5 * (low + high);
    if (studentTail(middle, dof) > tail) low = middle;
    else high = middle;
  }
  return 0.5 * (low + high);
}

/** Middle value; the mean of the two middle ones for an even count. NaN for none. Does not touch its input. */
export function median(values: ArrayLike<number>): number {
  const sorted = Float64Array.from(values).sort();
  const n = sorted.length;
  if (n === 0) return Number.NaN;
  return n % 2 === 1 ? sorted[(n - 1) / 2] : 0.5 * (sorted[n / 2 - 1] + sorted[n / 2]);
}

/** Standard deviation estimated from the median absolute deviation (factor 1.4826 for normal noise). */
export function robustSpread(values: ArrayLike<number>): number {
  const m = median(values);
  return 1.4826 * median(Float64Array.from(values, (v) => Math.abs(v - m)));
}

/** White noise of a smooth sampled signal: from second differences, in which the signal all but vanishes. */
export function differenceNoise(values: ArrayLike<number>): number {
  const n = values.length - 2;
  if (n < 1) return Number.NaN;
  return (
    robustSpread(Float64Array.from({ length: n }, (_, i) => values[i] - 2 * values[i + 1] + values[i + 2])) /
    Math.sqrt(6)
  );
}

/**
 * How much wider than white noise would have it an interval must be, as a factor on the variance: the integrated
 * autocorrelation 1 + 2 sum rho_k, summed until rho falls below its own noise 2/sqrt(n). Never below 1.
 */
export function correlationFactor(residuals: ArrayLike<number>): number {
  const n = residuals.length;
  let power = 0;
  for (let i = 0; i < n; i++) power += residuals[i] * residuals[i];
  if (!(power > 0) || n < 10) return 1;
  const noise = 2 / Math.sqrt(n);
  let factor = 1;
  for (let k = 1; k < n / 4; k++) {
    let sum = 0;
    for (let i = k; i < n; i++) sum += residuals[i] * residuals[i - k];
    const rho = sum / power;
    if (rho < noise) break;
    factor += 2 * rho;
  }
  return factor;
}
