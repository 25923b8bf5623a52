/**
 * Measures what the project promises and prints it beside its peers.
 * Usage: npm run bench [-- NAME ...]; each tools/bench/NAME.bench.ts gives rows of figures.
 */
import { spawnSync } from 'node:child_process';
import { readdirSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const folder = fileURLToPath(new URL('./bench/', import.meta.url));
const wanted = process.argv.slice(2);
const files = readdirSync(folder)
  .filter(
    (file) =>
      file.endsWith('.bench.ts') && (wanted.length === 0 || wanted.includes(file.replace('.bench.ts', ''))),
  )
  .sort();

let status = 0;
for (const file of files) {
  const run = spawnSync(
    process.execPath,
    [
      '--expose-gc',
      '--import',
      'tsx',
      fileURLToPath(new URL('./bench/runOne.ts', import.meta.url)),
      `${folder}${file}`,
    ],
    { stdio: 'inherit' },
  );
  if (run.status !== 0) status = 1;
}
process.exit(status);
