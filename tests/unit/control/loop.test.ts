import { describe, expect, it } from 'vitest';
import type { EstimatorModel } from '../../../src/core/control/estimators';
import { findRootAbscissa, findSpectralRadius } from '../../../src/core/control/linear/spectrum';
import { buildClosedLoop, type LoopModel } from '../../../src/core/control/loopModel';
import { findDelayBorder, judgeLoop, measureDecay } from '../../../src/core/control/margins';
import type { RollTiltPlant } from '../../../src/core/control/plantModels';
import { createRandom, drawUniform } from '../../../src/core/control/randomness';
import { expandFeedback, expandPidTilt, expandPidTiltRate, testRouth } from '../../../src/core/control/routh';
import { expectClose } from '../../support/closeTo';

const PLANT: RollTiltPlant = {
  actuator: 'tilt',
  inertia: 0.3,
  stiffness: 7.5,
  damping: 0.05,
  momentum: 0.6,
  servoLag: 0.02,
  delay: 0,
  sampleTime: 1e-4,
  sensorHeight: 0,
  gravity: 9.80665,
};
const ideal = (sampleTime: number): EstimatorModel => ({ kind: 'ideal', sampleTime });

describe('sampled loop against the continuous characteristic polynomial', () => {
  /* As the sample time goes to zero the slowest mode must go to the polynomial's; half a sample of hold and one
     of transport are the difference, so it falls in proportion to the sample time. */
  it.each([
    ['pidTilt', [9, 60, 0.3], expandPidTilt(PLANT, { kp: 9, ki: 60, kd: 0.3 })],
    ['pidTilt', [4, 20, 0], expandPidTilt({ ...PLANT, servoLag: 0 }, { kp: 4, ki: 20, kd: 0 })],
    ['pidTiltRate', [60, 30, 9], expandPidTiltRate(PLANT, { kp: 60, ki: 30, kd: 9 })],
    ['feedback', [80, 12, 2, 0, 0], expandFeedback(PLANT, { lean: 80, leanRate: 12, tilt: 2 })],
  ] as const)('%s %j', (law, gains, polynomial) => {
    const lag = law === 'pidTilt' && gains[0] === 4 ? 0 : PLANT.servoLag;
    const errors = [4e-4, 2e-4, 1e-4].map((sampleTime) => {
      const plant = { ...PLANT, sampleTime, servoLag: lag };
      return measureDecay({ plant, estimator: ideal(sampleTime), law, gains }) + findRootAbscissa(polynomial);
    });
    expectClose(errors[0]! / errors[1]!, 2, { rel: 0.05 }, 'order one in the sample time'); // measured 2e-2
    expectClose(errors[1]! / errors[2]!, 2, { rel: 0.05 }, 'order one in the sample time'); // measured 1e-2
    expectClose(errors[2]!, 0, { abs: 0.02 * Math.abs(findRootAbscissa(polynomial)) }); // measured 4e-3
  });

  it('agrees with Routh on 300 random sets of gains, seed 21, away from the border', () => {
    const random = createRandom(21);
    let stable = 0;
    for (let i = 0; i < 300; i++) {
      const kp = 30 * drawUniform(random) - 3;
      const ki = 150 * drawUniform(random) - 15;
      const kd = drawUniform(random);
      const servoLag = i % 3 === 0 ? 0 : 0.05 * drawUniform(random);
      const polynomial = expandPidTilt({ ...PLANT, servoLag }, { kp, ki, kd });
      const abscissa = findRootAbscissa(polynomial);
      expect(testRouth(polynomial).kind === 'stable').toBe(abscissa < 0);
      if (Math.abs(abscissa) < 0.05) continue;
      /* a law with D on a lag-free tilt has gain at all frequencies: its sampled form has a border of its own */
      if (servoLag < 0.002) continue;
      const gains = [kp, ki, kd];
      const plant = { ...PLANT, servoLag };
      const radius = findSpectralRadius(
        buildClosedLoop({ plant, estimator: ideal(1e-4), law: 'pidTilt', gains }),
      );
      expect(radius < 1).toBe(abscissa < 0);
      if (abscissa < 0) stable++;
    }
    expect(stable).toBeGreaterThan(50);
  });
});

describe('margins of a sampled loop', () => {
  const loop: LoopModel = {
    plant: { ...PLANT, sampleTime: 0.002, delay: 0.0093 },
    estimator: { kind: 'complementary', sampleTime: 0.002, timeConstant: 1 },
    law: 'feedback',
    gains: [90, 14, 1.5, 0, 0],
  };
  const verdict = judgeLoop(loop);
  if (verdict.kind === 'fails') throw new Error('the test loop must hold');
  const { margins } = verdict;
  const holdsAt = (factor: number): boolean =>
    measureDecay({ ...loop, gains: [90 * factor, 14 * factor, 1.5, 0, 0] }) > 0;

  it('finds both gain borders where the eigenvalues have them', () => {
    expect([holdsAt(margins.gainUp * 0.9995), holdsAt(margins.gainUp * 1.0005)]).toEqual([true, false]);
    expect([holdsAt(margins.gainDown * 1.0005), holdsAt(margins.gainDown * 0.9995)]).toEqual([true, false]);
  });

  it('finds the delay border within 2 % of the eigenvalues, closer with a faster loop', () => {
    expectClose(margins.delay, findDelayBorder(loop), { rel: 0.02 }); // measured 8e-4
    const fast = { ...loop, plant: { ...loop.plant, sampleTime: 5e-4 }, estimator: ideal(5e-4) };
    const quick = judgeLoop(fast);
    if (quick.kind === 'fails') throw new Error('must hold');
    expectClose(quick.margins.delay, findDelayBorder(fast), { rel: 0.002 }); // measured 2e-6
  });

  it('gives a largest sensitivity consistent with its own gain and phase margins', () => {
    const s = margins.sensitivity;
    expect(margins.gainUp).toBeGreaterThanOrEqual(s / (s - 1) - 1e-9);
    expect(margins.phase).toBeGreaterThanOrEqual(2 * Math.asin(1 / (2 * s)) - 1e-9);
  });
});
