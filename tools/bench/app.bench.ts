/** What a user waits for: the weight of the first load, and the time from an edit to its redrawn plan in Chromium. */
import { type ChildProcess, spawn, spawnSync } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import { chromium, type Page } from '@playwright/test';
import { ensureChromium } from '../findChromium.mjs';
import type { Row } from './row';

const root = join(dirname(fileURLToPath(import.meta.url)), '../..');
const PORT = 4187;
const EDITS = 80;
const KILO = 1000;

const gzipped = (path: string): number => gzipSync(readFileSync(path), { level: 9 }).length / KILO;

/** Scripts that load before the rig is on the screen: the page's own, the stage, and the evaluator's worker. */
function firstLoad(loaded: readonly string[]): readonly Row[] {
  const files = readdirSync(join(root, 'dist/assets')).filter(
    (file) => file.endsWith('.js') && loaded.includes(file),
  );
  const sum = files.reduce((total, file) => total + gzipped(join(root, 'dist/assets', file)), 0);
  return [
    {
      name: `first-load JavaScript, ${files.length} files, gzip -9`,
      value: sum,
      unit: 'kB',
      target: 'at most 450',
      ok: sum <= 450,
    },
  ];
}

const percentile = (values: readonly number[], share: number): number => {
  const sorted = values.toSorted((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] as number;
};

/** Presses + and - of a field of the Plan station and reads the app's own measure of each edit. */
async function timeEdits(page: Page): Promise<readonly number[]> {
  await page.getByRole('navigation', { name: 'Stations' }).getByRole('button', { name: 'Plan' }).click();
  const field = page.getByRole('spinbutton', { name: /^Hip sway/ }).first();
  await field.waitFor();
  await field.focus();
  for (let i = 0; i < 20; i++) {
    await page.keyboard.press(i % 2 === 0 ? 'ArrowUp' : 'ArrowDown');
    await page.waitForTimeout(60);
  }
  await page.evaluate(() => performance.clearMeasures());
  for (let i = 0; i < EDITS; i++) {
    await page.keyboard.press(i % 2 === 0 ? 'ArrowUp' : 'ArrowDown');
    await page.waitForTimeout(90);
  }
  return page.evaluate(() =>
    performance.getEntriesByName('edit to redrawn plan').map((entry) => entry.duration),
  );
}

export async function run(): Promise<readonly Row[]> {
  const built = spawnSync(process.execPath, ['node_modules/vite/bin/vite.js', 'build'], { cwd: root });
  if (built.status !== 0) throw new Error(String(built.stderr));
  const server: ChildProcess = spawn(process.execPath, ['tools/serve.mjs', String(PORT)], { cwd: root });
  await new Promise((ready) => server.stdout?.once('data', ready));
  const browser = await chromium.launch({
    executablePath: await ensureChromium(),
    args: [
      '--enable-unsafe-swiftshader',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
      '--disable-dev-shm-usage',
    ],
  });
  try {
    const page = await browser.newPage({
      viewport: { width: 1180, height: 820 },
      hasTouch: true,
      serviceWorkers: 'block',
    } as never);
    const loaded: string[] = [];
    page.on('request', (request) => loaded.push(request.url().split('/').pop() ?? ''));
    await page.goto(`http://127.0.0.1:${PORT}/?quality=low`);
    await page.waitForFunction(
      () => performance.getEntriesByName('edit to redrawn plan').length > 0,
      undefined,
      { timeout: 30_000 },
    );
    await page.locator('[data-ready="true"] canvas').waitFor();
    await page.waitForTimeout(1500);
    const first = [...loaded];
    await page.getByRole('button', { name: 'Pause', exact: true }).click();
    const times = await timeEdits(page);
    const late = percentile(times, 0.95);
    return [
      ...firstLoad(first),
      {
        name: `edit to redrawn plan, median of ${times.length}, software GL`,
        value: percentile(times, 0.5),
        unit: 'ms',
      },
      {
        name: `edit to redrawn plan, 95th percentile of ${times.length}, software GL`,
        value: late,
        unit: 'ms',
        target: 'at most 50',
        ok: late <= 50,
      },
    ];
  } finally {
    await browser.close();
    server.kill();
  }
}
