import { describe, expect, it } from 'vitest';
import { runRollLoop } from '../../../src/core/control/closedLoop';
import type { Controller } from '../../../src/core/control/controllers';
import { findEigenvalues } from '../../../src/core/control/linear/spectrum';
import { buildController, type Law, type LoopModel } from '../../../src/core/control/loopModel';
import { findDelayBorder, judgeLoop, measureDecay } from '../../../src/core/control/margins';
import type { RollTiltPlant } from '../../../src/core/control/plantModels';
import { buildFreeGimbal, judgeFreeGimbal } from '../../../src/core/control/plantModels';
import type { RollActuator } from '../../../src/core/control/rollActuators';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  type RollLoopModel,
  type RollOutcome,
  type RollRunStart,
} from '../../../src/core/control/rollLoopModel';
import { NO_VIBRATION, type SensorModel } from '../../../src/core/control/sensorModel';
import type { ServoModel } from '../../../src/core/control/servoModel';
import { findLeastSpeed } from '../../../src/core/control/spinDown';
import { expectClose } from '../../support/closeTo';

const PERFECT_SERVO: ServoModel = {
  stallTorque: 1e6,
  noLoadSpeed: 1e6,
  torqueLimit: 1e6,
  delay: 0.006,
  lag: 0.02,
  backlash: 0,
  deadBand: 0,
  resolution: 0,
  updateRate: 0,
  gimbalInertia: 1e-3,
  rotorInertia: 0,
  tiltMin: -1.4,
  tiltMax: 1.4,
};

const quietSensor = (sampleTime: number): SensorModel => ({
  sampleTime,
  gyroNoise: 0,
  gyroBias: 0,
  gyroDrift: 0,
  driftTime: 100,
  gyroRange: 100,
  gyroResolution: 0,
  accelNoise: 0,
  accelBias: 0,
  height: 0.2,
  gravity: 9.80665,
  vibration: NO_VIBRATION,
});

const PLANT: RollTiltPlant = {
  actuator: 'tilt',
  inertia: 0.3,
  stiffness: 7.5,
  damping: 0.05,
  momentum: 0.6,
  servoLag: 0.02,
  delay: 0.0095,
  sampleTime: 0.002,
  sensorHeight: 0.2,
  gravity: 9.80665,
};

const START: RollRunStart = {
  roll: 1e-4,
  rollRate: 0,
  tilt: 0,
  estimateError: 0,
  duration: 4,
  seed: 1,
  run: 0,
};

const pair = (servo: ServoModel, momentum: number): RollActuator => ({
  kind: 'servo',
  gimbals: [1, -1].map((side) => ({
    servo,
    momentum: momentum / 2,
    yawMomentum: (side * momentum) / 2,
    follow: 1,
    spin: { kind: 'constant' },
  })),
});

interface Setting {
  readonly plant?: RollTiltPlant;
  readonly law: Law;
  readonly gains: ArrayLike<number>;
  readonly servo?: ServoModel;
  readonly substeps?: number;
}

/** The nonlinear model of the same loop that the linear one describes. */
function build(s: Setting, change: Partial<RollLoopModel> = {}): RollLoopModel {
  const plant = s.plant ?? PLANT;
  const servo = { ...(s.servo ?? PERFECT_SERVO), lag: plant.servoLag };
  return {
    body: {
      inertia: plant.inertia,
      stiffness: plant.stiffness,
      damping: plant.damping,
      quadraticDamping: 0,
      fallenAt: 1,
    },
    actuator: pair(servo, plant.momentum),
    sensor: quietSensor(plant.sampleTime),
    estimator: { kind: 'complementary', sampleTime: plant.sampleTime, timeConstant: 1 },
    controller: buildController(s.law, s.gains),
    loopDelay: plant.delay - servo.delay,
    loopJitter: 0,
    tiltMin: -1.4,
    tiltMax: 1.4,
    substeps: s.substeps ?? 4,
    ...change,
  };
}

const run = (
  model: RollLoopModel,
  start: Partial<RollRunStart> = {},
  disturbance = NO_DISTURBANCE,
): RollOutcome =>
  runRollLoop(model, createRollLoopWork(model), disturbance, { ...START, ...start }, undefined);

/** 1/s, growth of the roll's envelope over a run of tiny motion. */
function measureGrowth(model: RollLoopModel, duration = 12): number {
  const record = createRollRecord(Math.round(duration / model.sensor.sampleTime), 1);
  /* so small that the sine is its argument, and growth for the whole run stays so */
  runRollLoop(
    model,
    createRollLoopWork(model),
    NO_DISTURBANCE,
    { ...START, roll: 1e-9, estimateError: 1e-9, duration },
    record,
  );
  const rows = record.rows.length / 9;
  const peak = (from: number, to: number): number => {
    let most = 0;
    for (let i = Math.floor(from * rows); i < Math.floor(to * rows); i++) {
      most = Math.max(most, Math.abs(record.rows[9 * i + RECORD.roll]!));
    }
    return most;
  };
  return Math.log(peak(0.75, 1) / peak(0.4, 0.65)) / (0.35 * duration);
}

const FEEDBACK = [90, 14, 1.5, 0, 0];
const linear = (plant: RollTiltPlant, law: Law, gains: ArrayLike<number>): LoopModel => ({
  plant,
  law,
  gains,
  estimator: { kind: 'complementary', sampleTime: plant.sampleTime, timeConstant: 1 },
});

/** The factor on the loop gain at which the simulated loop just neither grows nor decays. */
function findOnset(law: Law, gains: readonly number[], low: number, high: number): number {
  const growthAt = (factor: number): number => {
    const momentum = PLANT.momentum * factor;
    return measureGrowth(build({ plant: { ...PLANT, momentum }, law, gains }));
  };
  let a = low;
  let b = high;
  const sign = growthAt(a) > 0;
  expect(growthAt(b) > 0).toBe(!sign);
  while (Math.abs(b - a) > 2e-4 * a) {
    const middle = 0.5 * (a + b);
    if (growthAt(middle) > 0 === sign) a = middle;
    else b = middle;
  }
  return 0.5 * (a + b);
}

describe('closed loop against the linear judgement of it', () => {
  it.each([
    ['feedback', FEEDBACK],
    ['pidTilt', [9, 60, 0.3]],
    ['pidTiltRate', [60, 30, 9]],
  ] as const)('%s: gain margins meet the simulated onset of instability within 2 %%', (law, gains) => {
    const verdict = judgeLoop(linear(PLANT, law, gains));
    if (verdict.kind === 'fails') throw new Error('must hold');
    const { gainUp, gainDown } = verdict.margins;
    expectClose(findOnset(law, gains, gainUp * 0.9, gainUp * 1.1), gainUp, { rel: 0.02 }); // measured 0.0013 to 0.0022
    expectClose(findOnset(law, gains, gainDown * 0.9, gainDown * 1.1), gainDown, { rel: 0.02 }); // measured 0.0015 to 0.0064
  });

  it('delay margin meets the simulated onset within 2 %', () => {
    const loop = linear(PLANT, 'feedback', FEEDBACK);
    const verdict = judgeLoop(loop);
    if (verdict.kind === 'fails') throw new Error('must hold');
    let low = verdict.margins.delay * 0.9;
    let high = verdict.margins.delay * 1.1;
    const growthAt = (more: number): number =>
      measureGrowth(
        build({ plant: { ...PLANT, delay: PLANT.delay + more }, law: 'feedback', gains: FEEDBACK }),
      );
    expect([growthAt(low) < 0, growthAt(high) > 0]).toEqual([true, true]);
    while (high - low > 1e-5) {
      const middle = 0.5 * (low + high);
      if (growthAt(middle) > 0) high = middle;
      else low = middle;
    }
    expectClose(low, verdict.margins.delay, { rel: 0.02 }); // measured 0.006
    expectClose(low, findDelayBorder(loop), { rel: 0.005 }); // measured 0.002
  });

  it('decays and grows at the rate of the slowest eigenvalue', () => {
    /* one slow real mode; and a quick growing pair */
    for (const [factor, duration] of [
      [1, 40],
      [8, 0.9],
    ] as const) {
      const plant = { ...PLANT, momentum: PLANT.momentum * factor };
      const decay = measureDecay(linear(plant, 'feedback', FEEDBACK));
      const growth = measureGrowth(build({ plant, law: 'feedback', gains: FEEDBACK }), duration);
      expectClose(growth, -decay, { rel: 0.02 }); // measured 0.011 and 0.008
    }
  });

  it('converges with the square of the plant step', () => {
    const final = [4, 8, 16, 128].map((substeps) => {
      const model = build({ law: 'feedback', gains: FEEDBACK, substeps });
      return run(model, { roll: 0.1, duration: 0.4 }).finalRoll;
    });
    const errors = final.slice(0, 3).map((x) => x - final[3]!);
    expectClose([errors[0]! / errors[1]!, errors[1]! / errors[2]!], [4, 4], { rel: 0.1 }); // measured 4.0 and 4.06
    expectClose(errors[0]!, 0, { abs: 1e-6 }); // measured 3e-7 of the 0.1 rad it starts with
  });
});

describe('closed loop by itself', () => {
  const noisy: Partial<RollLoopModel> = {
    sensor: {
      ...quietSensor(0.002),
      gyroNoise: 2e-4,
      gyroDrift: 1e-4,
      accelNoise: 2e-3,
      gyroResolution: 1e-4,
    },
    loopJitter: 0.0003,
  };

  it('gives the same run for the same seed and run number, in a fresh or a used work space', () => {
    const model = build({ law: 'feedback', gains: FEEDBACK }, noisy);
    const work = createRollLoopWork(model);
    const once = { ...runRollLoop(model, work, NO_DISTURBANCE, { ...START, run: 3 }, undefined) };
    runRollLoop(model, work, NO_DISTURBANCE, { ...START, run: 4, roll: 0.3 }, undefined);
    const again = { ...runRollLoop(model, work, NO_DISTURBANCE, { ...START, run: 3 }, undefined) };
    expect(again).toEqual(once);
    expect(run(model, { run: 3 })).toEqual(once);
    expect(run(model, { run: 4 }).finalRoll).not.toBe(once.finalRoll);
  });

  it('keeps the momentum of body and array together when nothing acts from outside', () => {
    const plant = { ...PLANT, stiffness: 0, damping: 0 };
    const model = build({ plant, law: 'feedback', gains: [40, 8, 0, 0, 0] }, noisy);
    const record = createRollRecord(1000, 1);
    runRollLoop(
      model,
      createRollLoopWork(model),
      NO_DISTURBANCE,
      { ...START, rollRate: 0.5, duration: 2 },
      record,
    );
    for (let i = 0; i < 1000; i++) {
      const row = record.rows.subarray(9 * i, 9 * i + 9);
      const total = plant.inertia * row[RECORD.rollRate]! + plant.momentum * Math.sin(row[RECORD.tilt]!);
      expectClose(total, plant.inertia * 0.5, { rel: 1e-12 }); // measured 7e-16
    }
  });

  it('takes a shove as a jump of roll rate, and counts the fall when it is too much', () => {
    const model = build({ law: 'feedback', gains: FEEDBACK });
    const shove = (size: number): RollOutcome =>
      run(model, { roll: 0 }, { ...NO_DISTURBANCE, shoves: Float64Array.of(1, size) });
    const small = shove(0.1);
    expect(small.hasFallen).toBe(false);
    expect(small.peakTilt).toBeGreaterThan(Math.asin(0.1 / 0.6) * 0.9);
    /* no more momentum can be taken up than h sin(limit) = 0.59 N*m*s */
    expect(shove(0.6).hasFallen).toBe(true);
    expect(shove(0.6).duration).toBeLessThan(4);
  });

  it('leaks no yaw from a matched pair, and what a mismatch leaves from an unmatched one', () => {
    const model = build({ law: 'feedback', gains: FEEDBACK });
    const even = run(model, { roll: 0.05 });
    expectClose(even.peakYawMomentum, 0, { abs: 1e-15 });
    if (model.actuator.kind !== 'servo') throw new Error('a pair');
    const [left, right] = model.actuator.gimbals;
    const odd = build(
      { law: 'feedback', gains: FEEDBACK },
      {
        actuator: {
          kind: 'servo',
          gimbals: [
            { ...left!, momentum: 0.31, yawMomentum: 0.31 },
            { ...right!, momentum: 0.29, yawMomentum: -0.29 },
          ],
        },
      },
    );
    const uneven = run(odd, { roll: 0.05 });
    expectClose(uneven.peakYawMomentum, 0.02 * (1 - Math.cos(uneven.peakTilt)), { rel: 1e-9 }); // measured 7e-14
  });

  it('holds a float’s roll down and re-centres, with restoring given as a curve or as a sine', () => {
    const plant = { ...PLANT, inertia: 10, stiffness: -20, damping: 0.5, momentum: 20 };
    const gains = [0.8, 0.5, -1.5, 0, 0];
    const model = build({ plant, law: 'feedback', gains });
    const curve = Float64Array.from({ length: 2001 }, (_, i) => -20 * Math.sin(-1 + i / 1000));
    const table = { ...model, body: { ...model.body, curve, curveReach: 1 } };
    const held = { ...run(model, { roll: 0.2, duration: 10 }) };
    expect(Math.abs(held.finalRoll)).toBeLessThan(0.005);
    expectClose(run(table, { roll: 0.2, duration: 10 }).finalRoll, held.finalRoll, { abs: 1e-6 }); // measured 6e-10
    const off = run(build({ plant, law: 'feedback', gains: [0, 0, 0, 0, 0] }), { roll: 0.2, duration: 10 });
    expect(off.peakRoll).toBeGreaterThan(0.199);
    expect(off.meanRoll).toBeGreaterThan(0.08);
  });

  it('follows a moment given as columns: a steady one leans the body until gravity carries it', () => {
    const model = build({ law: 'feedback', gains: FEEDBACK });
    const moment = {
      step: 1,
      isCyclic: true,
      moment: Float64Array.of(0.15, 0.15),
      shoves: new Float64Array(0),
    };
    expectClose(run(model, { roll: 0, duration: 20 }, moment).finalRoll, -Math.asin(0.15 / 7.5), {
      rel: 1e-3,
    }); // measured 2e-7
  });
});

describe('trim', () => {
  it('brings the tilt back to rest under a steady moment, where plain feedback leaves it out', () => {
    const moment = { step: 1, isCyclic: true, moment: Float64Array.of(0.15), shoves: new Float64Array(0) };
    const plain = run(
      build({ law: 'feedback', gains: [60, 10, 1.5, 0, 0] }),
      { roll: 0, duration: 30 },
      moment,
    );
    expect(Math.abs(plain.finalTilt)).toBeGreaterThan(0.3);
    const trimmed = run(
      build({ law: 'feedback', gains: [60, 10, 1.5, 0, 0.4] }),
      { roll: 0, duration: 40 },
      moment,
    );
    expect(trimmed.hasFallen).toBe(false);
    expect(Math.abs(trimmed.finalTilt)).toBeLessThan(0.01);
  });
});

describe('reaction wheel', () => {
  const plant: RollTiltPlant = {
    ...PLANT,
    actuator: 'wheelTorque',
    servoLag: 0.005,
    delay: 0.003,
    sampleTime: 0.002,
  };
  const gains = [20, 4, 0.5];
  const model = (change: Partial<Extract<RollActuator, { kind: 'wheel' }>> = {}): RollLoopModel =>
    build(
      { plant: { ...plant, actuator: 'tilt' }, law: 'reactionWheel', gains, substeps: 8 },
      {
        actuator: {
          kind: 'wheel',
          line: { ...PERFECT_SERVO, delay: 0 },
          lag: 0.005,
          stallTorque: 1e3,
          torqueLimit: 1e3,
          noLoadMomentum: 1e6,
          ...change,
        },
        loopDelay: 0.003,
      },
    );
  it('answers as its linear model says', () => {
    const loop = linear(plant, 'reactionWheel', gains);
    const decay = measureDecay(loop);
    expect(decay).toBeGreaterThan(0);
    expectClose(measureGrowth(model(), 30), -decay, { rel: 0.02 }); // measured 8e-4
    const verdict = judgeLoop(loop);
    if (verdict.kind === 'fails') throw new Error('must hold');
    const growthAt = (f: number): number =>
      measureGrowth({
        ...model(),
        controller: buildController(
          'reactionWheel',
          gains.map((g) => g * f),
        ),
      });
    expect(growthAt(verdict.margins.gainUp * 0.98)).toBeLessThan(0);
    expect(growthAt(verdict.margins.gainUp * 1.02)).toBeGreaterThan(0);
  });
  it('falls once its motor runs out of speed', () => {
    const lean = { roll: 0.06, duration: 5 };
    expect(run(model(), lean).hasFallen).toBe(false);
    /* the lean needs sqrt(I k) * 0.06 = 0.09 N*m*s at the least */
    expect(run(model({ stallTorque: 5, noLoadMomentum: 0.08 }), lean).hasFallen).toBe(true);
  });
});

describe('passive gimbal', () => {
  const p = {
    inertia: 0.8,
    stiffness: 20,
    damping: 0,
    momentum: 1.5,
    gimbalInertia: 0.012,
    gimbalStiffness: 0.5,
    gimbalDamping: 0,
  };
  const build2 = (momentum: number, gimbalDamping = 0): RollLoopModel =>
    build(
      {
        plant: { ...PLANT, inertia: p.inertia, stiffness: p.stiffness, damping: 0 },
        law: 'feedback',
        gains: [0, 0, 0, 0, 0],
        substeps: 4,
      },
      {
        controller: { kind: 'passive' } satisfies Controller,
        actuator: {
          kind: 'free',
          momentum,
          yawMomentum: 0,
          gimbalInertia: p.gimbalInertia,
          gimbalStiffness: p.gimbalStiffness,
          gimbalDamping,
          tiltMin: -1.2,
          tiltMax: 1.2,
        },
      },
    );
  it('stands above the momentum of Routh’s condition and falls below it', () => {
    const verdict = judgeFreeGimbal(p);
    if (verdict.kind !== 'holds') throw new Error('must hold');
    expect(run(build2(verdict.least * 1.02), { roll: 1e-3, duration: 30 }).hasFallen).toBe(false);
    expect(run(build2(verdict.least * 0.98), { roll: 1e-3, duration: 30 }).hasFallen).toBe(true);
  });
  it('swings at its two frequencies', () => {
    const record = createRollRecord(8000, 1);
    const model = build2(1.5);
    runRollLoop(
      model,
      createRollLoopWork(model),
      NO_DISTURBANCE,
      { ...START, roll: 1e-5, duration: 16 },
      record,
    );
    const { im } = findEigenvalues(buildFreeGimbal(p));
    const slow = Math.min(...[...im].filter((x) => x > 0));
    expectClose(slow, 2.541656098, { rel: 1e-8 });
    let last = Number.NaN;
    const crossings: number[] = [];
    /* an average over one fast period leaves the slow swing */
    const window = Math.round((2 * Math.PI) / 12.6983588551 / 0.002);
    for (let i = 0; i + window < 8000; i += 1) {
      let sum = 0;
      for (let k = 0; k < window; k++) sum += record.rows[9 * (i + k) + RECORD.roll]!;
      if (sum < 0 && last >= 0) crossings.push(i * 0.002);
      last = sum;
    }
    const period = (crossings[crossings.length - 1]! - crossings[0]!) / (crossings.length - 1);
    expectClose((2 * Math.PI) / period, slow, { rel: 2e-3 }); // measured 3e-5
  });
  it('drifts away slowly with friction in the gimbal, at the rate of the eigenvalue', () => {
    const { re } = findEigenvalues(buildFreeGimbal({ ...p, gimbalDamping: 0.005 }));
    const growth = Math.max(...re);
    expectClose(growth, 0.04232784, { rel: 1e-6 });
    expectClose(measureGrowth(build2(1.5, 0.005), 60), growth, { rel: 0.05 }); // measured 9e-4
  });
});

describe('wheel speed while the gimbal moves', () => {
  const servo = { ...PERFECT_SERVO, lag: 0.02 };
  const INERTIA = 6e-4;
  const spun = (spin: { gain: number; limit: number; drag: number }): RollLoopModel =>
    build(
      { law: 'feedback', gains: FEEDBACK },
      {
        actuator: {
          kind: 'servo',
          gimbals: [
            {
              servo,
              momentum: 0.6,
              yawMomentum: 0,
              follow: 1,
              spin: { kind: 'governed', inertia: INERTIA, ...spin },
            },
          ],
        },
      },
    );
  const momentumAfter = (model: RollLoopModel, duration: number, roll = 0): number => {
    const work = createRollLoopWork(model);
    runRollLoop(model, work, NO_DISTURBANCE, { ...START, roll, duration }, undefined);
    return work.actuator.momentum[0]!;
  };

  it('coasts down at drag over inertia when the motor is off', () => {
    /* at rest upright the momentum is inertia times speed: exp(-t drag / inertia) */
    const left = momentumAfter(spun({ gain: 0, limit: 0, drag: 3e-5 }), 10);
    expectClose(left, 0.6 * Math.exp((-10 * 3e-5) / INERTIA), { rel: 2e-5 }); // measured 6e-6, the step's order
  });

  it('holds its speed, not its momentum, with a strong motor: h = J (speed + roll rate sin(tilt))', () => {
    const model = spun({ gain: 0.3, limit: 10, drag: 3e-5 });
    const work = createRollLoopWork(model);
    runRollLoop(model, work, NO_DISTURBANCE, { ...START, roll: 0.08, duration: 0.06 }, undefined);
    const turned = INERTIA * work.body[1]! * Math.sin(work.actuator.tilt[0]!);
    expect(Math.abs(turned)).toBeGreaterThan(1e-5);
    expectClose(work.actuator.momentum[0]! - 0.6, turned, { rel: 0.2 }); // measured 0.085: the motor lags J / gain = 2 ms
  });

  it('falls when the wheel has coasted below the least speed, at about that speed', () => {
    const least = findLeastSpeed(linear(PLANT, 'feedback', FEEDBACK));
    if (least.kind !== 'found') throw new Error('there is a least speed');
    /* sensor noise keeps the body from resting on the edge */
    const model = {
      ...spun({ gain: 0, limit: 0, drag: 2e-5 }),
      sensor: { ...quietSensor(0.002), gyroNoise: 1e-3 },
    };
    const work = createRollLoopWork(model);
    const out = runRollLoop(model, work, NO_DISTURBANCE, { ...START, roll: 1e-3, duration: 90 }, undefined);
    expect(out.hasFallen).toBe(true);
    /* it goes on falling slowly for a while below the border, so the wheel is a little slower when it is down */
    const share = work.actuator.momentum[0]! / 0.6;
    expect(share).toBeLessThan(least.share);
    expect(share).toBeGreaterThan(0.7 * least.share); // measured 0.80
  });
});

describe('jitter of the loop', () => {
  it('spreads the answer and leaves its mean: a run with jitter stays near the run without', () => {
    const steady = run(build({ law: 'feedback', gains: FEEDBACK }), { roll: 0.05, duration: 0.5 }).finalRoll;
    const jittered = Array.from(
      { length: 30 },
      (_, i) =>
        run(build({ law: 'feedback', gains: FEEDBACK }, { loopJitter: 0.0015 }), {
          roll: 0.05,
          duration: 0.5,
          run: i,
        }).finalRoll,
    );
    const mean = jittered.reduce((sum, x) => sum + x / 30, 0);
    const spread = Math.sqrt(jittered.reduce((sum, x) => sum + (x - mean) ** 2 / 29, 0));
    expect(spread).toBeGreaterThan(1e-6);
    expectClose(mean, steady, { abs: (4 * spread) / Math.sqrt(30) });
  });
});
