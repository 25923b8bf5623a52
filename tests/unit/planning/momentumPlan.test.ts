import { describe, expect, it, test } from 'vitest';
import {
  attemptPlan,
  createPlanWork,
  defaultPlanOptions,
  type FoundPlan,
} from '../../../src/core/planning/momentumPlan';
import { scaleMomentum, shiftCentre, widenSupport } from '../../../src/core/planning/momentumPlanChanges';
import {
  checkPlanLimits,
  fillServoTorque,
  isWithinLimits,
} from '../../../src/core/planning/momentumPlanCheck';
import { planMomentum } from '../../../src/core/planning/momentumPlanDiagnosis';
import type {
  FirmSupport,
  LeanSupport,
  MomentumPlanProblem,
} from '../../../src/core/planning/momentumPlanProblem';
import { sizeMomentum } from '../../../src/core/planning/momentumPlanSizing';
import { expectClose } from '../../support/closeTo';
import {
  cyclicPlan,
  leaningBody,
  pairOfWheels,
  reactionWheel,
  swayingFeet,
  walkingPlan,
} from '../../support/planCases';

const plan = (problem: MomentumPlanProblem): FoundPlan => {
  const found = attemptPlan(problem, defaultPlanOptions, createPlanWork());
  if (found.kind !== 'planned') throw new Error(found.kind);
  return found;
};

describe('a plan on firm feet', () => {
  const problem = walkingPlan(120, 3);
  const [axis] = plan(problem).axes;

  test('closes on itself', () => {
    for (const part of [axis.momentum, axis.tilt, axis.torque, axis.tiltRate])
      expect(part[120]).toBe(part[0]);
  });

  test('array and support together give what is asked', () => {
    const { ask } = problem.axes[0].support as FirmSupport;
    const given = axis.torque.slice(0, 120).map((t, k) => t + 60 * axis.pressure[k]);
    expectClose(given, ask, { abs: 1e-14 }); // measured 2e-16
  });

  test('torque is minus the rate of 2 h sin(tilt)', () => {
    // Brown and Peck, JGCD 2009: a scissored pair gives 2 h tilt rate cos(tilt)
    const law = axis.tilt.map((tilt, k) => -axis.tiltRate[k] * Math.cos(tilt));
    expectClose(axis.torque, law, { abs: 1e-14 }); // measured 2e-16
    expectClose(
      axis.momentum,
      axis.tilt.map((tilt) => Math.sin(tilt)),
      { abs: 1e-14 },
    );
  });

  test('uses asymmetrical tilt limits to the full and no more', () => {
    const lopsided = { ...pairOfWheels, tiltMin: -0.2, tiltMax: 0.8 };
    const [found] = plan(walkingPlan(120, 3, lopsided)).axes;
    expect(Math.min(...found.tilt)).toBeGreaterThanOrEqual(-0.2 - 1e-9);
    expect(Math.max(...found.tilt)).toBeLessThanOrEqual(0.8 + 1e-9);
    expect(Math.max(...found.tilt)).toBeGreaterThan(0.5);
  });

  test('the check of limits says no to a plan moved past one', () => {
    const spoiled = { ...axis, momentum: axis.momentum.map((e) => 1.02 * e) };
    const limits = checkPlanLimits(problem, [spoiled], 5);
    expect(isWithinLimits(problem, limits, 1e-7)).toBe(false);
    const unknown = { ...axis, momentum: axis.momentum.map((e, k) => (k === 7 ? Number.NaN : e)) };
    expect(isWithinLimits(problem, checkPlanLimits(problem, [unknown], 5), 1e-7)).toBe(false);
  });
});

describe('a plan for a body that leans', () => {
  const support = leaningBody(201, 1, 2);
  const problem: MomentumPlanProblem = {
    ...cyclicPlan([{ array: pairOfWheels, support, bodyRate: null }], 200, 2),
    ends: { kind: 'given', start: [{ momentum: 0.1, lean: 0.01, leanRate: 0 }], end: [null] },
  };

  test('moves as the equation of motion says, by a Runge-Kutta run of its torque', () => {
    const [axis] = plan(problem).axes;
    const h = 0.01 / 20;
    let [lean, rate] = [0.01, 0];
    for (let k = 0; k < 200; k++) {
      const [d0, d1] = [support.demand[k], support.demand[k + 1]];
      const pull = (x: number, v: number, share: number) =>
        (support.stiffness * x - support.damping * v + d0 + share * (d1 - d0) + axis.torque[k]) /
        support.inertia;
      for (let j = 0; j < 20; j++) {
        const s = j / 20;
        const a1 = pull(lean, rate, s);
        const a2 = pull(lean + (h / 2) * rate, rate + (h / 2) * a1, s + 1 / 40);
        const a3 = pull(lean + (h / 2) * (rate + (h / 2) * a1), rate + (h / 2) * a2, s + 1 / 40);
        const a4 = pull(lean + h * (rate + (h / 2) * a2), rate + h * a3, s + 1 / 20);
        lean += h * rate + ((h * h) / 6) * (a1 + a2 + a3);
        rate += (h / 6) * (a1 + 2 * a2 + 2 * a3 + a4);
      }
      // the motion is unstable, so each interval starts from the plan's own node
      expectClose(lean, axis.lean[k + 1], { abs: 1e-13 }, `lean ${k + 1}`); // measured below 3e-15
      expectClose(rate, axis.leanRate[k + 1], { abs: 1e-12 }, `lean rate ${k + 1}`); // measured below 1e-13
      lean = axis.lean[k + 1];
      rate = axis.leanRate[k + 1];
    }
  });

  test('a float settles a roll it is let go with', () => {
    const float: LeanSupport = {
      ...leaningBody(301, 0, 1),
      stiffness: -120,
      damping: 1,
      leanMin: -0.3,
      leanMax: 0.3,
    };
    const roll: MomentumPlanProblem = {
      ...cyclicPlan([{ array: pairOfWheels, support: float, bodyRate: null }], 300, 6),
      ends: { kind: 'given', start: [{ momentum: 0, lean: 0.2, leanRate: 0 }], end: [null] },
    };
    const [axis] = plan(roll).axes;
    const left = Math.max(...axis.lean.slice(250).map(Math.abs));
    // untouched it would still swing by 0.2 exp(-d t / (2 I)) = 0.2 exp(-2.1)
    expect(left).toBeLessThan(0.2 * Math.exp(-2.5));
  });
});

describe('servo torque', () => {
  test('keeps its limit, gyroscopic back-load of the body rate included', () => {
    const servo = { torque: 0.12, gimbalInertia: 4e-4, wheelMomentum: 0.5, gimbals: 1 };
    const bodyRate = Float64Array.from({ length: 120 }, (_, k) => -0.15 * Math.cos((2 * Math.PI * k) / 120));
    const loaded = (limit: number): MomentumPlanProblem =>
      cyclicPlan(
        [
          {
            array: { ...pairOfWheels, servo: { ...servo, torque: limit } },
            support: swayingFeet(120, 3),
            bodyRate,
          },
        ],
        120,
        2.4,
      );
    const easy = plan(loaded(10));
    const used = Math.max(...easy.axes[0].servoTorque.map(Math.abs));
    const limit = 0.9 * used;
    const tight = plan(loaded(limit));
    const worst = tight.limits.find((f) => f.limit === 'servo torque');
    expect(worst?.ask).toBeLessThanOrEqual(limit * (1 + 1e-7));
    expect(worst?.ask).toBeGreaterThan(0.99 * limit);
    expect(tight.objective).toBeGreaterThan(easy.objective);
    expect(planMomentum(loaded(0.05), defaultPlanOptions, createPlanWork()).kind).toBe('impossible');
  });
});

describe('when there is no plan', () => {
  const explain = (
    problem: MomentumPlanProblem,
    candidates: Parameters<typeof planMomentum>[3] = () => [],
  ) => {
    const outcome = planMomentum(problem, defaultPlanOptions, createPlanWork(), candidates);
    if (outcome.kind !== 'impossible') throw new Error(outcome.kind);
    return outcome;
  };

  test('a mean moment says how far to move the centre of mass', () => {
    const balanced = walkingPlan(120, 2);
    const off = shiftCentre(balanced, 0, 0.013);
    const { limit, shortBy, shift, cures } = explain(off);
    expect(limit).toBe('mean moment');
    // ask of a constant 60 N * 13 mm; the folded supports trim what the mean of their bounds allows
    expect(shift).toBeLessThan(0);
    expectClose(shortBy, -60 * (shift as number), { rel: 1e-12 }); // measured 2e-16
    expect(cures.map(({ label }) => label)).toContain('mean moment');
    expect(
      attemptPlan(shiftCentre(off, 0, 0.99 * (shift as number)), defaultPlanOptions, createPlanWork()).kind,
    ).toBe('impossible');
  });

  test('a leaning body with a mean moment too large to lean against', () => {
    const support = leaningBody(100, 0.5, 2);
    const demand = support.demand.map((v) => v + 27 * 0.08 + 0.78);
    const { limit, shift } = explain(
      cyclicPlan([{ array: pairOfWheels, support: { ...support, demand }, bodyRate: null }], 100, 2),
    );
    expect(limit).toBe('mean moment');
    expectClose(shift as number, -0.01, { rel: 1e-9 }); // measured 4e-16
  });

  test('too little momentum says how much is missing, and both cures are proven', () => {
    const problem = walkingPlan(120, 5);
    const { limit, shortBy, cures } = explain(problem);
    expect(limit).toBe('momentum');
    const enough = scaleMomentum(problem, 1 + 1.001 * shortBy);
    const few = scaleMomentum(problem, 1 + 0.99 * shortBy);
    expect(attemptPlan(enough, defaultPlanOptions, createPlanWork()).kind).toBe('planned');
    expect(attemptPlan(few, defaultPlanOptions, createPlanWork()).kind).toBe('impossible');
    const wider = cures.find(({ label }) => label === 'centre of pressure');
    const narrow = widenSupport(problem, 0.99 * (wider?.amount as number));
    expect(attemptPlan(narrow, defaultPlanOptions, createPlanWork()).kind).toBe('impossible');
  });

  test('a weak reaction wheel lacks torque', () => {
    const { limit, shortBy } = explain(walkingPlan(120, 3.2, { ...reactionWheel, torque: 1 }));
    expect(limit).toBe('torque');
    // ask of 3.2 at its peak less what 60 N on 30 mm of foot gives; the peak lies on a node
    expectClose(shortBy, 3.2 - 1.8 - 1, { rel: 1e-8 }); // measured 1e-10
  });

  test('slow gimbals lack tilt rate', () => {
    const slow = { ...pairOfWheels, momentum: 4, tiltRate: 0.3 };
    const problem = walkingPlan(120, 3.2, slow);
    const { cures } = explain(problem);
    const faster = cures.find(({ label }) => label === 'tilt rate');
    expect(faster?.plan.kind).toBe('planned');
    expect(faster?.amount).toBeGreaterThan(0.04);
  });

  test("a caller's candidates are tried, and only those that work come back", () => {
    const problem = walkingPlan(120, 5);
    const { cures } = explain(problem, () => [
      { label: 'slower', problem: { ...walkingPlan(120, 2), step: 0.03 } },
      { label: 'hardly wider', problem: widenSupport(problem, 0.001) },
    ]);
    expect(cures.map(({ label }) => label)).toContain('slower');
    expect(cures.map(({ label }) => label)).not.toContain('hardly wider');
  });
});

describe('the smallest array', () => {
  test.each([
    ['firm feet', () => walkingPlan(96, 5)],
    [
      'a binding ellipse',
      () => walkingPlan(96, 3, { ...pairOfWheels, tiltRate: 1.2, tiltMin: -1.3, tiltMax: 1.3 }),
    ],
    [
      'a lean',
      () => cyclicPlan([{ array: pairOfWheels, support: leaningBody(96, 8, 2), bodyRate: null }], 96, 2),
    ],
    [
      'two axes',
      () =>
        cyclicPlan(
          [0, 0.25].map((phase) => ({
            array: pairOfWheels,
            support: swayingFeet(96, 4, phase),
            bodyRate: null,
          })),
          96,
          2.4,
        ),
    ],
  ])('%s: that much is enough, a hundredth less is not', (_, draw) => {
    const problem = draw();
    const sized = sizeMomentum(problem, 0, defaultPlanOptions, createPlanWork());
    if (sized.kind !== 'sized') throw new Error(sized.kind);
    const attempt = (share: number) =>
      attemptPlan(scaleMomentum(problem, share), defaultPlanOptions, createPlanWork()).kind;
    expect(attempt(sized.share)).toBe('planned');
    expect(attempt(0.99 * sized.share)).toBe('impossible');
    expect(attempt(0.9999 * sized.share)).toBe('impossible');
  });

  test('with a spare of a fifth, a fifth of the momentum stays unused', () => {
    const problem = walkingPlan(96, 5);
    const sized = sizeMomentum(problem, 0.2, defaultPlanOptions, createPlanWork());
    const bare = sizeMomentum(problem, 0, defaultPlanOptions, createPlanWork());
    if (sized.kind !== 'sized' || bare.kind !== 'sized') throw new Error('not sized');
    expectClose(sized.share, bare.share / 0.8, { rel: 1e-9 });
    const used = Math.max(...sized.plan.axes[0].momentum.map(Math.abs));
    expectClose(used / (sized.momentum[0] * Math.sin(0.5)), 0.8, { rel: 1e-8 }); // measured 3e-11
  });

  test('servo limits and all', () => {
    const servo = { torque: 0.3, gimbalInertia: 4e-4, wheelMomentum: 0.5, gimbals: 1 };
    const problem = walkingPlan(96, 5, { ...pairOfWheels, servo });
    const sized = sizeMomentum(problem, 0, defaultPlanOptions, createPlanWork());
    expect(sized.kind).toBe('sized');
  });
});

describe('the servo of a leaning body', () => {
  it('gives the gimbal what it and the body gain: power of the servo is that of both, the wheel held', () => {
    // J tilt'' tilt' + (-h cos(tilt) tilt') (body rate) = servo torque * tilt', whatever the three rates are.
    const h = 0.4;
    const J = 3e-4;
    const axis = {
      array: {
        kind: 'gimballed' as const,
        momentum: h,
        tiltMin: -1,
        tiltMax: 1,
        tiltRate: 10,
        torque: Number.POSITIVE_INFINITY,
        servo: { torque: 5, gimbalInertia: J, wheelMomentum: h, gimbals: 1 },
      },
      support: {
        kind: 'lean' as const,
        inertia: 1,
        stiffness: 0,
        damping: 0,
        demand: new Float64Array(2),
        weight: 10,
        leanMin: -1,
        leanMax: 1,
      },
      bodyRate: null,
    };
    const tilt = 0.5;
    const rate = 2;
    const acceleration = 7;
    const bodyRate = 0.3;
    const one = (value: number) => Float64Array.of(value);
    const schedule = {
      momentum: one(h * Math.sin(tilt)),
      torque: one(-h * Math.cos(tilt) * rate),
      tilt: one(tilt),
      tiltRate: one(rate),
      tiltAcceleration: one(acceleration),
      servoTorque: one(Number.NaN),
      pressure: one(0),
      lean: one(0),
      leanRate: one(bodyRate),
    };
    fillServoTorque(axis, schedule);
    const power = J * acceleration * rate + schedule.torque[0]! * bodyRate;
    expectClose(schedule.servoTorque[0]! * rate, power, { rel: 1e-12 }); // measured 0
  });
});
