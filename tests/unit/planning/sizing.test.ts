import { describe, expect, test } from 'vitest';
import { wheelProperties } from '../../../src/core/physics';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  leastShareOf,
  lightestRim,
  safeRimSpeed,
  setUpPlan,
} from '../../../src/core/planning';
import { MATERIALS, PACER, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { compiledOf } from '../../support/plannedRigs';

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
    ['Strider, scissored pair', STRIDER],
    ['Pacer, scissored pair', PACER],
  ])('%s: that much is enough, a hundredth less is not', (_, rig) => {
    const least = leastShareOf(rig, 0, undefined);
    if (least.kind !== 'least') throw new Error(least.sentence);
    // a servo's limits are settled by passes, so a hair is added: measured 1e-5 enough
    expect(hasPlan(faster(rig, least.share * 1.0005))).toBe(true);
    expect(hasPlan(faster(rig, least.share * 0.99))).toBe(false);
  });

  test('a spare is kept on top of it', () => {
    const bare = leastShareOf(STRIDER, 0, undefined);
    const spared = leastShareOf(STRIDER, 0.25, undefined);
    if (bare.kind !== 'least' || spared.kind !== 'least') throw new Error('both are sized');
    expectClose(spared.share, bare.share / 0.75, { rel: 1e-6 });
  });
});

describe('rim geometry', () => {
  const ask = { momentum: 0.3, radius: 0.05, width: 0.012, material: 'brass C36000', rimSpeed: 60 } as const;

  test('stores just the momentum, by the wheel properties themselves', () => {
    const rim = lightestRim(ask);
    if (rim.kind !== 'rim') throw new Error('it fits');
    const { radius, width, material } = ask;
    const part = {
      kind: 'rim',
      outerRadius: radius,
      innerRadius: rim.innerRadius,
      width,
      material,
      offset: 0,
    } as const;
    const wheel = wheelProperties([part]);
    if (wheel.kind !== 'wheel') throw new Error('it is a wheel');
    expectClose(wheel.wheel.spinInertia * rim.speed, 0.3, { rel: 1e-12 });
    expectClose(wheel.wheel.mass, rim.mass, { rel: 1e-12 });
  });

  test('any other inner radius that stores as much at the same rim speed is wider and no lighter', () => {
    const rim = lightestRim(ask);
    if (rim.kind !== 'rim') throw new Error('it fits');
    // narrower width: the rim reaches in further and weighs more
    const narrower = lightestRim({ ...ask, width: 0.009 });
    if (narrower.kind !== 'rim') throw new Error('it fits');
    expect(narrower.innerRadius).toBeLessThan(rim.innerRadius);
    expect(narrower.mass).toBeGreaterThan(rim.mass);
  });

  test('the safe rim speed is that of a thin ring, whatever its size', () => {
    const { density, minimumAllowable } = MATERIALS['steel S235'];
    expectClose(2 * density * safeRimSpeed('steel S235') ** 2, minimumAllowable, { rel: 1e-12 });
  });

  test('a disc too small says what it stores', () => {
    const none = lightestRim({ ...ask, momentum: 5 });
    const { density } = MATERIALS[ask.material];
    if (none.kind !== 'too small') throw new Error('5 N m s is too much');
    expectClose(none.most, (Math.PI / 2) * density * 0.012 * 0.05 ** 4 * (60 / 0.05), { rel: 1e-12 });
  });
});
