import { describe, expect, it } from 'vitest';
import { createInstant } from '../../../src/app/stage/motionInstant';
import { blendPose, readYardInstant } from '../../../src/app/stage/yardInstant';
import { blowsFor, GROUND_NAMES, groundFor } from '../../../src/app/yard/yardGrounds';
import { PACER, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { compiledOf, yardOf } from '../../support/yardCases';

/** Two snapshots of Strider a frame apart, and the layout they share. */
function twoSnapshots() {
  const yard = yardOf(STRIDER);
  const take = (): Float64Array => {
    const out = new Float64Array(yard.layout.size);
    yard.snapshot(out);
    return out;
  };
  yard.run(100);
  const before = take();
  yard.run(16);
  return { layout: yard.layout, before, after: take() };
}

describe('a snapshot read as an instant', () => {
  it('is the one or the other at the ends and between them in between', () => {
    const { layout, before, after } = twoSnapshots();
    const instant = createInstant(layout.gyros, layout.legs);
    for (const share of [0, 0.25, 1]) {
      readYardInstant(layout, before, after, share, instant);
      const mixed = (at: number, k: number): number =>
        (before[at + k] as number) + share * ((after[at + k] as number) - (before[at + k] as number));
      expectClose(instant.time, 0.1 + 0.016 * share, { abs: 1e-12 });
      expectClose(
        instant.tilt,
        [0, 1].map((k) => mixed(layout.tilt, k)),
        { abs: 1e-12 },
      );
      expectClose(
        instant.feet,
        [0, 1, 2, 3, 4, 5].map((k) => mixed(layout.feet, k)),
        { abs: 1e-12 },
      );
      expectClose(
        instant.pose.subarray(0, 3),
        [0, 1, 2].map((k) => mixed(layout.pose, k)),
        { abs: 1e-12 },
      );
      expectClose(Math.hypot(...instant.pose.subarray(3)), 1, { abs: 1e-12 });
    }
    expect(Number.isNaN(instant.water)).toBe(true);
    expect(instant.plannedTilt.every(Number.isNaN)).toBe(true);
  });

  it('takes a value there was not before from the snapshot that has it', () => {
    const { layout, before, after } = twoSnapshots();
    const instant = createInstant(layout.gyros, layout.legs);
    before.fill(Number.NaN, layout.centreOfPressure, layout.centreOfPressure + 2);
    readYardInstant(layout, before, after, 0.5, instant);
    expect(instant.centreOfPressure[0]).toBe(after[layout.centreOfPressure]);
  });

  it('turns the short way round', () => {
    const half = Math.SQRT1_2;
    const out = new Float64Array(7);
    const from = Float64Array.of(0, 0, 0, 1, 0, 0, 0);
    blendPose(from, Float64Array.of(2, 0, 0, -half, -half, 0, 0), 0, 0.5, out);
    expectClose(out[0] as number, 1, { abs: 1e-15 });
    const turn = 2 * Math.atan2(Math.abs(out[4] as number), Math.abs(out[3] as number));
    expectClose(turn, Math.PI / 4, { abs: 1e-12 });
  });
});

describe('what the hand does', () => {
  it('has blows that grow with the rig and land at its centre', () => {
    const strider = blowsFor(STRIDER);
    const skiff = blowsFor(SKIFF);
    expect(strider?.kick).toBe(1);
    expect(skiff?.kick).toBeGreaterThan(100);
    expectClose(strider?.point[2] as number, compiledOf(STRIDER).whole.com[2], { rel: 1e-12 });
    expectClose(strider?.block.mass as number, 0.06 * compiledOf(STRIDER).whole.mass, { rel: 1e-12 });
  });

  it('has a ground for every name, on which a rig can be set up', () => {
    for (const name of GROUND_NAMES) {
      const yard = yardOf(PACER, { ground: groundFor(name, PACER) });
      yard.run(20);
      expect(Number.isNaN(yard.toppledAt)).toBe(true);
      expect(Math.abs(yard.lean)).toBeLessThan(0.1);
    }
  });
});
