import { describe, expect, test } from 'vitest';
import { STANDARD_GRAVITY } from '../../../src/core/physics';
import {
  attemptRigPlan,
  createPlanWork,
  defaultPlanOptions,
  holdingOf,
  setUpPlan,
} from '../../../src/core/planning';
import { type Rig, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { compiledOf, heldPlanOf, standing, withSequence } from '../../support/plannedRigs';

const ASK = { height: 0.3, sideForce: 2, trimError: 0.004, recentring: 1.5 };

const onEdge = (impulse: number): Rig => ({
  ...withSequence(standing(STRIDER), [
    { kind: 'shove', time: 0, impulse, height: ASK.height, direction: Math.PI / 2 },
  ]),
  footing: { kind: 'edge', offset: 0 },
});

const holdingFor = (rig: Rig) => {
  const { setting, schedules } = heldPlanOf(rig);
  const holding = holdingOf(setting, schedules, ASK);
  if (!holding) throw new Error('its array works in roll');
  return { holding, setting, schedules };
};

const figureOf = (holding: ReturnType<typeof holdingFor>['holding'], id: string): number =>
  holding.figures.find((figure) => figure.id === id)?.value ?? Number.NaN;

describe('shove limit of a rig', () => {
  const { holding, setting } = holdingFor(onEdge(0));
  const hasPlan = (impulse: number): boolean => {
    const set = setUpPlan(compiledOf(onEdge(impulse)));
    return (
      set.kind === 'ready' &&
      attemptRigPlan(set.setting, defaultPlanOptions, createPlanWork()).kind === 'planned'
    );
  };

  test('is what the planner finds: a little less is planned, well over it is not', () => {
    const limit = holding.fromRest.value;
    expect(hasPlan(0.95 * limit)).toBe(true);
    // It counts the least torque on the way to the tilt limit, so it is on the safe side; all the momentum is the end.
    const { array } = setting.axes[0] as (typeof setting.axes)[number];
    const all = (array.momentum * Math.sin(array.tiltMax)) / ASK.height;
    expect(limit).toBeLessThan(all);
    expect(hasPlan(1.001 * all)).toBe(false);
  });

  test('at each instant of a plan is no more than from rest where nothing helps but the array', () => {
    const { impulse } = holding.course ?? { impulse: [] };
    expectClose(Math.max(...impulse), holding.fromRest.value, { rel: 1e-9 }, 'at rest');
  });

  test('falls while the array is busy, and the worst instant is named', () => {
    const busy = holdingFor(onEdge(0.6)).holding;
    expect(figureOf(busy, 'shoveLeast')).toBeLessThan(0.8 * busy.fromRest.value);
    expectClose(figureOf(busy, 'shoveLeast'), Math.min(...(busy.course?.impulse ?? [])), { abs: 1e-15 });
  });
});

describe('steady loads', () => {
  const { holding, setting } = holdingFor(STRIDER);
  const array = setting.axes[0]?.array;
  const room = (array?.momentum ?? 0) * Math.sin(array?.tiltMax ?? 0);
  const weight = setting.compiled.whole.mass * STANDARD_GRAVITY;

  test('are held for the momentum over the moment', () => {
    expectClose(figureOf(holding, 'holdSide'), room / (2 * 0.3), { rel: 1e-12 });
    expectClose(figureOf(holding, 'holdTrim'), room / (weight * 0.004), { rel: 1e-12 });
  });

  test('are given back by a shift of the centre of mass held for the time', () => {
    expectClose(figureOf(holding, 'recentreMoment') * 1.5, room, { rel: 1e-12 });
    expectClose(figureOf(holding, 'recentreShift') * weight * 1.5, room, { rel: 1e-12 });
  });

  test('a walk has a capture margin, a hull none', () => {
    expect(Number.isFinite(figureOf(holding, 'captureMargin'))).toBe(true);
    expect(figureOf(holdingFor(SKIFF).holding, 'captureMargin')).toBeNaN();
  });
});
