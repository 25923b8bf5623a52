import { describe, expect, it } from 'vitest';
import { BENCH_GYRO, type Rig, SKIFF, STRIDER } from '../../../src/core/rig';
import { Options } from '../../../src/headless/command';
import { spinCommand } from '../../../src/headless/commands/spin';

const spin = async (rig: Rig, gimbalPower = '0') =>
  spinCommand.run({ rig, path: 'rig.json', options: new Options(new Map([['gimbal-power', gimbalPower]])) });

const withGyro = (changes: Partial<typeof BENCH_GYRO>): Rig => ({
  ...SKIFF,
  array: { gyros: [{ ...BENCH_GYRO, ...changes }] },
});

describe('spin, from the command line', () => {
  it('is done with a rig that may be spun, curves as a table beside it', async () => {
    const outcome = await spin(STRIDER);
    expect(outcome.kind).toBe('done');
    if (outcome.kind !== 'done') return;
    const rows = outcome.csv!.trim().split('\r\n');
    expect(rows[0]).toBe('gyro,time_s,speed_rad_s,current_A,battery_power_W');
    const last = rows.at(-1)!.split(',').map(Number);
    expect(last[0]).toBe(STRIDER.array.gyros.length - 1);
    expect(last[2]).toBe(STRIDER.array.gyros.at(-1)!.speed);
    const { cautions } = outcome.output as { cautions: readonly { because: string }[] };
    expect(cautions.length).toBeGreaterThan(0);
    for (const { because } of cautions) expect(because).toMatch(/at or above/);
  });

  it('fails a wheel past its safe speed, and one its motor cannot hold, and says which', async () => {
    const failures = async (rig: Rig) => {
      const outcome = await spin(rig);
      expect(outcome.kind).toBe('failing');
      if (outcome.kind !== 'failing') return [];
      return (outcome.output as { gyros: readonly { failures: readonly string[] }[] }).gyros[0]!.failures;
    };
    expect(await failures(withGyro({ speed: 8000 }))).toEqual([
      'faster than its safe speed',
      'its motor and battery cannot hold this speed',
      'its bearings dent under the greatest load',
    ]);
    expect(await failures(withGyro({ motor: { ...BENCH_GYRO.motor, velocityConstant: 15 } }))).toEqual([
      'its motor and battery cannot hold this speed',
    ]);
    const weak = { ...BENCH_GYRO.bearing, staticRating: 20 };
    expect(await failures(withGyro({ bearing: weak }))).toEqual([
      'its bearings dent under the greatest load',
    ]);
  });

  it('refuses a wheel that cannot be and an option that is no number, naming the field', async () => {
    const parts = [{ ...BENCH_GYRO.wheel.parts[1]!, bore: 0.04 }] as typeof BENCH_GYRO.wheel.parts;
    const outcome = await spin(withGyro({ wheel: { ...BENCH_GYRO.wheel, parts } }));
    expect(outcome).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/^array\.gyros\[0\]\.wheel\.parts\[0\]\.bore: /)],
    });
    expect(await spin(STRIDER, 'much')).toMatchObject({ kind: 'refused' });
  });
});
