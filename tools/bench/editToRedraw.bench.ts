/** From an edit in the browser to the redrawn plan, on the built app: what a hand on a number field feels. */
import { existsSync } from 'node:fs';
import { chromium, type Page } from '@playwright/test';
import { preview } from 'vite';
import { ensureChromium } from '../findChromium.mjs';
import type { Row } from './row';

const EDITS = 60;
const WARM_UP = 10;
const PAUSE = 150;
/** ms; agrees with what is promised of a changed slider. */
const TARGET = 50;
const MEASURE = 'edit to redrawn plan';

async function timeEdits(page: Page, edits: number): Promise<number[]> {
  await page.evaluate((name) => {
    const times: number[] = [];
    (window as unknown as { editTimes: number[] }).editTimes = times;
    new PerformanceObserver((list) => {
      for (const entry of list.getEntriesByName(name)) times.push(entry.duration);
    }).observe({ entryTypes: ['measure'] });
  }, MEASURE);
  for (let edit = 0; edit < edits; edit++) {
    await page.getByRole('button', { name: `${edit % 2 ? 'Less' : 'More'} Wheel speed` }).click();
    await page.waitForTimeout(PAUSE);
  }
  return page.evaluate(() => (window as unknown as { editTimes: number[] }).editTimes);
}

const quantile = (sorted: readonly number[], share: number): number =>
  sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? Number.NaN;

export async function run(): Promise<Row[]> {
  if (!existsSync('dist/index.html'))
    throw new Error('There is no built app to measure: run "npm run build".');
  const server = await preview({ preview: { port: 4191 }, logLevel: 'silent' });
  const browser = await chromium.launch({
    executablePath: await ensureChromium(),
    args: ['--enable-unsafe-swiftshader', '--disable-quic', '--disable-dev-shm-usage'],
  });
  try {
    const page = await browser.newPage({ viewport: { width: 1180, height: 820 } });
    await page.goto(`${server.resolvedUrls?.local[0]}?quality=low`);
    await page.getByRole('button', { name: 'Pause', exact: true }).click();
    await timeEdits(page, WARM_UP);
    const times = (await timeEdits(page, EDITS)).toSorted((a, b) => a - b);
    const p95 = quantile(times, 0.95);
    return [
      { name: 'edit to redrawn plan, median', value: quantile(times, 0.5), unit: 'ms' },
      {
        name: 'edit to redrawn plan, 95th percentile (software graphics)',
        value: p95,
        unit: 'ms',
        target: `at most ${TARGET} ms`,
        ok: times.length >= EDITS && p95 <= TARGET,
      },
    ];
  } finally {
    await browser.close();
    await server.close();
  }
}
