import { describe, expect, it } from 'vitest';
import { sectionOutline } from '../../../src/app/stage/bodyPlaces';
import { createInstant } from '../../../src/app/stage/motionInstant';
import { meetWater } from '../../../src/app/stage/waterline';
import { expectClose } from '../../support/closeTo';

const box = sectionOutline({ kind: 'bilge', beam: 2, depth: 1, bilgeRadius: 0 });

const afloat = (draught: number, roll = 0, slope = 0) => {
  const instant = createInstant(0, 0);
  instant.pose.set([0, 0, -draught, Math.cos(roll / 2), Math.sin(roll / 2), 0, 0]);
  instant.water = 0;
  instant.waterSlope = slope;
  return instant;
};

const crossings = (...args: Parameters<typeof afloat>): Float64Array => {
  const out = new Float64Array(4);
  meetWater(box, afloat(...args), out);
  return out;
};

describe('meetWater', () => {
  it('lies at the draught on an upright box', () => {
    expectClose(crossings(0.4), [1, 0.4, -1, 0.4], { abs: 1e-14 }); // measured 0
  });

  it('rises on the side that rolls down', () => {
    // Rolled to the right about the keel line: the water line is z cos + y sin = draught in body axes.
    const roll = 0.2;
    const height = (y: number) => (0.4 - y * Math.sin(roll)) / Math.cos(roll);
    expectClose(crossings(0.4, roll), [1, height(1), -1, height(-1)], { abs: 1e-14 }); // measured 6e-17
  });

  it('stays put on a body that rolls with the water', () => {
    const roll = 0.15;
    const out = crossings(0.4, roll, roll);
    expectClose([out[1], out[3]], [0.4 * Math.cos(roll), 0.4 * Math.cos(roll)], { abs: 1e-14 }); // measured 1e-16
  });

  it('is nowhere on a body that hangs above the water or lies under it', () => {
    expect([...crossings(-0.1)].every(Number.isNaN)).toBe(true);
    expect([...crossings(1.2)].every(Number.isNaN)).toBe(true);
  });
});
