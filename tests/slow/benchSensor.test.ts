import FFT from 'fft.js';
import { describe, expect, it } from 'vitest';
import { identifyStillSensor } from '../../src/core/bench/identify/stillSensor';
import { expectCoverage } from '../support/coverage';
import { createSeededStream } from '../support/seededStream';

/**
 * White, flicker and random-walk noise in the time domain. Flicker by fractional differencing of order one half
 * (Kasdin, Discrete Simulation of Colored Noise, 1995), warmed up over as long again as the log.
 */
function makeNoise(n: number, step: number, N: number, B: number, K: number, seed: number): Float64Array {
  const stream = createSeededStream(seed);
  const size = 4 * 2 ** Math.ceil(Math.log2(n));
  const h = new Float64Array(size);
  const w = new Float64Array(size);
  h[0] = 1;
  for (let k = 1; k < size / 2; k++) h[k] = (h[k - 1] * (k - 0.5)) / k;
  for (let k = 0; k < size / 2; k++) w[k] = B * stream.normal();
  const fft = new FFT(size);
  const a = fft.createComplexArray();
  const b = fft.createComplexArray();
  fft.realTransform(a, h);
  fft.realTransform(b, w);
  fft.completeSpectrum(a);
  fft.completeSpectrum(b);
  for (let i = 0; i < size; i++) {
    const re = a[2 * i] * b[2 * i] - a[2 * i + 1] * b[2 * i + 1];
    a[2 * i + 1] = a[2 * i] * b[2 * i + 1] + a[2 * i + 1] * b[2 * i];
    a[2 * i] = re;
  }
  fft.inverseTransform(b, a);
  const out = new Float64Array(n);
  let walk = 0;
  for (let i = 0; i < n; i++) {
    walk += K * Math.sqrt(step) * stream.normal();
    out[i] = 0.003 + (N / Math.sqrt(step)) * stream.normal() + b[2 * (size / 2 - n + i)] + walk;
  }
  return out;
}

describe('still sensor', () => {
  it('finds noise density, bias instability and random walk', () => {
    expectCoverage(
      'still gyro, all three',
      200,
      (seed) => identifyStillSensor(makeNoise(20_000, 0.1, 1e-4, 1.2e-4, 8e-6, seed), 0.1),
      { 'noise density': 1e-4, 'bias instability': 1.2e-4, 'random walk': 8e-6, 'walk per root hour': 6e-3 },
      { 'noise density': 0.1, 'bias instability': 0.6 },
    );
  });
  it('reports only what is there', () => {
    expectCoverage(
      'still gyro, white only',
      100,
      (seed) => identifyStillSensor(makeNoise(10_000, 0.01, 1e-4, 0, 0, seed), 0.01),
      { 'noise density': 1e-4, 'bias instability': 0, 'random walk': 0 },
    );
    const outcome = identifyStillSensor(makeNoise(10_000, 0.01, 1e-4, 0, 0, 7), 0.01);
    expect(outcome.kind === 'identified' && outcome.patches.map((p) => p.quantity)).toEqual([
      'sensorNoiseDensity',
    ]);
  });
});
