import { describe, expect, it } from 'vitest';
import {
  arrayJacobian,
  arrayMomentum,
  arrayTorque,
  compileArray,
  nameTorque,
  spinAxisAt,
  spinReactionTorque,
  wheelMomenta,
} from '../../../src/core/physics/arrayLaw';
import { pairLeak, scissoredMomentum, scissoredTorque } from '../../../src/core/physics/closedForms';
import { startState } from '../../../src/core/physics/freeMotion';
import { supportReaction } from '../../../src/core/physics/reactions';
import { starAcceleration } from '../../../src/core/physics/starDynamics';
import { compileStar, type StarDescription } from '../../../src/core/physics/starModel';
import { createStarWork } from '../../../src/core/physics/starWork';
import { expectClose } from '../../support/closeTo';
import { between, createRandom, randomStar, randomStart } from './randomStar';

const degree = Math.PI / 180;
const still = new Float64Array(3);

/** One wheel standing upright, gimbal axis to the left: tilt brings its momentum forward. */
const single = compileArray([{ gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 0.004 }]);
/** Counter-rotating pair: the second stands on its head and tilts the other way by the same number. */
const pair = compileArray([
  { gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 0.004 },
  { gimbalAxis: [0, -1, 0], spinAxis: [0, 0, -1], axialInertia: 0.004 },
]);

describe('array law, by hand', () => {
  // h = 2 N*m*s, tilt rate 1.5 rad/s about +y. By hand: h = 2 (sin t, 0, cos t), its rate 3 (cos t, 0, -sin t).
  const cases: readonly [number, readonly number[], readonly number[]][] = [
    [0, [0, 0, 2], [-3, 0, 0]],
    [30, [1, 0, Math.sqrt(3)], [-1.5 * Math.sqrt(3), 0, 1.5]],
    [60, [Math.sqrt(3), 0, 1], [-1.5, 0, 1.5 * Math.sqrt(3)]],
  ];
  it.each(cases)('a single gimbal at %i degrees, body still', (angle, momentum, torque) => {
    const out = new Float64Array(3).fill(Number.NaN);
    arrayMomentum(single, [angle * degree], [2], out);
    expectClose(out, momentum, { abs: 1e-14 }); // measured 4e-16
    arrayTorque(single, [angle * degree], [1.5], [2], still, out);
    expectClose(out, torque, { abs: 1e-14 }); // measured 5e-16
    expect(nameTorque(out)).toEqual({ roll: out[0], pitch: out[1], yawLeak: out[2] });
  });

  it('a body that turns feels the wheel: minus w x h', () => {
    const out = new Float64Array(3);
    // Roll at 0.4 rad/s under an upright wheel of 2: torque -(0.4, 0, 0) x (0, 0, 2) = (0, 0.8, 0).
    arrayTorque(single, [0], [0], [2], new Float64Array([0.4, 0, 0]), out);
    expectClose(out, [0, 0.8, 0], { abs: 1e-15 });
  });

  it('momentum of a wheel counts the turning of its gimbal', () => {
    const out = new Float64Array(1);
    // Body yaw 3 rad/s is all along an upright spin axis; at 90 degrees none of it is.
    wheelMomenta(single, [0], [7], [500], [0, 0, 3], out);
    expectClose(out, 0.004 * 503, { rel: 1e-15 });
    wheelMomenta(single, [90 * degree], [7], [500], [0, 0, 3], out);
    expectClose(out, 0.004 * 500, { rel: 1e-15 });
  });

  it('a scissored pair rolls only: yaw and pitch zero to rounding at any tilt', () => {
    // Source: Brown and Peck, JGCD 2009; H = 1, 30 degrees, 1.5 rad/s gives 2 H rate cos = 2.59807621135.
    const out = new Float64Array(3);
    arrayTorque(pair, [30 * degree, 30 * degree], [1.5, 1.5], [1, 1], still, out);
    expectClose(out[0]!, -2.59807621135, { rel: 1e-10 });
    expectClose(-out[0]!, scissoredTorque(1, 30 * degree, 1.5), { rel: 1e-14 });
    arrayMomentum(pair, [30 * degree, 30 * degree], [1, 1], out);
    expectClose(out, [scissoredMomentum(1, 30 * degree), 0, 0], { abs: 1e-15 });
    for (let tilt = -80; tilt <= 80; tilt += 5) {
      arrayTorque(pair, [tilt * degree, tilt * degree], [1.5, 1.5], [1, 1], still, out);
      expect(Math.abs(out[1]!)).toBeLessThan(1e-15);
      expect(Math.abs(out[2]!)).toBeLessThan(1e-15);
    }
  });

  it('a single wheel leaves yaw when tilted (common practice)', () => {
    const out = new Float64Array(3);
    arrayTorque(single, [30 * degree], [1.5], [1], still, out);
    expectClose(out[2]!, 0.75, { rel: 1e-14 });
  });

  it('a motor that speeds a wheel up turns the body the other way', () => {
    const out = new Float64Array(3);
    spinReactionTorque(pair, [90 * degree, 0], [0.2, 0.3], out);
    expectClose(out, [-0.2, 0, 0.3], { abs: 1e-15 });
  });
});

describe('what an imperfect pair leaves over', () => {
  it('is what the law gives for the faulty pair, less the true one', () => {
    const fault = { speedMismatch: 0.04, tiltLag: 0.05, rateLag: 0.3, axisError: 0.02 };
    const tilt = 0.6;
    const rate = 1.5;
    const faulty = compileArray([
      { gimbalAxis: [0, 1, 0], spinAxis: [0, 0, 1], axialInertia: 1 },
      {
        gimbalAxis: [Math.sin(fault.axisError), -Math.cos(fault.axisError), 0],
        spinAxis: [0, 0, -1],
        axialInertia: 1,
      },
    ]);
    const torque = new Float64Array(3);
    const momentum = new Float64Array(3);
    const tilts = [tilt, tilt - fault.tiltLag];
    arrayTorque(faulty, tilts, [rate, rate - fault.rateLag], [2 * 1.02, 2 * 0.98], still, torque);
    arrayMomentum(faulty, tilts, [2 * 1.02, 2 * 0.98], momentum);
    const leak = pairLeak(2, tilt, rate, fault);
    expectClose([torque[0]! + scissoredTorque(2, tilt, rate), torque[1]!, torque[2]!], leak.torque, {
      abs: 1e-14,
    });
    expectClose([momentum[0]! - scissoredMomentum(2, tilt), momentum[1]!, momentum[2]!], leak.momentum, {
      abs: 1e-14,
    });
    expect(Math.abs(leak.torque[2])).toBeGreaterThan(0.1);
  });

  it('is nothing for a true pair', () => {
    const leak = pairLeak(2, 0.6, 1.5, { speedMismatch: 0, tiltLag: 0, rateLag: 0, axisError: 0 });
    expectClose([...leak.torque, ...leak.momentum], new Float64Array(6), { abs: 1e-15 });
  });
});

describe('derivatives of the law', () => {
  it('the Jacobian is the slope of the momentum, and minus it times the rates is the torque', () => {
    const random = createRandom(11);
    for (let k = 0; k < 20; k++) {
      const star = randomStar(random, { gyros: 4, footing: 'firm', drives: ['servo'], spins: ['coasting'] });
      const array = compileStar(star).array;
      const draw = (size: number): number[] => Array.from({ length: 4 }, () => between(random, -size, size));
      const tilt = draw(1);
      const rate = draw(3);
      const h = draw(2);
      const A = new Float64Array(12);
      arrayJacobian(array, tilt, h, A);
      const up = new Float64Array(3);
      const down = new Float64Array(3);
      const torque = new Float64Array(3);
      arrayTorque(array, tilt, rate, h, still, torque);
      const e = 1e-5;
      for (let i = 0; i < 4; i++) {
        const moved = (d: number): number[] => tilt.map((t, j) => (j === i ? t + d : t));
        arrayMomentum(array, moved(e), h, up);
        arrayMomentum(array, moved(-e), h, down);
        const slope = up.map((v, j) => (v - down[j]!) / (2 * e));
        expectClose([A[i]!, A[4 + i]!, A[8 + i]!], slope, { abs: 1e-9 }); // measured 3.9e-11
      }
      const byJacobian = [0, 1, 2].map((j) => -rate.reduce((sum, r, i) => sum + A[4 * j + i]! * r, 0));
      expectClose(torque, byJacobian, { abs: 1e-13 }); // measured 2e-15
      const s = new Float64Array(3);
      spinAxisAt(array, 2, tilt[2]!, s);
      expectClose(Math.hypot(...s), 1, { rel: 1e-15 });
    }
  });
});

describe('the star obeys the array law', () => {
  it('what speed alone adds to the support moment on firm feet is minus the array torque', () => {
    for (let seed = 1; seed <= 10; seed++) {
      const random = createRandom(seed);
      const drawn = randomStar(random, { gyros: 3, footing: 'firm', drives: ['servo'], spins: ['coasting'] });
      const description: StarDescription = {
        ...drawn,
        gyros: drawn.gyros.map((g) => ({ ...g, drive: { kind: 'servo', input: 'acceleration' } })),
      };
      const model = compileStar(description);
      const work = createStarWork(model);
      const effort = new Float64Array(model.effortSize);
      const acceleration = new Float64Array(model.accelerationSize);
      const start = randomStart(random, description, 'none');
      const momentOf = (wheelSpeed: number[]): readonly number[] => {
        const state = startState(model, { ...start, wheelSpeed });
        starAcceleration(model, work, state, effort, acceleration);
        return supportReaction(model, work, state, acceleration, new Float64Array(6)).moment;
      };
      const moving = momentOf([...start.wheelSpeed!]);
      const standing = momentOf([0, 0, 0]);
      const h = start.wheelSpeed!.map((speed, i) => speed * model.array.axialInertia[i]!);
      const torque = new Float64Array(3);
      arrayTorque(model.array, start.tilt!, start.tiltRate!, h, still, torque);
      const added = moving.map((m, j) => standing[j]! - m);
      expectClose(added, torque, { abs: 1e-12 }); // measured 1e-14
    }
  });
});
