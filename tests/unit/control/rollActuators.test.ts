import { describe, expect, it } from 'vitest';
import { runRollLoop } from '../../../src/core/control/closedLoop';
import type { Controller } from '../../../src/core/control/controllers';
import { findEigenvalues } from '../../../src/core/control/linear/spectrum';
import { buildController } from '../../../src/core/control/loopModel';
import { judgeLoop, measureDecay } from '../../../src/core/control/margins';
import type { RollTiltPlant } from '../../../src/core/control/plantModels';
import { buildFreeGimbal, judgeFreeGimbal } from '../../../src/core/control/plantModels';
import type { RollActuator } from '../../../src/core/control/rollActuators';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  type RollLoopModel,
} from '../../../src/core/control/rollLoopModel';
import { findLeastSpeed } from '../../../src/core/control/spinDown';
import { expectClose } from '../../support/closeTo';

import {
  build,
  FEEDBACK,
  linear,
  measureGrowth,
  PERFECT_SERVO,
  PLANT,
  quietSensor,
  run,
  START,
} from '../../support/rollLoopRig';

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
    expectClose(slow, 2.541656098, { rel: 1e-8 }); // measured 8e-12
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
    expectClose(growth, 0.04232784, { rel: 1e-6 }); // measured 4e-8
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
