import FFT from 'fft.js';
import { resampleEvenly } from '../resampling';
import { median } from '../statistics';
import type { SwingShape } from './swing';

/** Start values: frequency from the spectrum, then the best damped sinusoid on a small grid of dampings. */
export function guessSwing(time: Float64Array, y: Float64Array, shape: SwingShape): Float64Array | undefined {
  const n = time.length;
  const span = time[n - 1];
  const size = Math.min(2 ** 15, 2 ** Math.ceil(Math.log2(n)));
  const even = resampleEvenly({ time, values: y }, 0, span / (size - 1), size, Number.POSITIVE_INFINITY);
  const middle = median(even.subarray(size >> 1));
  const mean = even.reduce((s, v) => s + v, 0) / size;
  const swing = Math.max(...y) - Math.min(...y);
  if (!(swing > 0)) return undefined;
  const fft = new FFT(2 * size);
  const padded = new Float64Array(2 * size);
  for (let i = 0; i < size; i++)
    padded[i] = even[i] - (Math.abs(middle - mean) < 0.2 * swing ? mean : middle);
  const spectrum = fft.createComplexArray();
  fft.realTransform(spectrum, padded);
  let best = 1;
  let most = 0;
  for (let k = 1; k < size; k++) {
    const power = spectrum[2 * k] ** 2 + spectrum[2 * k + 1] ** 2;
    if (power > most) [most, best] = [power, k];
  }
  let least = Number.POSITIVE_INFINITY;
  let found: Float64Array | undefined;
  for (const shift of [-1, -0.5, 0, 0.5, 1]) {
    const w = (Math.PI * Math.max(0.5, best + shift)) / span;
    for (const zeta of [0.002, 0.01, 0.03, 0.08, 0.2, 0.5]) {
      const trial = fitSinusoid(time, y, w, zeta * w);
      if (trial.cost < least) {
        least = trial.cost;
        const [a, b, c] = trial.coefficients;
        const slope = b * w - zeta * w * a;
        const start = shape.signal === 'angle' ? [a, slope] : [-(2 * zeta * w * a + slope) / (w * w), a];
        found = Float64Array.from([w, 2 * zeta * w, 0, 0, start[0], start[1], c]);
      }
    }
  }
  return found;
}

/** Linear fit of exp(-d t)(a cos wt + b sin wt) + c by the normal equations; only a start value comes of it. */
function fitSinusoid(
  time: Float64Array,
  y: Float64Array,
  w: number,
  d: number,
): { cost: number; coefficients: [number, number, number] } {
  const stride = Math.max(1, Math.floor(time.length / 3000));
  const N = new Float64Array(9);
  const r = new Float64Array(3);
  const g = new Float64Array(3);
  let yy = 0;
  for (let i = 0; i < time.length; i += stride) {
    const e = Math.exp(-d * time[i]);
    g[0] = e * Math.cos(w * time[i]);
    g[1] = e * Math.sin(w * time[i]);
    g[2] = 1;
    yy += y[i] * y[i];
    for (let p = 0; p < 3; p++) {
      r[p] += g[p] * y[i];
      for (let q = 0; q < 3; q++) N[3 * p + q] += g[p] * g[q];
    }
  }
  const x = solve3(N, r);
  return { cost: yy - x[0] * r[0] - x[1] * r[1] - x[2] * r[2], coefficients: x };
}

function solve3(A: Float64Array, b: Float64Array): [number, number, number] {
  const det = (m: ArrayLike<number>): number =>
    m[0] * (m[4] * m[8] - m[5] * m[7]) -
    m[1] * (m[3] * m[8] - m[5] * m[6]) +
    m[2] * (m[3] * m[7] - m[4] * m[6]);
  const d = det(A);
  const column = (k: number): number => {
    const m = Float64Array.from(A);
    for (let i = 0; i < 3; i++) m[3 * i + k] = b[i];
    return det(m) / d;
  };
  return [column(0), column(1), column(2)];
}
