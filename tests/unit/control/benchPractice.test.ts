import { describe, expect, it } from 'vitest';
import { runRollLoop } from '../../../src/core/control/closedLoop';
import type { Controller } from '../../../src/core/control/controllers';
import { findRoots } from '../../../src/core/control/linear/spectrum';
import { measureDecay } from '../../../src/core/control/margins';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  type RollLoopModel,
  type RollOutcome,
} from '../../../src/core/control/rollLoopModel';
import { expandPidTilt } from '../../../src/core/control/routh';
import { NO_VIBRATION } from '../../../src/core/control/sensorModel';
import { expectClose } from '../../support/closeTo';

/* What builders know from the bench. Common practice, no published source. */

interface Bench {
  readonly inertia: number;
  readonly stiffness: number;
  readonly momentum: number;
  readonly lag: number;
  readonly delay: number;
  readonly tiltLimit: number;
}

const BENCH: Bench = { inertia: 0.02, stiffness: 1, momentum: 0.1, lag: 0.015, delay: 0.006, tiltLimit: 0.9 };

const build = (b: Bench, controller: Controller): RollLoopModel => ({
  body: { inertia: b.inertia, stiffness: b.stiffness, damping: 0, quadraticDamping: 0, fallenAt: 0.7 },
  actuator: {
    kind: 'servo',
    gimbals: [
      {
        servo: {
          stallTorque: 1.5,
          noLoadSpeed: 8,
          torqueLimit: 1.5,
          delay: b.delay,
          lag: b.lag,
          backlash: 0,
          deadBand: 0,
          resolution: 0,
          updateRate: 0,
          gimbalInertia: 1e-4,
          rotorInertia: 1e-4,
          tiltMin: -b.tiltLimit,
          tiltMax: b.tiltLimit,
        },
        momentum: b.momentum,
        yawMomentum: 0,
        follow: 1,
        spin: { kind: 'constant' },
      },
    ],
  },
  sensor: {
    sampleTime: 0.002,
    gyroNoise: 0,
    gyroBias: 0,
    gyroDrift: 0,
    driftTime: 100,
    gyroRange: 10,
    gyroResolution: 0,
    accelNoise: 0,
    accelBias: 0,
    height: 0.05,
    gravity: 9.80665,
    vibration: NO_VIBRATION,
  },
  estimator: { kind: 'complementary', sampleTime: 0.002, timeConstant: 1 },
  controller,
  loopDelay: 0.002,
  loopJitter: 0,
  tiltMin: -b.tiltLimit,
  tiltMax: b.tiltLimit,
  substeps: 2,
});

const run = (model: RollLoopModel, roll: number, duration: number, rows?: Float64Array): RollOutcome =>
  runRollLoop(
    model,
    createRollLoopWork(model),
    NO_DISTURBANCE,
    { roll, rollRate: 0, tilt: 0, estimateError: 0, duration, seed: 1, run: 0 },
    rows === undefined ? undefined : { rows, every: 1 },
  );

/** Roll every sample. */
const trace = (model: RollLoopModel, roll: number, duration: number): Float64Array => {
  const record = createRollRecord(Math.round(duration / 0.002), 1);
  run(model, roll, duration, record.rows);
  return Float64Array.from({ length: record.rows.length / 9 }, (_, i) => record.rows[9 * i + RECORD.roll]!);
};

describe('starting gains: D a tenth of P, I ten times P', () => {
  it.each([
    ['small robot', { ...BENCH, inertia: 0.006, stiffness: 0.4, momentum: 0.06 }],
    ['bench rig', BENCH],
    ['knee-high walker', { ...BENCH, inertia: 0.15, stiffness: 4, momentum: 0.35 }],
  ] as const)('%s stands on them, and without them falls', (_, bench) => {
    /* P twice what makes I outweigh gravity */
    const kp = (2 * bench.stiffness) / bench.momentum / 10;
    const model = build(bench, { kind: 'pidTilt', kp, ki: 10 * kp, kd: kp / 10 });
    const held = run(model, 0.03, 8);
    expect(held.hasFallen).toBe(false);
    expect(Math.abs(held.finalRoll)).toBeLessThan(0.003);
    expect(run(build(bench, { kind: 'pidTilt', kp: 0, ki: 0, kd: 0 }), 0.03, 8).hasFallen).toBe(true);
  });
});

describe('tilt in proportion to roll on a body that rights itself', () => {
  const growth = (lag: number): number => {
    const boat = { ...BENCH, inertia: 2, stiffness: -30, momentum: 2, lag, delay: 0.06, tiltLimit: 1.4 };
    const roll = trace(build(boat, { kind: 'pidTilt', kp: 1, ki: 0, kd: 0 }), 0.05, 24);
    const peak = (from: number, to: number): number => {
      let most = 0;
      for (let i = from; i < to; i++) most = Math.max(most, Math.abs(roll[i]!));
      return most;
    };
    return Math.log(peak(8000, 12_000) / peak(1000, 5000)) / 14;
  };
  it('damps with a quick servo, less with a slow one, and with more lag builds the roll up', () => {
    const found = [0.03, 0.3, 3].map(growth);
    expect(found[0]!).toBeLessThan(-0.2);
    expect(found[1]!).toBeGreaterThan(found[0]!);
    expect(found[1]!).toBeLessThan(0);
    expect(found[2]!).toBeGreaterThan(0);
    const plant = {
      actuator: 'tilt',
      inertia: 2,
      stiffness: -30,
      damping: 0,
      momentum: 2,
      servoLag: 3,
      delay: 0.062,
      sampleTime: 0.002,
      sensorHeight: 0.05,
      gravity: 9.80665,
    } as const;
    const estimator = { kind: 'complementary', sampleTime: 0.002, timeConstant: 1 } as const;
    const predicted = -measureDecay({ plant, estimator, law: 'pidTilt', gains: [1, 0, 0] });
    expectClose(found[2]!, predicted, { rel: 0.1 }); // measured 0.025
  });
});

describe('gimbal locked', () => {
  it('gains do nothing: the body falls as it does with no array at all', () => {
    const locked = { ...BENCH, tiltLimit: 0 };
    const pid = trace(build(locked, { kind: 'pidTilt', kp: 5, ki: 50, kd: 0.5 }), 0.01, 0.5);
    const none = trace(build({ ...locked, momentum: 0 }, { kind: 'passive' }), 0.01, 0.5);
    expectClose(pid, none, { rel: 1e-12 }); // measured 0
    /* and both as cosh(t sqrt(k / I)), the free fall of a small lean */
    expectClose(pid[200]!, 0.01 * Math.cosh(0.4 * Math.sqrt(50)), { rel: 0.01 }); // sine of the lean makes it slower (measured 2e-4)
  });
});

describe('more wheel momentum', () => {
  it('makes the same gains answer quicker', () => {
    const firstCrossing = (momentum: number): number => {
      const roll = trace(
        build({ ...BENCH, momentum }, { kind: 'pidTilt', kp: 1.6, ki: 20, kd: 0.1 }),
        0.03,
        4,
      );
      return roll.findIndex((x) => x < 0.003);
    };
    const times = [0.08, 0.1, 0.14, 0.2].map(firstCrossing);
    for (let i = 1; i < times.length; i++) expect(times[i]!).toBeLessThan(times[i - 1]!);
  });
});

describe('the words for P, I and D of roll-to-tilt control', () => {
  const plant = { inertia: 0.02, stiffness: 1, damping: 0, momentum: 0.1, servoLag: 0 };
  const pair = (
    kp: number,
    ki: number,
    kd: number,
  ): { decay: number; stiffness: number; inertia: number } => {
    const p = expandPidTilt(plant, { kp, ki, kd });
    const { re, im } = findRoots(p);
    return { decay: -re[0]!, stiffness: (re[0]! ** 2 + im[0]! ** 2) * p[0]!, inertia: p[0]! };
  };
  it('P damps and leaves stiffness; I stiffens and leaves damping; D weighs like inertia', () => {
    const base = pair(0.5, 40, 0.05);
    const moreP = pair(0.6, 40, 0.05);
    expect(moreP.decay).toBeGreaterThan(base.decay);
    expectClose(moreP.stiffness, base.stiffness, { rel: 1e-12 }); // measured 3e-16
    const moreI = pair(0.5, 50, 0.05);
    expectClose(moreI.decay, base.decay, { rel: 1e-12 }); // measured 0
    expectClose(moreI.stiffness - base.stiffness, 0.1 * 10, { rel: 1e-9 }); // measured 9e-16
    const moreD = pair(0.5, 40, 0.06);
    expectClose(moreD.inertia - base.inertia, 0.1 * 0.01, { rel: 1e-9 }); // measured 9e-16
    expectClose(moreD.stiffness, base.stiffness, { rel: 1e-12 }); // measured 1e-16
  });
});
