import { describe, expect, test } from 'vitest';
import { attemptPlan, createPlanWork, defaultPlanOptions } from '../../../src/core/planning/momentumPlan';
import { defaultPlanWeights, type MomentumPlanProblem } from '../../../src/core/planning/momentumPlanProblem';
import {
  fillImpulseLimit,
  findRecentring,
  holdingTime,
  largestAngularImpulse,
  largestShove,
  timeToLimit,
  timeToTiltLimit,
  topplingRate,
} from '../../../src/core/planning/shoveLimit';
import { expectClose } from '../../support/closeTo';
import { pairOfWheels, walkingPlan } from '../../support/planCases';

const body = { inertia: 1.2, stiffness: 27 };

/** Lean after the array has given all it has against an impulse, by small exact steps of the lean's own modes. */
function leanAfter(impulse: number, momentum: number, torque: number, wait: number): number {
  const a = topplingRate(body);
  let lean = 0;
  let rate = impulse / body.inertia;
  const move = (push: number, time: number) => {
    const shift = push / body.stiffness;
    const c = Math.cosh(a * time);
    const s = Math.sinh(a * time);
    const x = lean + shift;
    lean = x * c + (rate / a) * s - shift;
    rate = x * a * s + rate * c;
  };
  move(-torque, momentum / torque);
  move(0, wait);
  return lean;
}

describe('largest survivable shove', () => {
  test('a little less comes back, a little more falls', () => {
    const limit = largestAngularImpulse(body, 0.4, 3);
    expect(leanAfter(0.999 * limit, 0.4, 3, 3)).toBeLessThan(-0.1);
    expect(leanAfter(1.001 * limit, 0.4, 3, 3)).toBeGreaterThan(0.1);
  });

  test('tends to the momentum available for a fast gimbal and for a body that does not topple', () => {
    expectClose(largestAngularImpulse(body, 0.4, 1e9), 0.4, { rel: 1e-8 }); // measured 3e-10
    expect(largestAngularImpulse(body, 0.4, Number.POSITIVE_INFINITY)).toBe(0.4);
    expect(largestAngularImpulse({ inertia: 1.2, stiffness: 0 }, 0.4, 3)).toBe(0.4);
  });

  test('never more than torque over toppling rate, however much momentum there is', () => {
    expectClose(largestAngularImpulse(body, 1e6, 3), 3 / Math.sqrt(27 / 1.2), { rel: 1e-12 }); // measured 0
  });

  test('a shove is the angular impulse over its height', () => {
    expectClose(largestShove(body, 0.4, 3, 0.25), 4 * largestAngularImpulse(body, 0.4, 3), { rel: 1e-15 });
  });

  test('the planner finds a plan just inside it and a proof just outside', () => {
    const torque = 3;
    const momentum = 0.3; // ten whole steps of full torque
    const limit = largestAngularImpulse(body, momentum, torque);
    const knocked = (share: number): MomentumPlanProblem => ({
      intervals: 250,
      step: 0.01,
      weights: defaultPlanWeights,
      ends: {
        kind: 'given',
        start: [{ momentum: 0, lean: 0, leanRate: (share * limit) / body.inertia }],
        end: [null],
      },
      axes: [
        {
          array: { kind: 'reaction', momentum, tiltMin: 0, tiltMax: 0, tiltRate: 0, torque, servo: null },
          support: {
            ...body,
            kind: 'lean',
            damping: 0,
            demand: new Float64Array(251),
            weight: 80,
            leanMin: -0.1,
            leanMax: 0.1,
          },
          bodyRate: null,
        },
      ],
    });
    expect(attemptPlan(knocked(0.998), defaultPlanOptions, createPlanWork()).kind).toBe('planned');
    expect(attemptPlan(knocked(1.002), defaultPlanOptions, createPlanWork()).kind).toBe('impossible');
  });

  test('over a plan, least where the array is fullest', () => {
    const problem = walkingPlan(120, 3);
    const plan = attemptPlan(problem, defaultPlanOptions, createPlanWork());
    if (plan.kind !== 'planned') throw new Error(plan.kind);
    const limit = new Float64Array(121);
    fillImpulseLimit(body, pairOfWheels, plan.axes[0], limit);
    const fullest = plan.axes[0].momentum.reduce(
      (best, e, k, all) => (Math.abs(e) > Math.abs(all[best]) ? k : best),
      0,
    );
    expect(limit[fullest]).toBeLessThanOrEqual(Math.min(...limit) + 1e-9);
    expect(Math.max(...limit)).toBeGreaterThan(10 * limit[fullest]);
  });
});

describe('holding', () => {
  test('a steady moment fills the array at its own rate', () => {
    expect(holdingTime(0.5, -0.25)).toBe(2);
    expect(holdingTime(0.5, 0)).toBe(Number.POSITIVE_INFINITY);
    expect(() => holdingTime(-0.1, 1)).toThrow('must not be negative');
  });

  test.each([
    [0, 0.2],
    [0.3, -0.4],
    [-0.2, 0.7],
  ])('steady torque from %d rad by integrating the tilt', (tilt, torque) => {
    const found = timeToLimit(pairOfWheels, tilt, torque);
    // midpoint rule on tilt' = -torque / (momentum cos tilt)
    const steps = 20000;
    let angle = tilt;
    for (let i = 0; i < steps; i++) {
      const half = angle - (torque * found.time) / steps / 2 / (pairOfWheels.momentum * Math.cos(angle));
      angle -= (torque * found.time) / steps / (pairOfWheels.momentum * Math.cos(half));
    }
    expect(found.limit).toBe('tilt');
    expectClose(angle, torque > 0 ? pairOfWheels.tiltMin : pairOfWheels.tiltMax, { abs: 1e-8 }); // measured 3e-11
  });

  test('the tilt rate comes first when the torque is large and the tilt limit wide', () => {
    const wide = { ...pairOfWheels, tiltMin: -1.4, tiltMax: 1.4 };
    const { time, limit } = timeToLimit(wide, 0, -3);
    expect(limit).toBe('tilt rate');
    const tilt = Math.asin((3 * time) / wide.momentum);
    expectClose(3 / (wide.momentum * Math.cos(tilt)), wide.tiltRate, { rel: 1e-12 }); // measured 1e-15
    expect(timeToLimit(wide, 0, 7)).toEqual({ time: 0, limit: 'tilt rate' });
  });

  test('time to the tilt limit at a steady rate', () => {
    expectClose(timeToTiltLimit(pairOfWheels, 0.1, 0.8), 0.5, { rel: 1e-14 });
    expectClose(timeToTiltLimit(pairOfWheels, 0.1, -0.6), 1, { rel: 1e-14 });
  });

  test('recentring takes what is stored out over the time given', () => {
    expect(findRecentring(0.3, 2, 60)).toEqual({ moment: -0.15, shift: -0.0025 });
  });
});
