import { describe, expect, it } from 'vitest';
import { simulateExactly } from '../../../src/core/physics';
import { setUpPlan } from '../../../src/core/planning';
import type { Rig } from '../../../src/core/rig';
import { runPreview } from '../../../src/core/trial/preview';
import { Yard } from '../../../src/yard';
import type { RigBody } from '../../../src/yard/rigBody';
import { RigLoop } from '../../../src/yard/rigLoop';
import { expectClose } from '../../support/closeTo';
import {
  AS_DRAWN,
  compiledOf,
  EDGE_RIG,
  FEEDBACK_ONLY,
  FREE_RIG,
  TOP_RIG,
  yardOf,
} from '../../support/yardCases';

/** Roll every 10 ms over a second, of star and yard, after the same push under the same loop. */
function pushed(rig: Rig, step: number): { star: number[]; yard: number[]; peak: number } {
  const set = setUpPlan(compiledOf(rig));
  if (set.kind !== 'ready') throw new Error('refused');
  const { motion } = runPreview(set.setting, [], FEEDBACK_ONLY, 1, AS_DRAWN);
  const yard = yardOf(rig, { switches: FEEDBACK_ONLY, step });
  yard.push([0, 4, 0], [0, 0, 0.4], 0.1);
  const star: number[] = [];
  const rolls: number[] = [];
  for (let k = 1; k < motion.samples; k++) {
    yard.run(Math.round(0.01 / step));
    star.push(2 * Math.atan2(motion.pose[7 * k + 4] as number, motion.pose[7 * k + 3] as number));
    rolls.push(yard.lean);
  }
  return { star, yard: rolls, peak: Math.max(...star.map(Math.abs)) };
}

/** N, to the left at mid height: rises and falls smoothly over a fifth of a second. */
const pushAt = (time: number): number => (time < 0.2 ? 2 * (1 - Math.cos(10 * Math.PI * time)) : 0);

/** rad/s^2 of tilt: a rate servo with a lag of 1/80 s, sent lean and lean rate. */
const turning = (lean: number, leanRate: number, rate: number): number =>
  80 * (60 * lean + 15 * leanRate - rate);

/** A yard whose gimbals obey `turning` in place of the rig's own loop. */
class TurningLoop extends RigLoop {
  override move(body: RigBody, _time: number, lean: number, leanRate: number): void {
    const dt = 0.001;
    const turn = turning(lean, leanRate, body.tiltRate[0] as number);
    for (let i = 0; i < 2; i++) {
      const sign = i === 0 ? 1 : -1;
      const before = body.tiltRate[i] as number;
      const after = before + sign * turn * dt;
      body.nextTiltRate[i] = after;
      body.nextTilt[i] = (body.tilt[i] as number) + 0.5 * dt * (before + after);
    }
  }
}

function yardUnderLaw(rig: Rig): Yard {
  const compiled = compiledOf(rig);
  const set = setUpPlan(compiled);
  if (set.kind !== 'ready') throw new Error('refused');
  const loop = new TurningLoop(set.setting, [], FEEDBACK_ONLY, AS_DRAWN, 0.001);
  return new Yard(
    { compiled, ground: { kind: 'flat' }, switches: FEEDBACK_ONLY, doubt: AS_DRAWN },
    loop,
    0.001,
  );
}

describe('the yard against the star', () => {
  it('rolls as the star does after the same push on an edge, under the same loop and servos', () => {
    const { star, yard, peak } = pushed(EDGE_RIG, 0.001);
    expect(peak).toBeGreaterThan(0.005);
    expectClose(yard, star, { abs: 0.02 * peak }); // measured 0.0113: half a step in when a servo's turn is felt
  });

  it('rolls as the star does exactly integrated, a continuous law turning the pair', () => {
    const compiled = compiledOf(EDGE_RIG);
    const { model } = compiled;
    const exact = simulateExactly(
      compiled.star,
      { wheelSpeed: Array.from(compiled.speeds) },
      1,
      100,
      1e-11,
      (time, state, effort) => {
        effort.fill(0);
        const lean = state[0] as number;
        const leanRate = state[model.baseSpeedAt] as number;
        const turn = turning(lean, leanRate, state[model.rateAt] as number);
        effort[0] = turn;
        effort[1] = -turn;
        effort[2 * model.gimbals] = -0.4 * pushAt(time) * Math.cos(lean);
      },
    );
    const yard = yardUnderLaw(EDGE_RIG);
    const roll = [0];
    for (let k = 0; k < 1000; k++) {
      const force = pushAt(yard.time + 0.0005);
      if (force > 0) yard.push([0, force, 0], [0, 0, 0.4], 0.001);
      yard.run(1);
      if (k % 10 === 9) roll.push(yard.lean);
    }
    const star = exact.pose[0] as Float64Array;
    const peak = Math.max(...star.map(Math.abs));
    expect(peak).toBeGreaterThan(0.003);
    expectClose(roll, star, { abs: 0.005 * peak }); // measured 0.00098 of the peak
  });

  it('turns a free gimbal and the body it holds as the star does', () => {
    const compiled = compiledOf(FREE_RIG);
    const star = {
      ...compiled.star,
      gyros: compiled.star.gyros.map(({ friction: _none, ...gyro }) => gyro),
    };
    const exact = simulateExactly(star, { pose: [0.02], wheelSpeed: Array.from(compiled.speeds) }, 1, 50);
    const yard = yardOf(FREE_RIG, { switches: FEEDBACK_ONLY, lean: 0.02 });
    const roll = [yard.lean];
    const tilt = [0];
    for (let k = 1; k <= 50; k++) {
      yard.run(20);
      roll.push(yard.lean);
      tilt.push(yard.rig.tilt[0] as number);
    }
    const peak = Math.max(...(exact.pose[0] as Float64Array).map(Math.abs));
    expectClose(roll, exact.pose[0] as Float64Array, { abs: 0.005 * peak }); // measured 0.0011
    expectClose(tilt, exact.tilt[0] as Float64Array, { abs: 0.001 }); // measured 1.8e-4 rad of 0.72
  });

  it('precesses and falls as the star does on a point, wheel locked: omega x h in three dimensions', () => {
    const compiled = compiledOf(TOP_RIG);
    const start = {
      pose: [Math.cos(0.05), Math.sin(0.05), 0, 0],
      wheelSpeed: Array.from(compiled.speeds),
    };
    const exact = simulateExactly(compiled.star, start, 0.5, 10);
    const far = (step: number): number => {
      const yard = yardOf(TOP_RIG, { switches: FEEDBACK_ONLY, lean: 0.1, step });
      let most = 0;
      for (let k = 1; k <= 10; k++) {
        yard.run(Math.round(0.05 / step));
        const [w, x, y, z] = exact.pose.map((column) => column[k] as number) as [
          number,
          number,
          number,
          number,
        ];
        const R = yard.rig.R_WB;
        most = Math.max(most, Math.abs((R[2] as number) - 2 * (x * z + w * y)));
        most = Math.max(most, Math.abs((R[5] as number) - 2 * (y * z - w * x)));
      }
      return most;
    };
    const whole = far(0.001);
    const half = far(0.0005);
    expect(whole).toBeLessThan(0.002); // measured 8.1e-4 of a lean that grows to 0.5
    // The joint is taken back to its place to first order in the step: half the step, half the error.
    expectClose(whole / half, 2, { rel: 0.05 }); // measured 2.008
  });
});
