import { describe, expect, it } from 'vitest';
import { identifyClosedLoop } from '../../../src/core/bench/identify/closedLoop';
import { identifyCoastDown } from '../../../src/core/bench/identify/coastDown';
import { dampingFromPeaks, identifyDecay, logDecrement } from '../../../src/core/bench/identify/decay';
import { identifyPendulum, pendulumInertia } from '../../../src/core/bench/identify/pendulum';
import { identifyServoStep } from '../../../src/core/bench/identify/servo';
import { identifyServoSweep } from '../../../src/core/bench/identify/servoSweep';
import { identifySpinUp } from '../../../src/core/bench/identify/spinUp';
import { identifyToppling } from '../../../src/core/bench/identify/toppling';
import { expectClose } from '../../support/closeTo';
import { createSeededStream } from '../../support/seededStream';

const noise = (seed: number) => {
  const stream = createSeededStream(seed);
  return (spread: number): number => spread * stream.normal();
};
const clock = (n: number, step: number): Float64Array => Float64Array.from({ length: n }, (_, i) => i * step);

describe('closed forms', () => {
  it('logarithmic decrement (any vibration text; roll-decay practice)', () => {
    const zeta = [0.02, 0.05, 0.1, 0.2];
    expectClose(zeta.map(logDecrement), [0.125688846, 0.314552702, 0.631483883, 1.28254983], { rel: 1e-8 });
    expectClose(
      zeta.map((z) => Math.exp(logDecrement(z))),
      [1.13392929, 1.36964653, 1.8803988, 3.60582225],
      { rel: 1e-8 },
    );
  });
  it('decrement from peaks of 10 and 6 degrees a cycle apart (from memory)', () => {
    const { decrement, zeta } = dampingFromPeaks(10, 6);
    expectClose([decrement, zeta], [0.510825624, 0.0810330597], { rel: 1e-8 });
  });
  it('thread pendulums (Then 1965; teaching notes of the bifilar suspension)', () => {
    expectClose(pendulumInertia(2, 0.15, 1, 1.2, 9.81), 0.0161021651, { rel: 1e-8 });
    // A wheel of rim m(R^2 + r^2)/2 and web m r^2/2, 1.345e-3 kg*m^2, and the period such a wheel would have.
    const rim = (0.4 * (0.06 ** 2 + 0.05 ** 2)) / 2;
    const wheel = rim + (0.1 * 0.05 ** 2) / 2;
    expectClose([rim, wheel], [0.00122, 0.001345], { rel: 1e-12 });
    const period = 2 * Math.PI * Math.sqrt((wheel * 0.8) / (0.5 * 9.80665 * 0.055 ** 2));
    expectClose(pendulumInertia(0.5, 0.055, 0.8, period), wheel, { rel: 1e-12 });
  });
});

describe('a swing the log cannot support', () => {
  const time = clock(500, 0.02);
  const swing = (f: (t: number) => number, spread = 0.002, seed = 1) => {
    const e = noise(seed);
    return { time, values: time.map((t) => f(t) + e(spread)) };
  };
  it.each([
    ['too few readings', { time: time.subarray(0, 20), values: time.subarray(0, 20) }, /20 readings/],
    ['noise', swing(() => 0, 0.01), /no swing|no free swing|frequency/],
    [
      'less than one and a half cycles',
      swing((t) => 0.3 * Math.cos(0.5 * t) * Math.exp(-0.05 * t)),
      /cycles/,
    ],
    ['a growing swing', swing((t) => 0.01 * Math.cos(4 * t) * Math.exp(0.25 * t)), /grows/],
    [
      'fewer than six readings a cycle',
      swing((t) => 0.3 * Math.cos(2 * Math.PI * 12 * t)),
      /readings a cycle/,
    ],
  ])('%s', (_, samples, sentence) => {
    expect(identifyDecay(samples)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(sentence),
    });
  });
  it('too small a range of amplitudes: damping is there, but not which', () => {
    const outcome = identifyDecay(swing((t) => 0.3 * Math.cos(4 * t) * Math.exp(-0.008 * t), 0.004));
    expect(outcome.kind).toBe('identified');
    if (outcome.kind !== 'identified') return;
    expect(outcome.remarks.join()).toMatch(/tell linear, quadratic and dry damping apart/);
    expect(outcome.patches.map((p) => p.quantity)).toEqual(['naturalPeriod']);
  });
  it('stiffness and metacentric height from a known inertia and weight', () => {
    const outcome = identifyDecay(
      swing((t) => 0.1 * Math.cos(3 * t) * Math.exp(-0.1 * t)),
      { inertia: { value: 2, halfWidth: 0.02 }, weight: { value: 100 } },
    );
    if (outcome.kind !== 'identified') throw new Error(outcome.sentence);
    const gm = outcome.patches.find((p) => p.quantity === 'metacentricHeight');
    // w^2 = 3^2 + 0.1^2, k = I w^2, GM = k / W.
    expectClose(gm?.value ?? Number.NaN, 0.1802, { rel: 2e-3 });
    expect((gm?.high ?? 0) - (gm?.low ?? 0)).toBeGreaterThan(2 * 0.01 * 0.18);
  });
});

describe('other logs that cannot support a fit', () => {
  const time = clock(400, 0.01);
  const e = noise(2);
  it('toppling: a body that stands, one that swings back', () => {
    expect(identifyToppling({ time, values: time.map(() => e(0.001)) })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not fall/),
    });
    expect(
      identifyToppling({ time, values: time.map((t) => 0.2 * Math.sin(3 * t) + e(0.001)) }),
    ).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/swings back/) });
  });
  it('coast-down: a wheel at rest, one under power, one that is stopped', () => {
    expect(identifyCoastDown({ time, values: time.map(() => e(1)) })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not turn/),
    });
    expect(identifyCoastDown({ time, values: time.map(() => 500 + e(1)) })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not slow down enough/),
    });
    expect(identifyCoastDown({ time: time.subarray(0, 9), values: time.subarray(0, 9) })).toMatchObject({
      kind: 'refused',
    });
  });
  it('spin-up: no gain in speed, no inertia, a run cut off at once', () => {
    const inertia = { value: 1e-3 };
    expect(identifySpinUp({ time, speed: time.map(() => e(1)), voltage: 12 }, { inertia })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not spin up/),
    });
    expect(identifySpinUp({ time, speed: time, voltage: 12 }, { inertia: { value: 0 } })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/inertia is 0/),
    });
    // The first hundredth of a run whose time constant is 100 s: a straight line fixes K/R only.
    const straight = time.map((t) => 1000 * (1 - Math.exp(-t / 400)) + e(0.5));
    expect(identifySpinUp({ time, speed: straight, voltage: 12 }, { inertia })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not fix|cannot tell|did not settle/),
    });
  });
  it('pendulum: one reading alone, none, a mass of nothing', () => {
    const setup = {
      kind: 'bifilar',
      mass: { value: 2 },
      radius: { value: 0.15 },
      length: { value: 1 },
    } as const;
    expect(identifyPendulum(setup, { kind: 'typed', totals: [24], swings: 20 })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/One reading alone/),
    });
    expect(identifyPendulum(setup, { kind: 'typed', totals: [], swings: 20 })).toMatchObject({
      kind: 'refused',
    });
    expect(
      identifyPendulum({ ...setup, mass: { value: 0 } }, { kind: 'typed', totals: [24, 25], swings: 20 }),
    ).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/mass is 0 kg/) });
    const typed = identifyPendulum(setup, { kind: 'typed', totals: [24], swings: 20, readingHalfWidth: 0.2 });
    expect(typed.kind === 'identified' && typed.remarks.join()).toMatch(/interval is the one typed/);
  });
  it('servo: no command, no answer, a sweep that never turns back', () => {
    const command = time.map((t) => (t > 1 ? 0.5 : 0));
    expect(identifyServoStep({ time, command: time.map(() => 0.1), angle: time })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/never changes/),
    });
    expect(identifyServoStep({ time, command, angle: time.map(() => e(0.001)) })).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/does not follow/),
    });
    expect(
      identifyServoSweep(
        { time, command: time, angle: time },
        { delay: { value: 0.01 }, lag: { value: 0.02 } },
      ),
    ).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/turns back never/) });
  });
  it('closed loop: nothing moves, a gap in the log', () => {
    const rig = {
      inertia: 0.4,
      momentum: 1,
      lag: 0.02,
      delay: 0.01,
      centreOffset: 0,
      stiffness: 4,
      weight: 40,
    };
    const roll = time.map(() => e(0.001));
    expect(identifyClosedLoop({ time, roll, tiltCommand: roll }, rig)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/hardly moves/),
    });
    const gappy = time.map((t) => (t > 2 ? t + 1 : t));
    expect(identifyClosedLoop({ time: gappy, roll, tiltCommand: roll }, rig)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/gap of 1.01 s at 2 s/),
    });
  });
});
