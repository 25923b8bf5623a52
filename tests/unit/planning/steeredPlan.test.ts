import { describe, expect, test } from 'vitest';
import { arrayMomentum, jacobianMatrix, robustRates } from '../../../src/core/physics';
import {
  axisEnvelope,
  createSteeringWork,
  fillMomentum,
  gimbalCourses,
  ledgerLines,
  singularityShare,
  steeredArrayOf,
  steerTo,
} from '../../../src/core/planning';
import { fitEllipse } from '../../../src/core/planning/steeredAxes';
import { steerPlan } from '../../../src/core/planning/steeredPlan';
import { PACER, SKIFF } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { compiledOf, heldPlanOf, planOf, withLayout } from '../../support/plannedRigs';

const pyramid = withLayout(PACER, 'pyramid');

describe('a pyramid steered through a gait', () => {
  const { setting, schedules } = heldPlanOf(pyramid);
  const { compiled, steered } = setting;
  if (!steered) throw new Error('a pyramid is steered');
  const n = compiled.rig.array.gyros.length;
  const momentum = Array.from({ length: n }, (_, i) => {
    return (compiled.wheels[i]?.spinInertia ?? 0) * (compiled.speeds[i] as number);
  });
  const { tilt, tiltRate } = gimbalCourses(setting, schedules);

  test('stores what was planned in roll and pitch and nothing in yaw, by the law of the array', () => {
    const rest = new Float64Array(3);
    arrayMomentum(compiled.model.array, new Float64Array(n), momentum, rest);
    const now = new Float64Array(3);
    const scale = momentum[0] as number;
    for (let k = 0; k < setting.time.length; k++) {
      arrayMomentum(compiled.model.array, tilt.subarray(k * n, k * n + n), momentum, now);
      const wanted = [schedules[0]?.momentum[k] ?? 0, schedules[1]?.momentum[k] ?? 0, 0];
      const got = now.map((value, j) => value - (rest[j] as number));
      // measured 4e-15 of one wheel's momentum
      expectClose(got, wanted, { abs: 1e-10 * scale }, `node ${k}`);
    }
  });

  test('closes on itself with the gait', () => {
    const last = setting.time.length - 1;
    // measured 6e-12 rad
    expectClose(tilt.slice(last * n, last * n + n), tilt.slice(0, n), { abs: 1e-9 }, 'tilts after a cycle');
  });

  test('gives the asked torque by the rates it turns at', () => {
    // over an interval the mean rate times the Jacobian at its middle: second order in the step
    for (const k of [20, 60, 100, 150]) {
      const middle = Float64Array.from({ length: n }, (_, i) => {
        return ((tilt[k * n + i] as number) + (tilt[(k + 1) * n + i] as number)) / 2;
      });
      const A = jacobianMatrix(compiled.model.array, middle, momentum);
      for (const [row, schedule] of schedules.entries()) {
        let rate = 0;
        for (let i = 0; i < n; i++) rate += A.get(row, i) * (tiltRate[k * n + i] as number);
        // measured 8e-6 N m of 2
        expectClose(-rate, schedule.torque[k] as number, { abs: 5e-5 }, `torque ${row} at ${k}`);
      }
    }
  });

  test('keeps tilts, rates and the distance to singularity on the finer grid, and shows it in the ledger', () => {
    const steering = steerPlan(setting, steered, schedules);
    expect(steering.kind).toBe('steered');
    expect(steering.course.worst.rate).toBeLessThanOrEqual(1);
    expect(steering.course.worst.tilt).toBeLessThanOrEqual(1);
    const line = ledgerLines(setting, schedules).find(({ name }) => name === 'singularity');
    expect(line?.spare).toBeGreaterThan(0);
    expect(line?.at).toBeDefined();
  });
});

describe('the steering law', () => {
  const array = steeredArrayOf(compiledOf(pyramid));
  const work = createSteeringWork(array);

  test('moves off rest by the damped Moore-Penrose rates', () => {
    const compiled = compiledOf(pyramid);
    const h = Array.from(compiled.speeds, (speed, i) => speed * (compiled.wheels[i]?.spinInertia ?? 0));
    const size = 1e-5;
    const tilt = new Float64Array(4);
    expect(steerTo(array, work, Float64Array.of(size, 0, 0), tilt)).toBeLessThan(1e-12);
    const rates = robustRates(jacobianMatrix(compiled.model.array, new Float64Array(4), h), [size, 0, 0], 0);
    // the next order of the tilts: measured 2e-20 rad of 6e-6
    expectClose(tilt, rates, { abs: 1e-15 }, 'tilts');
  });

  test('answers the smallest tilt that stores a momentum: no null motion makes it smaller', () => {
    const tilt = new Float64Array(4);
    const wanted = Float64Array.of(0.4 * Math.sqrt(array.meanSquare), 0.2 * Math.sqrt(array.meanSquare), 0);
    steerTo(array, work, wanted, tilt);
    const start = Float64Array.from([0.3, -0.2, 0.25, -0.1]);
    expect(steerTo(array, work, wanted, start)).toBeLessThan(1e-10);
    // from elsewhere to the same place: measured 1.3e-12 rad
    expectClose(start, tilt, { abs: 1e-8 }, 'tilts');
  });

  test('says so when it is asked for more than the array has', () => {
    const tilt = new Float64Array(4);
    const wanted = Float64Array.of(10 * Math.sqrt(array.meanSquare), 0, 0);
    expect(steerTo(array, work, wanted, tilt)).toBeGreaterThan(0.1 * Math.sqrt(array.meanSquare));
  });

  test('the ellipse planned with lies within the envelope at every point of it', () => {
    const envelope = axisEnvelope(array, 0);
    const { momentum, tiltRate, tiltMax } = fitEllipse(envelope);
    expectClose(momentum * Math.sin(tiltMax), envelope.momentum, { rel: 1e-12 });
    for (const [k, e] of envelope.held.entries()) {
      const planned = tiltRate * Math.sqrt(momentum * momentum - e * e);
      expect(planned).toBeLessThanOrEqual((envelope.torque[k] as number) * (1 + 1e-12));
    }
  });

  test('at rest the array is as far from a singularity as it ever is counted', () => {
    expectClose(singularityShare(array, work, new Float64Array(4)), 1, { abs: 1e-12 });
    const now = new Float64Array(3);
    fillMomentum(array, new Float64Array(4), now);
    expectClose(now, array.restMomentum, { abs: 1e-15 });
  });
});

describe('arrays that cannot be steered', () => {
  test('two skew gimbals are refused with words', () => {
    const rig = { ...pyramid, array: { gyros: pyramid.array.gyros.slice(0, 2) } };
    const outcome = planOf(rig);
    expect(outcome.kind).toBe('unplanned');
    if (outcome.kind === 'unplanned') expect(outcome.sentence).toMatch(/at least 3 gimbals/);
  });

  test('a sea too big for the pyramid is impossible, not an unkept plan', () => {
    const { jobs } = SKIFF;
    const rig = withLayout(SKIFF, 'pyramid');
    const wild = {
      ...rig,
      jobs: { ...jobs, sequence: jobs.sequence.map((d) => (d.kind === 'waves' ? { ...d, height: 2.5 } : d)) },
    };
    expect(['impossible', 'unsteered']).toContain(planOf(wild).kind);
  });
});
