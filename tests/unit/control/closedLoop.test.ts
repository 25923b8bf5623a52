import { describe, expect, it } from 'vitest';
import { runRollLoop } from '../../../src/core/control/closedLoop';
import type { Law } from '../../../src/core/control/loopModel';
import { findDelayBorder, judgeLoop, measureDecay } from '../../../src/core/control/margins';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  type RollLoopModel,
  type RollOutcome,
} from '../../../src/core/control/rollLoopModel';
import { expectClose } from '../../support/closeTo';

import {
  build,
  FEEDBACK,
  linear,
  measureGrowth,
  PLANT,
  quietSensor,
  run,
  START,
} from '../../support/rollLoopRig';

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
    expectClose(findOnset(law, gains, gainUp * 0.9, gainUp * 1.1), gainUp, { rel: 0.02 }); // measured up to 3e-4
    expectClose(findOnset(law, gains, gainDown * 0.9, gainDown * 1.1), gainDown, { rel: 0.02 }); // measured up to 1e-4
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
    expectClose(low, verdict.margins.delay, { rel: 0.02 }); // measured 8e-4
    expectClose(low, findDelayBorder(loop), { rel: 0.005 }); // measured 1.2e-3
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
      expectClose(growth, -decay, { rel: 0.02 }); // measured up to 0.015
    }
  });

  it('converges with the square of the plant step', () => {
    const final = [4, 8, 16, 128].map((substeps) => {
      const model = build({ law: 'feedback', gains: FEEDBACK, substeps });
      return run(model, { roll: 0.1, duration: 0.4 }).finalRoll;
    });
    const errors = final.slice(0, 3).map((x) => x - final[3]!);
    expectClose([errors[0]! / errors[1]!, errors[1]! / errors[2]!], [4, 4], { rel: 0.1 }); // measured 4.00 and 4.05
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
    expectClose(even.peakYawMomentum, 0, { abs: 1e-15 }); // measured 0
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
    expectClose(uneven.peakYawMomentum, 0.02 * (1 - Math.cos(uneven.peakTilt)), { rel: 1e-9 }); // measured 1e-14
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
    }); // measured 3e-7
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
