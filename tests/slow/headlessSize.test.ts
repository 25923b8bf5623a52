import { expect, test } from 'vitest';
import { PACER, type Rig, readRig, STRIDER } from '../../src/core/rig';
import { Options } from '../../src/headless/command';
import { sizeCommand } from '../../src/headless/commands/size';

const run = (rig: Rig, changes: Readonly<Record<string, string>> = {}) => {
  const values = new Map(sizeCommand.options.map(({ name, fallback }) => [name, fallback ?? '']));
  for (const [name, value] of Object.entries(changes)) values.set(name, value);
  return sizeCommand.run({ rig, path: '', options: new Options(values) });
};

test('size gives the wheels, and the rig with them as one that can be read', async () => {
  const outcome = await run(STRIDER, { spare: '10' });
  if (outcome.kind !== 'done') throw new Error(outcome.kind);
  const output = JSON.parse(JSON.stringify(outcome.output)) as {
    readonly share: number;
    readonly wheels: readonly { readonly mass: number; readonly massNow: number }[];
    readonly sized: unknown;
  };
  expect(output.share).toBeGreaterThan(0.1);
  expect(output.share).toBeLessThan(1);
  for (const { mass, massNow } of output.wheels) expect(mass).toBeLessThan(massNow);
  expect(readRig(output.sized).kind).toBe('read');
});

test('size answers wrong options, and rigs without wheels, in words', async () => {
  const wrong = await run(PACER, { spare: '120', material: 'cheese' });
  if (wrong.kind !== 'refused') throw new Error(wrong.kind);
  expect(wrong.sentences.join(' ')).toMatch(
    /--spare: "120" is not a number from 0 to 95 %.*--material: "cheese"/,
  );
  const bare = await run({ ...PACER, array: { gyros: [] } });
  expect(bare.kind).toBe('refused');
});
