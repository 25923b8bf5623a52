/** Runs one bench file in a process of its own, so that no bench warms or litters another's heap, and prints its rows. */
import { pathToFileURL } from 'node:url';
import type { Row } from './row';

const file = process.argv[2] as string;
const { run } = (await import(pathToFileURL(file).href)) as { run: () => Promise<readonly Row[]> };
const title = file.replace(/^.*\/|\.bench\.ts$/g, '');
console.log(`\n${title}`);
for (const { name, value, unit, target, ok } of await run()) {
  const mark = ok === undefined ? ' ' : ok ? '✓' : '✗';
  const aim = target === undefined ? '' : `   asked: ${target}`;
  console.log(
    `  ${mark} ${name.padEnd(62)} ${String(Number(value.toPrecision(4))).padStart(12)} ${unit.padEnd(8)}${aim}`,
  );
}
