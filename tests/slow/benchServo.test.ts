import { describe, expect, it } from 'vitest';
import { identifyServoStep, type ServoLog } from '../../src/core/bench/identify/servo';
import { identifyServoSweep } from '../../src/core/bench/identify/servoSweep';
import { expectCoverage } from '../support/coverage';
import { createSeededStream } from '../support/seededStream';

interface Truth {
  readonly delay: number;
  readonly lag: number;
  readonly limit: number;
  readonly backlash: number;
  readonly resolution: number;
}

/** Servo stepped at 10 us, plainly: not the closed form under test. */
function makeServo(truth: Truth, command: (t: number) => number, duration: number, rateHz: number): ServoLog {
  const n = Math.floor(duration * rateHz);
  const h = 1e-5;
  const perSample = Math.round(1 / rateHz / h);
  const heldAt = (t: number): number => command(Math.floor(t * rateHz + 1e-9) / rateHz);
  const q = truth.resolution;
  const time = new Float64Array(n);
  const u = new Float64Array(n);
  const y = new Float64Array(n);
  let x = command(0);
  let play = x;
  for (let i = 0; i < n; i++) {
    time[i] = i / rateHz;
    u[i] = command(time[i]);
    y[i] = play;
    for (let k = 0; k < perSample; k++) {
      const t = time[i] + (k + 0.5) * h - truth.delay;
      const raw = heldAt(Math.max(0, t));
      const goal = q > 0 ? q * Math.round(raw / q) : raw;
      const rate = Math.max(-truth.limit, Math.min(truth.limit, (goal - x) / truth.lag));
      x += h * rate;
      play = Math.max(x - truth.backlash / 2, Math.min(x + truth.backlash / 2, play));
    }
  }
  return { time, command: u, angle: y };
}

const withNoise = (log: ServoLog, spread: number, seed: number): ServoLog => {
  const stream = createSeededStream(seed);
  return { ...log, angle: log.angle.map((v) => v + spread * stream.normal()) };
};

describe('servo steps', () => {
  const steps = (t: number): number => (t < 0.1 ? 0 : t < 0.6 ? 0.08 : t < 1.1 ? 0.9 : t < 1.8 ? -0.4 : 0.05);
  const run = makeServo(
    { delay: 0.0123, lag: 0.021, limit: 7.5, backlash: 0, resolution: 0 },
    steps,
    2.4,
    250,
  );
  it('finds delay, lag and speed limit', () => {
    expectCoverage(
      'servo steps',
      200,
      (seed) => identifyServoStep(withNoise(run, 0.004, seed)),
      { delay: 0.0123, lag: 0.021, 'speed limit': 7.5, gain: 1 },
      { delay: 0.1, lag: 0.1, 'speed limit': 0.05 },
    );
  });
  it('reports no speed limit when small steps reach none', () => {
    const small = makeServo(
      { delay: 0.0123, lag: 0.021, limit: 7.5, backlash: 0, resolution: 0 },
      (t) => 0.1 * Math.round(Math.sin(9 * t)),
      2.4,
      250,
    );
    const outcome = identifyServoStep(withNoise(small, 0.001, 1));
    expect(outcome.kind).toBe('identified');
    if (outcome.kind !== 'identified') return;
    expect(outcome.patches.map((p) => p.quantity)).toEqual(['servoDelay', 'servoLag']);
    expect(outcome.remarks.join(' ')).toMatch(/do not reach the speed limit: it is above \d/);
  });
});

describe('servo sweep', () => {
  const triangle = (t: number): number => 0.2 * (1 - 4 * Math.abs(((t / 20) % 1) - 0.5));
  const truth = { delay: 0.0123, lag: 0.021, limit: 7.5, backlash: 0.012, resolution: 0.0063 };
  const run = makeServo(truth, triangle, 45, 100);
  const dynamics = { delay: { value: 0.0123, halfWidth: 2e-4 }, lag: { value: 0.021, halfWidth: 3e-4 } };
  it('finds play and resolution', () => {
    expectCoverage(
      'servo sweep',
      100,
      (seed) => identifyServoSweep(withNoise(run, 0.0006, seed), dynamics),
      { backlash: 0.012, resolution: 0.0063 },
      { backlash: 0.1, resolution: 0.01 },
    );
  });
  it('finds neither where there is none', () => {
    const tight = makeServo({ ...truth, backlash: 0, resolution: 0 }, triangle, 45, 100);
    const outcome = identifyServoSweep(withNoise(tight, 0.0006, 1), dynamics);
    expect(outcome.kind).toBe('identified');
    if (outcome.kind !== 'identified') return;
    expect(outcome.patches).toEqual([]);
    expect(outcome.remarks.join(' ')).toMatch(/No play is seen.*No steps are seen/);
  });
});
