import { describe, expect, test } from 'vitest';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  leastShareOf,
  setUpPlan,
  sizeRig,
  usualSizeAsk,
} from '../../src/core/planning';
import { PACER, type Rig, SKIFF, STRIDER } from '../../src/core/rig';
import { expectClose } from '../support/closeTo';
import { compiledOf, withLayout } from '../support/plannedRigs';

const askOf = (rig: Rig) => {
  const ask = usualSizeAsk(rig);
  if (!ask) throw new Error('the rig has a wheel');
  return ask;
};

const sizedOf = (rig: Rig, changes: Partial<ReturnType<typeof askOf>> = {}) => {
  const outcome = sizeRig(rig, { ...askOf(rig), ...changes });
  if (outcome.kind !== 'sized') throw new Error(outcome.sentence);
  return outcome;
};

const faster = (rig: Rig, share: number): Rig => ({
  ...rig,
  array: { gyros: rig.array.gyros.map((gyro) => ({ ...gyro, speed: gyro.speed * share })) },
});

const hasPlan = (rig: Rig): boolean => {
  const set = setUpPlan(compiledOf(rig));
  return (
    set.kind === 'ready' &&
    attemptRigPlan(set.setting, defaultPlanOptions, createPlanWork()).kind === 'planned'
  );
};

describe('the smallest momentum of a rig', () => {
  test.each([
    ['a single wheel', withLayout(PACER, 'single')],
    ['a pyramid', withLayout(PACER, 'pyramid')],
  ])('%s: that much is enough, a hundredth less is not', (_, rig) => {
    const least = leastShareOf(rig, 0, undefined);
    if (least.kind !== 'least') throw new Error(least.sentence);
    expect(hasPlan(faster(rig, least.share * 1.0005))).toBe(true);
    expect(hasPlan(faster(rig, least.share * 0.99))).toBe(false);
  });
});

describe('the lightest wheels', () => {
  test.each([
    ['Strider', STRIDER],
    ['Skiff', SKIFF],
  ])('%s: put in the rig they do the job with the spare, and no more than it', (_, rig) => {
    const { rig: sized, wheels } = sizedOf(rig);
    if (!sized) throw new Error('wheels were made');
    const again = leastShareOf(sized, 0.2, askOf(rig).lean);
    if (again.kind !== 'least') throw new Error(again.sentence);
    expect(again.share).toBeLessThanOrEqual(1);
    expect(again.share).toBeGreaterThan(0.995); // measured 0.9995
    expect(wheels).toHaveLength(2);
    for (const wheel of wheels) {
      expect(wheel.mass).toBeLessThan(wheel.massNow);
      expect(wheel.stressSpare).toBeGreaterThanOrEqual(0);
    }
  });

  test('a smaller radius makes a heavier wheel; one too small is refused with words', () => {
    const wide = sizedOf(STRIDER, { radius: 0.05 }).wheels[0];
    const narrow = sizedOf(STRIDER, { radius: 0.036 }).wheels[0];
    expect(narrow?.mass).toBeGreaterThan(wide?.mass as number);
    const none = sizedOf(STRIDER, { radius: 0.015, width: 0.005 });
    expect(none.rig).toBeUndefined();
    expect(none.refused).toMatch(/at most .* N·m·s is needed/);
  });

  test('a slower rim is heavier and is said to be as asked', () => {
    const slow = sizedOf(STRIDER, { rimSpeed: 40 }).wheels[0];
    expect(slow?.limit).toBe('as asked');
    expectClose(slow?.rimSpeed as number, 40, { rel: 1e-12 });
    expect(slow?.mass).toBeGreaterThan(sizedOf(STRIDER).wheels[0]?.mass as number);
  });
});
