import { describe, expect, it } from 'vitest';
import {
  arrowLength,
  chooseScale,
  GRID_LEADS,
  motionScales,
  roundUp,
} from '../../../src/app/stage/arrowScale';
import { STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { motionFixture } from '../../support/motionFixture';

describe('roundUp', () => {
  it.each([
    [0.07, 0.1],
    [0.1, 0.1],
    [0.11, 0.2],
    [2.1, 5],
    [5, 5],
    [51, 100],
  ])('takes %d to %d', (value, round) => {
    expectClose(roundUp(value, GRID_LEADS), round, { rel: 1e-12 }); // measured 0
  });

  it('gives 1 for nothing and for what is no length', () => {
    for (const value of [0, -3, Number.NaN, Number.POSITIVE_INFINITY])
      expect(roundUp(value, GRID_LEADS)).toBe(1);
  });
});

describe('arrow lengths', () => {
  const scale = { full: 2, longest: 0.4 };

  it('are in proportion, whatever the sign', () => {
    expectClose(arrowLength(-0.5, scale).length, 0.1, { rel: 1e-12 }); // measured 0
    expect(arrowLength(2, scale)).toEqual({ length: 0.4, isClamped: false });
  });

  it('are clamped and marked beyond the full value', () => {
    expect(arrowLength(-2.1, scale)).toEqual({ length: 0.4, isClamped: true });
    expect(arrowLength(Number.NaN, scale)).toEqual({ length: 0, isClamped: false });
  });

  it('are not all made small by a rare peak', () => {
    const sizes = Array.from({ length: 200 }, () => 1);
    expect(chooseScale([...sizes, 900], 1).full).toBe(1);
    expect(chooseScale([], 1).full).toBe(1);
  });

  it('have one scale for torque, demand and leak, and another for momentum', () => {
    const motion = motionFixture(STRIDER);
    const { torque, momentum } = motionScales(motion, 2);
    // The demand of 2.1 is the greatest of the torques.
    expect(torque.full).toBe(3);
    expect(momentum.full).toBe(1);
  });
});
