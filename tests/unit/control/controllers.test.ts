import { describe, expect, it } from 'vitest';
import {
  type Controller,
  createControllerWork,
  resetController,
  stepController,
} from '../../../src/core/control/controllers';
import { explainTerms } from '../../../src/core/control/controllerTerms';
import { LAW_GAINS, readGains } from '../../../src/core/control/loopModel';
import { assembleTiltPlant, assembleWheelPlant, nameLaw } from '../../../src/core/control/rigLoop';
import { BENCH_SENSING, BENCH_SERVO } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const DT = 0.01;
const drive = (
  c: Controller,
  leans: readonly number[],
  rates: readonly number[] = [],
  tilt = 0,
): number[] => {
  const work = createControllerWork();
  resetController(work, tilt);
  return leans.map((lean, i) => stepController(c, work, lean, rates[i] ?? 0, 0, -0.5, 0.5, DT));
};

describe('laws', () => {
  it('PID to tilt: P, I and D each by itself', () => {
    const pid = { kind: 'pidTilt', kp: 0, ki: 0, kd: 0 } as const;
    expectClose(drive({ ...pid, kp: 2 }, [0.1, 0.2]), [0.2, 0.4], { rel: 1e-14 }); // measured 0
    expectClose(drive({ ...pid, ki: 10 }, [0.1, 0.2]), [0.01, 0.03], { rel: 1e-14 }); // measured 0
    expectClose(drive({ ...pid, kd: 0.5 }, [0, 0], [0.2, -0.2]), [0.1, -0.1], { rel: 1e-14 }); // measured 0
  });
  it('PID to tilt rate gathers its output; feedback adds re-centring, smoothing and trim', () => {
    expectClose(drive({ kind: 'pidTiltRate', kp: 2, ki: 0, kd: 0 }, [0.1, 0.1]), [0.002, 0.004], {
      rel: 1e-13,
    }); // measured 0
    const f = { kind: 'feedback', lean: 0, leanRate: 0, tilt: 0, tiltRate: 0, trim: 0 } as const;
    expectClose(drive({ ...f, tilt: -5 }, [0, 0], [], 0.2), [0.19, 0.1805], { rel: 1e-13 }); // measured 0
    expectClose(drive({ ...f, lean: 2, tiltRate: 0.5 }, [0.1, 0]), [0.002, 0.003], { rel: 1e-13 }); // measured 0
    expectClose(drive({ ...f, trim: 1 }, [0, 0], [], 0.2), [0.2, 0.2 + 0.2 * DT * DT], { rel: 1e-13 }); // measured 0
  });
  it('stop at the tilt limits and come off them at once, with nothing wound up', () => {
    for (const c of [
      { kind: 'pidTilt', kp: 2, ki: 20, kd: 0 },
      { kind: 'pidTiltRate', kp: 20, ki: 50, kd: 0 },
      { kind: 'feedback', lean: 20, leanRate: 0, tilt: 0, tiltRate: 0.3, trim: 0 },
    ] satisfies Controller[]) {
      const long = drive(c, [...new Array(2000).fill(0.3), ...new Array(40).fill(-0.3)]);
      expect(Math.max(...long)).toBe(0.5);
      expect(long[2039]!).toBeLessThan(0.35);
    }
  });
  it('plan plus feedback: the plan alone without gains, feedback on what differs with them, looping when cyclic', () => {
    const plan = {
      step: 0.02,
      isCyclic: true,
      tilt: Float64Array.of(0, 0.1, 0.2, 0.1),
      lean: Float64Array.of(0.01, 0.02, 0.03, 0.02),
      leanRate: new Float64Array(4),
    };
    const gains = { lean: 0, leanRate: 0, tilt: 0, tiltRate: 0, trim: 0 };
    const alone = drive({ kind: 'planned', plan, gains }, new Array(10).fill(0.5));
    expectClose(alone, [0, 0.05, 0.1, 0.15, 0.2, 0.15, 0.1, 0.05, 0, 0.05], { abs: 1e-14 }); // measured 4e-17
    const onPlan = [0.01, 0.015, 0.02, 0.025, 0.03];
    const held = drive({ kind: 'planned', plan, gains: { ...gains, lean: 10 } }, onPlan);
    expectClose(held, [0, 0.05, 0.1, 0.15, 0.2], { abs: 1e-14 }); // measured 3e-17
    const off = drive({ kind: 'planned', plan, gains: { ...gains, lean: 10 } }, [0.11]);
    expectClose(off, [10 * 0.1 * DT], { rel: 1e-12 }); // measured 0
    const scheduled = drive(
      {
        kind: 'planned',
        plan,
        gains: { ...gains, lean: 10 },
        schedule: { step: 1, factors: Float64Array.of(3, 1, 1) },
      },
      [0.11],
    );
    expectClose(scheduled, [3 * 10 * 0.1 * DT], { rel: 1e-12 }); // measured 0
  });
  it('keeps plan plus feedback within the limits', () => {
    const plan = {
      step: 1,
      isCyclic: false,
      tilt: Float64Array.of(0.45, 0.45),
      lean: new Float64Array(2),
      leanRate: new Float64Array(2),
    };
    const gains = { lean: 100, leanRate: 0, tilt: 0, tiltRate: 0, trim: 0 };
    const held = drive({ kind: 'planned', plan, gains }, new Array(100).fill(0.3));
    expectClose(Math.max(...held), 0.5, { rel: 1e-12 }); // measured 0
  });
});

describe('what each term does, in words', () => {
  const every: Controller[] = [
    { kind: 'pidTilt', kp: 1, ki: 1, kd: 1 },
    { kind: 'pidTiltRate', kp: 1, ki: 1, kd: 1 },
    { kind: 'feedback', lean: 1, leanRate: 1, tilt: 1, tiltRate: 0, trim: 0 },
    { kind: 'reactionWheel', lean: 1, leanRate: 1, speed: 1 },
  ];
  it('has one sentence for each gain of each law', () => {
    for (const c of every) {
      const law = readGains(c)!.law;
      for (const topples of [true, false]) {
        const terms = explainTerms(c, topples);
        expect(terms.map((t) => t.gain)).toEqual([...LAW_GAINS[law]]);
        for (const t of terms) expect(t.does).toMatch(/\.$/);
      }
    }
  });
  it('says that in PID from roll to tilt P damps, I stiffens and D acts as inertia', () => {
    const [p, i, d] = explainTerms(every[0]!, true);
    expect([p!.does, i!.does, d!.does].join(' ')).toMatch(
      /P acts as damping.*I acts as stiffness.*D acts as inertia/,
    );
  });
});

describe('a rig’s control, servo and sensing entries', () => {
  it('become a controller and a plant with all their delays added up', () => {
    for (const control of [
      { kind: 'feedback', lean: 1, leanRate: 2, tilt: 3, tiltRate: 0.4, trim: 0.5 },
      { kind: 'pidTilt', kp: 1, ki: 2, kd: 3 },
      { kind: 'reactionWheel', lean: 1, leanRate: 2, speed: 3 },
      { kind: 'passive' },
    ] as const) {
      const named = nameLaw(control, false);
      if (named.kind !== 'given') throw new Error('given gains are kept');
      expect(named.controller).toMatchObject(control);
    }
    expect(nameLaw({ kind: 'computed' }, true)).toEqual({ kind: 'to-compute', law: 'reactionWheel' });
    const body = { inertia: 0.3, stiffness: 7, damping: 0, momentum: 0.5, lineHeight: 0.1, gravity: 9.81 };
    const plant = assembleTiltPlant(body, BENCH_SERVO, BENCH_SENSING);
    /* 6 ms servo, half of a 4 ms frame, 2 ms loop */
    expectClose([plant.delay, plant.servoLag, plant.sensorHeight], [0.01, 0.018, 0.28], { rel: 1e-12 }); // measured 0
    expectClose(assembleWheelPlant(body, 0.003, BENCH_SENSING).delay, 0.002, { rel: 1e-12 }); // measured 0
  });
});
