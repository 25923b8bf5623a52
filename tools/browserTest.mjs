/** Runs the browser tests against the built app. Arguments go on to the test runner. */
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { ensureChromium } from './findChromium.mjs';

const run = (file, args, environment = {}) =>
  spawnSync(process.execPath, [file, ...args], { stdio: 'inherit', env: { ...process.env, ...environment } })
    .status ?? 1;

let browser;
try {
  browser = await ensureChromium();
} catch (error) {
  console.error(error.message);
  process.exit(1);
}

if (!process.env.TILTWRIGHT_BUILT || !existsSync('dist/index.html')) {
  const built = run('node_modules/vite/bin/vite.js', ['build']);
  if (built !== 0) process.exit(built);
}
process.exit(
  run('node_modules/@playwright/test/cli.js', ['test', ...process.argv.slice(2)], { CHROMIUM_PATH: browser }),
);
