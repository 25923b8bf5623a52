import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Options } from '../../../src/headless/command';
import { balanceCommand } from '../../../src/headless/commands/balance';
import { identifyCommand } from '../../../src/headless/commands/identify';
import { expectClose } from '../../support/closeTo';
import { createSeededStream } from '../../support/seededStream';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'bench-'));
});
afterAll(() => rmSync(folder, { recursive: true }));
const write = (name: string, text: string): string => {
  const path = join(folder, name);
  writeFileSync(path, text);
  return path;
};
const identify = async (path: string, given: Record<string, string>) => {
  const all = new Map(
    identifyCommand.options.flatMap(({ name, fallback }) =>
      fallback === undefined ? [] : [[name, fallback] as const],
    ),
  );
  for (const [name, value] of Object.entries(given)) all.set(name, value);
  return identifyCommand.run({ rig: undefined as never, path, options: new Options(all) });
};
const balance = (path: string) =>
  balanceCommand.run({ rig: undefined as never, path, options: new Options(new Map()) });

describe('identify, from the command line', () => {
  const decay = (): string => {
    const stream = createSeededStream(6);
    const rows = Array.from({ length: 900 }, (_, i) => {
      const t = i / 60;
      const angle = 15 * Math.exp(-0.1 * t) * Math.cos(3 * t) + 0.05 * stream.normal();
      return `${i * 16_667};${angle.toFixed(3).replace('.', ',')}`;
    });
    return `micros;heel [deg]\n${rows.join('\n')}\n`;
  };
  it('guesses the columns of a decay and gives period and inertia with intervals', async () => {
    const outcome = await identify(write('decay.csv', decay()), { kind: 'decay', stiffness: '9.01' });
    expect(outcome.kind).toBe('done');
    if (outcome.kind !== 'done') return;
    const { estimates, mapping } = outcome.output as {
      estimates: { name: string; value: number; low: number; high: number }[];
      mapping: unknown;
    };
    expect(mapping).toMatchObject({
      time: 'micros',
      timeUnit: 'us',
      columns: [{ column: 'heel', quantity: 'roll', unit: 'deg' }],
    });
    const inertia = estimates.find((e) => e.name === 'inertia');
    // w^2 = 3^2 + 0.1^2; the stamps step by 16667 us where the truth is 1/60 s, 20 parts in a million.
    expectClose(inertia?.value ?? Number.NaN, 1, { rel: 2e-3 });
    expect(outcome.csv?.split('\r\n')[0]).toBe('name,value,low,high,unit,verdict');
  });
  it('takes columns as told, and refuses in words', async () => {
    const path = write('decay.csv', decay());
    const told = await identify(path, { kind: 'decay', columns: 'time=micros:us;roll=heel:deg' });
    expect(told.kind).toBe('done');
    expect(await identify(path, { kind: 'decay', columns: 'roll=heave:deg' })).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/no time column|sample rate/)],
    });
    expect(await identify(path, { kind: 'decay', columns: 'time=micros:us;roll=heave:deg' })).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/no column "heave"/)],
    });
    expect(await identify(path, { kind: 'servoSweep' })).toMatchObject({
      kind: 'refused',
      sentences: [
        '--delay: must be given to identify servoSweep.',
        '--lag: must be given to identify servoSweep.',
      ],
    });
    expect(await identify(path, { kind: 'coastDown' })).toMatchObject({
      kind: 'failing',
      output: { sentence: expect.stringMatching(/no column for wheel speed/) },
    });
    expect(await identify(join(folder, 'none.csv'), { kind: 'decay' })).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/no such file/)],
    });
    expect(await identify(write('empty.csv', ''), { kind: 'decay' })).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/empty/)],
    });
  });
});

describe('balance, from the command line', () => {
  const sheet = {
    method: 'influence',
    initial: [{ amplitude: 5, angle: 30 }],
    trials: [{ plane: 1, weight_g: 2, angle: 0, readings: [{ amplitude: 6, angle: 70 }] }],
    wheel: { mass_kg: 0.6, speed_rpm: 6000, radius_mm: 55 },
    holes: { angles: Array.from({ length: 16 }, (_, k) => k * 22.5), step_g: 0.05, way: 'add' },
  };
  it('answers in grams at an angle, split over holes, graded before and after', async () => {
    const outcome = await balance(write('sheet.json', JSON.stringify(sheet)));
    expect(outcome.kind).toBe('done');
    if (outcome.kind !== 'done') return;
    const { planes } = outcome.output as {
      planes: { mass_g: number; angle: number; grade: { before: number; after: number } }[];
    };
    // By the cosine rule: the trial weight's effect is |6 at 70 - 5 at 30|.
    const effect = Math.sqrt(36 + 25 - 60 * Math.cos((40 * Math.PI) / 180));
    expectClose(planes[0].mass_g, (2 * 5) / effect, { rel: 1e-12 });
    expect(planes[0].grade.after).toBeLessThan(planes[0].grade.before / 20);
    expect(outcome.csv?.split('\r\n').length).toBeGreaterThan(3);
  });
  it('names the field that is wrong', async () => {
    const wrong = { ...sheet, wheel: { ...sheet.wheel, mass_kg: -1 } };
    expect(await balance(write('wrong.json', JSON.stringify(wrong)))).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/^wheel.mass_kg is -1: expected >0/)],
    });
    expect(await balance(write('text.json', 'grams'))).toMatchObject({
      kind: 'refused',
      sentences: [expect.stringMatching(/no JSON/)],
    });
    expect(await balance(join(folder, 'none.json'))).toMatchObject({ kind: 'refused' });
  });
  it('fails when the holes cannot take the answer, and still gives it', async () => {
    const tight = { ...sheet, holes: { ...sheet.holes, most_g: 0.1 } };
    const outcome = await balance(write('tight.json', JSON.stringify(tight)));
    expect(outcome.kind).toBe('failing');
    expect(JSON.stringify(outcome)).toMatch(/holes cannot take it/);
  });
});
