import { describe, expect, it } from 'vitest';
import { PACER, SKIFF, STRIDER } from '../../src/core/rig';
import type { Yard } from '../../src/yard';
import { expectClose } from '../support/closeTo';
import { ALL_OFF, ALL_ON, compiledOf, yardOf } from '../support/yardCases';

/** Runs for a time; true when the rig is still up at the end. */
function stands(yard: Yard, seconds: number): boolean {
  yard.run(Math.round(seconds / yard.step));
  return Number.isNaN(yard.toppledAt) && Math.abs(yard.lean) < 0.3;
}

const origin = (yard: Yard): Float64Array => {
  const out = new Float64Array(3);
  yard.rig.origin(out);
  return out;
};

describe('walking in the yard', () => {
  it('Strider walks eight steps and stands, and goes as far as its steps are long', () => {
    const yard = yardOf(STRIDER);
    const before = origin(yard);
    expect(stands(yard, 8)).toBe(true);
    const [x, y] = origin(yard);
    expectClose((x as number) - (before[0] as number), 0.32, { abs: 0.002 });
    expect(Math.abs((y as number) - (before[1] as number))).toBeLessThan(0.002);
  });

  it('Pacer walks eight steps and stands', () => {
    expect(stands(yardOf(PACER), 6.4)).toBe(true);
  });

  it('neither stays up with its array off', () => {
    const strider = yardOf(STRIDER, { switches: ALL_OFF });
    expect(stands(strider, 4)).toBe(false);
    expect(strider.toppledAt).toBeLessThan(3);
    const pacer = yardOf(PACER, { switches: ALL_OFF });
    pacer.run(600);
    expect(Math.abs(pacer.lean)).toBeGreaterThan(0.1);
  });

  it('Strider walks on with the usual doubt: off its drawn centre, wheels slow', () => {
    expect(stands(yardOf(STRIDER, { doubt: { centreAcross: 0.004, wheelSpeed: 0.97 } }), 8)).toBe(true);
  });
});

describe('pushes', () => {
  const stood = { ...STRIDER, jobs: { ...STRIDER.jobs, gait: { kind: 'stand' } } } as const;
  const shove = (impulse: number): Yard => {
    const yard = yardOf(stood);
    yard.run(200);
    yard.kick([0, impulse, 0], [0, 0, 0.4]);
    return yard;
  };

  it('a small one is survived, one larger than the feet and the array can take topples it', () => {
    expect(stands(shove(0.5), 3)).toBe(true);
    const knocked = shove(8);
    expect(stands(knocked, 3)).toBe(false);
  });

  it('a finger that pushes harder leans it further, and its force is told in N', () => {
    const out = new Float64Array(yardOf(stood).layout.size);
    const pushed = (far: number): { lean: number; force: number } => {
      const yard = yardOf(stood);
      yard.hand.touch([0, 0, 0.45], [0, far, 0.45]);
      yard.run(250);
      yard.snapshot(out);
      return { lean: Math.abs(yard.lean), force: out[yard.layout.fingerForce] as number };
    };
    const light = pushed(0.002);
    const strong = pushed(0.2);
    expect(light.lean).toBeLessThan(0.002);
    expect(strong.force).toBeGreaterThan(light.force);
    expect(strong.lean).toBeGreaterThan(light.lean);
  });

  it('a hull rocks on a hard floor and comes to lie on its bilge', () => {
    const yard = yardOf(SKIFF, { switches: ALL_OFF, lean: 0.05 });
    const lowest = -compiledOf(SKIFF).whole.com[2];
    expect(lowest).toBeLessThan(0);
    yard.run(6000);
    const rest = yard.lean;
    yard.run(500);
    expect(Math.abs(rest)).toBeGreaterThan(0.08);
    expectClose(yard.lean, rest, { abs: 0.01 });
  });

  it('a block dropped on the walker comes off it or lies on it, and the walker feels it', () => {
    const yard = yardOf(STRIDER, { switches: ALL_ON });
    yard.drop({
      size: [0.06, 0.06, 0.06],
      place: [0.01, 0.04, 0.9],
      attitude: [0.9, 0.3, 0.3, 0],
      mass: 0.4,
    });
    yard.run(2500);
    const block = yard.objects[0]?.body.position;
    expect(block?.z).toBeLessThan(0.8);
    expect(block?.z).toBeGreaterThan(0.025);
  });
});
