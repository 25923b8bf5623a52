import { describe, expect, it } from 'vitest';
import {
  type CompiledRig,
  checkLayout,
  compileRig,
  type GimbalDrive,
  layoutLeftovers,
} from '../../../src/core/physics';
import { DEMONSTRATIONS, layOut, type Rig } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const walker = DEMONSTRATIONS.map(({ rig }) => rig).find(({ body }) => body.kind === 'legged') as Rig;
const compiledOf = (rig: Rig) => {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals[0]?.sentence);
  return outcome.compiled;
};
const withLayout = (layout: 'scissored pair' | 'pyramid'): Rig => {
  const first = walker.array.gyros[0];
  if (!first) throw new Error('the walker has gyros');
  return {
    ...walker,
    array: { gyros: layOut(layout, first, { centre: [0, 0, 0.56], spacing: 0.13, skew: 0.955 }) },
  };
};

const ratioOf = (compiled: CompiledRig, i: number): number => {
  const drive = compiled.rig.array.gyros[i]?.drive;
  return drive?.kind === 'geared' ? drive.ratio : 1;
};
/** Every servo at one tilt, followers by their gears. */
const tiltsAt = (compiled: CompiledRig, tilt: number): number[] =>
  compiled.rig.array.gyros.map((_, i) => tilt * ratioOf(compiled, i));
const RATE = 3;
const drivesOf = (compiled: CompiledRig): GimbalDrive[] =>
  compiled.rig.array.gyros.flatMap(({ drive }, leader) => {
    if (drive.kind !== 'servo') return [];
    const geared = compiled.rig.array.gyros.flatMap((other, index) =>
      other.drive.kind === 'geared' && other.drive.leader === leader
        ? [{ index, ratio: other.drive.ratio }]
        : [],
    );
    return [{ members: [{ index: leader, ratio: 1 }, ...geared], rate: RATE }];
  });

describe('layout check', () => {
  it('a scissored pair by its closed forms: torque 2 h rate cos(tilt), momentum 2 h sin(tilt), nothing in yaw', () => {
    const compiled = compiledOf(withLayout('scissored pair'));
    const h = (compiled.wheels[0]?.spinInertia ?? 0) * Math.abs(compiled.speeds[0] ?? 0);
    const { figures } = checkLayout(compiled, tiltsAt(compiled, 0.4), drivesOf(compiled));
    const value = (id: string) => figures.find((figure) => figure.id === id)?.value ?? Number.NaN;
    expectClose(value('torque-roll'), 2 * h * 3 * Math.cos(0.4), { rel: 1e-12 });
    expectClose(Math.abs(value('momentum-roll')), 2 * h * Math.sin(0.4), { rel: 1e-12 });
    expectClose(value('yawBeside'), 0, { abs: 1e-12 });
    // Geared, the two move as one: nothing is left to turn without torque.
    expect(value('nullMotions')).toBe(0);
    expect(value('torque-yaw')).toBeLessThan(1e-12 * value('torque-roll')); // measured 0
    expect(value('measure')).toBe(0);
  });

  it('a pyramid at rest commands all three axes with one way to turn without torque', () => {
    const pyramid = compiledOf(withLayout('pyramid'));
    const { figures } = checkLayout(pyramid, [0, 0, 0, 0], drivesOf(pyramid));
    const value = (id: string) => figures.find((figure) => figure.id === id)?.value ?? Number.NaN;
    expect(value('measure')).toBeGreaterThan(0.5);
    expect(value('nullMotions')).toBe(1);
  });

  it('a mismatch of speeds in a pair leaks h err rate sin(tilt) about the vertical, as the closed form says', () => {
    const compiled = compiledOf(withLayout('scissored pair'));
    const h = (compiled.wheels[1]?.spinInertia ?? 0) * Math.abs(compiled.speeds[1] ?? 0);
    const left = layoutLeftovers(compiled, tiltsAt(compiled, 0.4), tiltsAt(compiled, 3), {
      speed: 0.02,
      axis: 0,
      lag: 0,
    });
    expect(left.map(({ id }) => id)).toEqual(['speed', 'axisForward', 'axisVertical', 'lag']);
    expectClose(Math.abs(left[0]?.torque[2] ?? Number.NaN), 0.02 * h * 3 * Math.sin(0.4), { rel: 1e-12 });
    for (const { id, torque } of left)
      if (id !== 'speed') expectClose([...torque], [0, 0, 0], { abs: 1e-15 });
  });
});
