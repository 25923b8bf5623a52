import { describe, expect, it } from 'vitest';
import { identifyCoastDown } from '../../src/core/bench/identify/coastDown';
import { identifyPendulum } from '../../src/core/bench/identify/pendulum';
import { identifySpinUp } from '../../src/core/bench/identify/spinUp';
import { expectCoverage } from '../support/coverage';
import { createSeededStream } from '../support/seededStream';

/** Heun's method at a small step: not the integrator under test. */
function integrate(
  slope: (w: number, t: number) => number,
  start: number,
  duration: number,
  rateHz: number,
  fine: number,
) {
  const n = Math.floor(duration * rateHz);
  const time = new Float64Array(n);
  const speed = new Float64Array(n);
  const h = 1 / rateHz / fine;
  let w = start;
  for (let i = 0; i < n; i++) {
    time[i] = i / rateHz;
    speed[i] = w;
    for (let k = 0; k < fine; k++) {
      const t = time[i] + k * h;
      const a = slope(w, t);
      const b = slope(w + h * a, t + h);
      w += 0.5 * h * (a + b);
    }
  }
  return { time, speed };
}

const J = 1.345e-3;

describe('coast-down', () => {
  const drag = { constant: 2e-3, linear: 6e-6, windage: 1.5e-8 };
  const run = integrate(
    (w) => -(drag.constant + drag.linear * w + drag.windage * w * w) / J,
    800,
    180,
    10,
    20,
  );
  it('splits the drag in three', () => {
    expectCoverage(
      'coast-down',
      300,
      (seed) => {
        const stream = createSeededStream(seed);
        return identifyCoastDown(
          { time: run.time, values: run.speed.map((w) => w + 0.8 * stream.normal()) },
          { inertia: { value: J } },
        );
      },
      {
        'constant drag': drag.constant,
        'linear drag': drag.linear,
        windage: drag.windage,
        'drag torque at the first speed': drag.constant + drag.linear * 800 + drag.windage * 800 * 800,
      },
      { 'constant drag': 0.05, 'linear drag': 0.1, windage: 0.1, 'drag torque at the first speed': 0.01 },
    );
  });
  it('says so when the wheel was stopped too early to tell', () => {
    const stream = createSeededStream(1);
    const few = 120;
    const outcome = identifyCoastDown({
      time: run.time.subarray(0, few),
      values: run.speed.subarray(0, few).map((w) => w + 0.8 * stream.normal()),
    });
    expect(outcome.kind).toBe('identified');
    if (outcome.kind !== 'identified') return;
    expect(outcome.remarks.join(' ')).toMatch(/cannot be told apart/);
    expect(outcome.estimates.filter((e) => e.verdict === 'cannot-tell').length).toBe(3);
    expect(outcome.patches).toEqual([]);
  });
});

describe('spin-up', () => {
  const R = 0.12;
  const K = 0.0098;
  const drag = { constant: 2e-3, linear: 6e-6, windage: 1.5e-8 };
  const run = integrate(
    (w, t) =>
      ((K * (11.1 - 0.3 * Math.exp(-t) - K * w)) / R -
        drag.constant -
        drag.linear * w -
        drag.windage * w * w) /
      J,
    0,
    6,
    100,
    50,
  );
  const voltage = run.time.map((t) => 11.1 - 0.3 * Math.exp(-t));
  it('finds resistance and torque constant from the speed alone', () => {
    expectCoverage(
      'spin-up, speed',
      300,
      (seed) => {
        const stream = createSeededStream(seed);
        return identifySpinUp(
          { time: run.time, voltage, speed: run.speed.map((w) => w + 3 * stream.normal()) },
          { inertia: { value: J }, drag },
        );
      },
      { 'motor resistance': R, 'torque constant': K },
      { 'motor resistance': 0.02, 'torque constant': 0.01 },
    );
  });
  it('and from speed and current', () => {
    expectCoverage(
      'spin-up, speed and current',
      300,
      (seed) => {
        const stream = createSeededStream(seed);
        return identifySpinUp(
          {
            time: run.time,
            voltage,
            speed: run.speed.map((w) => w + 3 * stream.normal()),
            current: run.speed.map((w, i) => (voltage[i] - K * w) / R + 0.5 * stream.normal()),
          },
          { inertia: { value: J }, drag },
        );
      },
      { 'motor resistance': R, 'torque constant': K },
    );
  });
});

describe('thread pendulum', () => {
  it('carries the scatter of typed readings through', () => {
    const truth = (2 * 9.81 * 0.15 ** 2 * 1.2 ** 2) / (4 * Math.PI ** 2);
    expectCoverage(
      'bifilar, five readings of twenty swings',
      1000,
      (seed) => {
        const stream = createSeededStream(seed);
        const totals = Array.from({ length: 5 }, () => 20 * 1.2 + 0.15 * stream.normal());
        return identifyPendulum(
          {
            kind: 'bifilar',
            mass: { value: 2 },
            radius: { value: 0.15 },
            length: { value: 1 },
            gravity: 9.81,
          },
          { kind: 'typed', totals, swings: 20 },
        );
      },
      { inertia: truth },
    );
  });
  it('takes the empty platform off', () => {
    const inertia = 1.345e-3;
    const platform = 4e-4;
    const period = (m: number, i: number): number =>
      2 * Math.PI * Math.sqrt((i * 0.9) / (m * 9.80665 * 0.06 ** 2));
    const log = (m: number, i: number, stream: ReturnType<typeof createSeededStream>) => {
      const w = (2 * Math.PI) / period(m, i);
      const time = Float64Array.from({ length: 1000 }, (_, k) => k / 50);
      return {
        time,
        values: time.map(
          (t) =>
            0.1 * Math.exp(-0.02 * t) * Math.cos(w * t * Math.sqrt(1 - (0.02 / w) ** 2)) +
            0.002 * stream.normal(),
        ),
      };
    };
    expectCoverage(
      'trifilar, wheel on a platform, from logs',
      100,
      (seed) => {
        const stream = createSeededStream(seed);
        return identifyPendulum(
          { kind: 'trifilar', mass: { value: 0.65 }, radius: { value: 0.06 }, length: { value: 0.9 } },
          { kind: 'log', samples: log(0.65, inertia + platform, stream) },
          {
            empty: { mass: { value: 0.15 }, period: { kind: 'log', samples: log(0.15, platform, stream) } },
            target: 'wheelSpinInertia',
          },
        );
      },
      { inertia },
      { inertia: 0.02 },
    );
  });
});
