import { describe, expect, it } from 'vitest';
import { STRIDER } from '../../../src/core/rig';
import { Pace } from '../../../src/yard';
import { yardOf } from '../../support/yardCases';

/** Everything the yard tells after the same hands at the same instants, its steps taken in the bundles given. */
function worked(bundles: readonly number[]): Float64Array {
  const yard = yardOf(STRIDER, { ground: { kind: 'blocks' } });
  const hands = new Map<number, () => void>([
    [120, () => yard.hand.touch([0, 0.085, 0.45], [0, 0.2, 0.45])],
    [220, () => yard.hand.release()],
    [240, () => yard.kick([0, -0.3, 0], [0, 0, 0.4])],
    [
      340,
      () => yard.drop({ size: [0.05, 0.05, 0.05], place: [0.1, 0, 1], attitude: [1, 0, 0, 0], mass: 0.06 }),
    ],
  ]);
  let step = 0;
  for (const bundle of bundles) {
    for (let left = bundle; left > 0; left--) {
      hands.get(step)?.();
      yard.run(1);
      step++;
    }
  }
  const out = new Float64Array(yard.layout.size);
  yard.snapshot(out);
  return out;
}

describe('the clock of the yard', () => {
  it('gives the same numbers, bit for bit, however its steps are bundled into frames', () => {
    const even = worked(new Array(40).fill(10));
    const odd = worked([1, 2, 97, 0, 33, 7, 160, 50, 50]);
    expect(Array.from(odd)).toEqual(Array.from(even));
    expect(even[0]).toBe(0.4);
  });

  it('owes whole steps as time passes, keeps what is left over, and lets a long stall go', () => {
    const pace = new Pace(0.001, 0.05);
    let steps = 0;
    for (let frame = 0; frame < 600; frame++) steps += pace.stepsDue(1 / 60);
    expect(steps).toBe(10_000);
    expect(pace.stepsDue(5)).toBe(50);
    expect(pace.stepsDue(-1)).toBe(0);
  });
});
