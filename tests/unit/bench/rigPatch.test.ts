import { describe, expect, it } from 'vitest';
import type { Patch } from '../../../src/core/bench/identify/result';
import { patchRig } from '../../../src/core/bench/rigPatch';
import { SKIFF } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const patch = (quantity: Patch['quantity'], value: number, unit = ''): Patch => ({
  quantity,
  value,
  low: 0.9 * value,
  high: 1.1 * value,
  unit,
});

describe('putting results into a rig', () => {
  it('writes the fields a result is for, and leaves the rig given as it was', () => {
    const text = JSON.stringify(SKIFF);
    const outcome = patchRig(SKIFF, [
      patch('motorResistance', 0.21, 'Ω'),
      patch('motorTorqueConstant', 0.02, 'N·m/A'),
      patch('linearDamping', 150, 'N·m·s/rad'),
      patch('sensorNoiseDensity', 2e-4, 'rad/s/√Hz'),
      patch('sensorNoiseDensity', 3e-3, 'm/s²/√Hz'),
    ]);
    expect(JSON.stringify(SKIFF)).toBe(text);
    expect(outcome.left).toEqual([]);
    const [gyro] = outcome.rig.array.gyros;
    expect(gyro.motor.resistance).toBe(0.21);
    expectClose(gyro.motor.velocityConstant, 50, { rel: 1e-12 });
    expect(outcome.rig.footing).toMatchObject({ linearDamping: 150 });
    expect(outcome.rig.sensing).toMatchObject({ gyroNoise: 2e-4, accelNoise: 3e-3 });
    expect(outcome.applied.filter((a) => a.field.endsWith('motor.resistance')).length).toBe(
      SKIFF.array.gyros.length,
    );
  });
  it('one gyro only, when asked', () => {
    const outcome = patchRig(SKIFF, [patch('motorResistance', 0.21)], [1]);
    expect(outcome.rig.array.gyros[0]).toEqual(SKIFF.array.gyros[0]);
    expect(outcome.applied.map((a) => a.field)).toEqual(['array.gyros[1].motor.resistance']);
  });
  it('leaves out what the rules forbid and what is no field, and says so', () => {
    const outcome = patchRig(SKIFF, [
      patch('motorResistance', 4000),
      patch('bodyInertia', 3),
      patch('servoLag', 0.05),
    ]);
    expect(outcome.left[0].sentence).toMatch(/motor.resistance: .*from 0.500 mΩ to 50000 mΩ/);
    expect(outcome.left[1].sentence).toMatch(/works its inertia out/);
    expect(outcome.applied.every((a) => a.field.endsWith('servo.lag'))).toBe(true);
  });
});
