import { describe, it } from 'vitest';
import { identifyDecay } from '../../src/core/bench/identify/decay';
import { identifyToppling } from '../../src/core/bench/identify/toppling';
import type { Samples } from '../../src/core/bench/resampling';
import { expectCoverage } from '../support/coverage';
import { createSeededStream } from '../support/seededStream';

/** Plain small-step integration (semi-implicit Euler, Richardson not needed at this step): not the code under test. */
function makeMotion(
  accelerate: (angle: number, rate: number) => number,
  start: number,
  duration: number,
  rateHz: number,
  fine: number,
): { time: Float64Array; angle: Float64Array; rate: Float64Array } {
  const n = Math.floor(duration * rateHz);
  const time = new Float64Array(n);
  const angle = new Float64Array(n);
  const rate = new Float64Array(n);
  let a = start;
  let v = 0;
  const h = 1 / rateHz / fine;
  for (let i = 0; i < n; i++) {
    time[i] = i / rateHz;
    angle[i] = a;
    rate[i] = v;
    for (let k = 0; k < fine; k++) {
      // Velocity Verlet with a predicted rate: second order.
      const p = accelerate(a, v);
      const half = v + 0.5 * h * p;
      a += h * half;
      v = half + 0.5 * h * accelerate(a, half + 0.5 * h * p);
    }
  }
  return { time, angle, rate };
}

const noisy = (
  time: Float64Array,
  clean: Float64Array,
  spread: number,
  seed: number,
  offset = 0,
): Samples => {
  const stream = createSeededStream(seed);
  return { time, values: clean.map((v) => v + offset + spread * stream.normal()) };
};

describe('swing decay', () => {
  const w = 4.2;
  const motion = makeMotion(
    (a, v) => -w * w * a - 0.12 * v - 0.35 * v * Math.abs(v) - 0.05 * Math.sign(v),
    0.35,
    15,
    60,
    400,
  );
  it('tells linear, quadratic and dry damping apart', () => {
    expectCoverage(
      'decay, all three dampings',
      300,
      (seed) =>
        identifyDecay(noisy(motion.time, motion.angle, 0.002, seed, 0.01), { stiffness: { value: 3 } }),
      {
        'natural period': (2 * Math.PI) / w,
        'linear damping over inertia': 0.12,
        'quadratic damping over inertia': 0.35,
        'dry friction over inertia': 0.05,
        inertia: 3 / (w * w),
      },
      { 'natural period': 0.001, 'linear damping over inertia': 0.2, 'quadratic damping over inertia': 0.3 },
    );
  });
  const linear = makeMotion((a, v) => -9 * a - 0.3 * v, 0.3, 20, 50, 100);
  it('finds no damping that is not there', () => {
    expectCoverage(
      'decay, linear only, from the rate gyro',
      300,
      (seed) => identifyDecay(noisy(linear.time, linear.rate, 0.01, seed, -0.02), { signal: 'rate' }),
      {
        'natural period': (2 * Math.PI) / 3,
        'linear damping over inertia': 0.3,
        'quadratic damping over inertia': 0,
        'dry friction over inertia': 0,
      },
    );
  });
});

describe('toppling', () => {
  const a = 3.5;
  const fall = makeMotion((x) => a * a * Math.sin(x), 0.01, 1.6, 200, 100);
  const held = 60;
  const time = Float64Array.from({ length: fall.time.length + held }, (_, i) => i / 200);
  const angle = Float64Array.from({ length: time.length }, (_, i) =>
    i < held ? 0.01 : fall.angle[i - held],
  );
  it('finds the toppling rate and the inertia', () => {
    expectCoverage(
      'toppling',
      300,
      (seed) => identifyToppling(noisy(time, angle, 0.001, seed, 0.02), { stiffness: { value: 20 } }),
      { 'toppling rate': a, inertia: 20 / (a * a) },
      { 'toppling rate': 0.05 },
    );
  });
});
