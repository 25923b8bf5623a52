import { describe, expect, it } from 'vitest';
import { type ClosedLoopLog, identifyClosedLoop } from '../../src/core/bench/identify/closedLoop';
import { expectCoverage } from '../support/coverage';
import { createSeededStream } from '../support/seededStream';

const truth = {
  inertia: 0.42,
  momentum: 0.9,
  lag: 0.025,
  delay: 0.011,
  centreOffset: 0.0011,
  stiffness: 4.1,
  weight: 40,
};
const rig = { ...truth, inertia: 0.36, momentum: 1.0, lag: 0.02, delay: 0.006, centreOffset: 0 };

/**
 * A balancing run stepped at 50 us: PID from roll to tilt at 200 Hz, pure delay, first-order servo, a moving set point
 * and two shoves the log knows nothing of. Not the model under test: no linearity, no closed forms.
 */
function makeRun(seed: number, spread: number, duration = 10): ClosedLoopLog {
  const stream = createSeededStream(seed);
  const rate = 200;
  const n = duration * rate;
  const h = 5e-5;
  const fine = Math.round(1 / rate / h);
  const time = new Float64Array(n);
  const roll = new Float64Array(n);
  const command = new Float64Array(n);
  let phi = 0.02;
  let w = 0;
  let tilt = 0;
  let sum = 0;
  let last = 0.02;
  for (let i = 0; i < n; i++) {
    const t = i / rate;
    time[i] = t;
    roll[i] = phi + spread * stream.normal();
    const goal = 0.03 * Math.sign(Math.sin(2.1 * t)) * (t > 1 ? 1 : 0);
    const error = roll[i] - goal;
    const rateOf = (roll[i] - last) * rate;
    last = roll[i];
    sum = Math.max(-0.5, Math.min(0.5, sum + error / rate));
    command[i] = Math.max(-1, Math.min(1, 4.5 * error + 14 * sum + 0.25 * rateOf));
    if (i === 700 || i === 1600) w += 0.15;
    for (let k = 0; k < fine; k++) {
      const at = t + k * h - truth.delay;
      const u = at < 0 ? command[0] : command[Math.min(i, Math.floor(at * rate + 1e-9))];
      // Exact for a held command, so that the lag of the truth is the one stated.
      const tiltRate = ((u - tilt) * -Math.expm1(-h / truth.lag)) / h;
      const a =
        (truth.stiffness * phi -
          truth.weight * truth.centreOffset -
          truth.momentum * Math.cos(tilt) * tiltRate) /
        truth.inertia;
      phi += h * (w + 0.5 * h * a);
      w += h * a;
      tilt += h * tiltRate;
    }
  }
  return { time, roll, tiltCommand: command };
}

describe('closed-loop run', () => {
  it('finds inertia, momentum, lag, delay and centre of mass', () => {
    expectCoverage(
      'closed loop',
      100,
      (seed) => identifyClosedLoop(makeRun(seed, 0.0008), rig, { findsFewest: false }),
      {
        inertia: truth.inertia,
        momentum: truth.momentum,
        lag: truth.lag,
        delay: truth.delay,
        'centre of mass offset': truth.centreOffset,
      },
      { inertia: 0.1, momentum: 0.1, lag: 0.3, delay: 0.5 },
    );
  });
  it('names the one number that is wrong', () => {
    const outcome = identifyClosedLoop(makeRun(3, 0.0008), { ...truth, momentum: 1.05 });
    expect(outcome.kind).toBe('identified');
    if (outcome.kind !== 'identified') return;
    expect(outcome.fewestChanges).toEqual(['momentum']);
    expect(outcome.mustChange).toContain('momentum');
    expect(outcome.remarks.join(' ')).toMatch(/2 of \d+ stretches were knocked/);
  });
  it('leaves a right rig alone', () => {
    const outcome = identifyClosedLoop(makeRun(4, 0.0008), truth);
    expect(outcome.kind === 'identified' && outcome.fewestChanges).toEqual([]);
  });
});
