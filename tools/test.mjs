/**
 * The whole test suite, quick checks first: style, types, unit tests, slow tests, build, browser.
 * Usage: node tools/test.mjs. Ends with one line that counts what passed and failed.
 */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';

const reports = mkdtempSync(join(tmpdir(), 'tiltwright-test-'));
let passed = 0;
let failed = 0;
let broken = false;

function step(title, file, args, environment = {}) {
  const start = Date.now();
  console.log(`\n— ${title}`);
  const { status } = spawnSync(process.execPath, [file, ...args], {
    stdio: 'inherit',
    env: { ...process.env, ...environment },
  });
  console.log(`  ${status === 0 ? 'done' : 'FAILED'} in ${((Date.now() - start) / 1000).toFixed(1)} s`);
  if (status !== 0) broken = true;
  return status === 0;
}

const readReport = (name) => {
  try {
    return JSON.parse(readFileSync(join(reports, name), 'utf8'));
  } catch {
    return undefined;
  }
};

function unitStep(project) {
  const report = `${project}.json`;
  step(`${project} tests`, 'node_modules/vitest/vitest.mjs', [
    'run',
    `--project=${project}`,
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${join(reports, report)}`,
  ]);
  const counts = readReport(report);
  passed += counts?.numPassedTests ?? 0;
  failed += counts?.numFailedTests ?? 0;
}

function browserStep() {
  step('browser tests', 'tools/browserTest.mjs', ['--reporter=list,json'], {
    TILTWRIGHT_BUILT: '1',
    PLAYWRIGHT_JSON_OUTPUT_NAME: join(reports, 'browser.json'),
  });
  const stats = readReport('browser.json')?.stats;
  passed += (stats?.expected ?? 0) + (stats?.flaky ?? 0);
  failed += stats?.unexpected ?? 0;
}

step('format and lint', 'node_modules/@biomejs/biome/bin/biome', ['check', '--error-on-warnings', '.']);
step('types, core without a DOM', 'node_modules/typescript/bin/tsc', ['-p', 'src/core/tsconfig.json']);
step('types, everything', 'node_modules/typescript/bin/tsc', ['-p', 'tsconfig.json']);
unitStep('quick');
unitStep('slow');
const isBuilt = step('build', 'node_modules/vite/bin/vite.js', ['build']);
if (isBuilt) browserStep();
rmSync(reports, { recursive: true, force: true });

if (broken && failed === 0) failed = 1;
console.log(`\n${passed} passed, ${failed} failed`);
process.exit(broken || failed > 0 ? 1 : 0);
