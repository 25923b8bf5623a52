import { readFileSync } from 'node:fs';
import AxeBuilder from '@axe-core/playwright';
import type { Page } from '@playwright/test';
import { STRIDER } from '../../src/core/rig';
import { AS_DRAWN, runTrial, setUpTrial, USUAL_DOUBT, usualTrial, writeTrialCsv } from '../../src/core/trial';
import { expect, goTo, openApp, pause, test, type } from './page';

async function openTrial(page: Page): Promise<void> {
  await openApp(page);
  await pause(page);
  await goTo(page, 'Trial');
  await expect(page.locator('.trial-result h3')).toBeVisible();
}

const margin = (page: Page, term: string) =>
  page.locator('.trial-margins > div', { hasText: term }).locator('dd');

test('a trial runs by itself, shows on the ribbon, and its record agrees with the same run in Node', async ({
  page,
}) => {
  await openTrial(page);
  await expect(page.locator('.trial-result h3')).toHaveText('Holds to the end');
  const waiting = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Record as CSV' }).click();
  const download = await waiting;
  expect(download.suggestedFilename()).toBe('strider-trial.csv');
  const rows = (text: string): number[][] =>
    text
      .trimEnd()
      .split('\r\n')
      .slice(1)
      .map((line) => line.split(',').map(Number));
  const shown = rows(readFileSync(await download.path(), 'utf8'));

  const outcome = setUpTrial(STRIDER);
  if (outcome.kind === 'refused') throw new Error('refused');
  const { setup } = outcome;
  const switches = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };
  const run = runTrial(setup.setting, setup.schedules, {
    ...usualTrial(switches, STRIDER.jobs.duration),
    controller: setup.controller,
    build: { ...AS_DRAWN, ...USUAL_DOUBT },
  });
  const expected = rows(writeTrialCsv(run));
  expect(shown.length).toBe(expected.length);
  // The two engines' sines may differ in the last bit, which contact and play then carry on.
  let worst = 0;
  for (let k = 0; k < expected.length; k++) {
    for (let column = 0; column < 4; column++) {
      worst = Math.max(worst, Math.abs(shown[k]![column]! - expected[k]![column]!));
    }
  }
  expect(worst).toBeLessThan(1e-11); // measured 4.3e-15
});

test('gains are computed, judged, and dragged on their map', async ({ page }) => {
  await openTrial(page);
  await expect(margin(page, 'Delay margin')).toContainText('ms');
  await page.getByRole('button', { name: 'Compute gains and write them in' }).click();
  const p = page.getByRole('spinbutton', { name: /^P\b/ }).first();
  await expect(p).toBeVisible();
  await expect(page.getByRole('button', { name: 'Undo: Compute gains' })).toBeEnabled();
  const before = await margin(page, 'Largest sensitivity').textContent();

  const point = page.getByRole('button', { name: /^Present gains/ });
  await point.scrollIntoViewIfNeeded();
  const box = (await point.boundingBox())!;
  const area = (await page.locator('.gain-map-box').boundingBox())!;
  await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
  await page.mouse.down();
  await page.mouse.move(area.x + 0.3 * area.width, area.y + 0.4 * area.height, { steps: 4 });
  await expect.poll(() => margin(page, 'Largest sensitivity').textContent()).not.toBe(before);
  await page.mouse.up();
  await expect(page.getByRole('button', { name: 'Undo: Drag the gains' })).toBeEnabled();

  // Where the body is not stiff enough to stand, the verdict says so.
  await point.focus();
  await expect(async () => {
    await point.press('ArrowLeft');
    await expect(page.locator('.trial-verdict')).toContainText('Does not hold', { timeout: 500 });
  }).toPass({ timeout: 20_000 });
});

test('another law brings its own gains and its own words', async ({ page }) => {
  await openTrial(page);
  const terms = page.locator('.trial-terms');
  await expect(terms).toContainText('P acts as stiffness');
  await page.getByLabel('Controller').selectOption({ label: 'PID to tilt' });
  await expect(terms).toContainText('P acts as damping');
  await expect(page.getByRole('button', { name: 'Undo: Law in the firmware' })).toBeEnabled();
});

test('a shove at the playhead runs the trial again, and too large a one knocks it over', async ({ page }) => {
  await openTrial(page);
  await type(page, 'Shove', '20');
  await page.getByRole('button', { name: 'To the left' }).click();
  await expect(page.locator('.trial-result h3')).toContainText('Falls');
  await page.getByRole('button', { name: /^Take out the shove/ }).click();
  await expect(page.locator('.trial-result h3')).toHaveText('Holds to the end');
  await page.getByRole('button', { name: 'Largest shove it survives' }).click();
  const table = page.locator('.trial-table').first();
  await expect(table.locator('tbody tr')).toHaveCount(2);
  await expect(table.locator('tbody tr').first()).toContainText('N·s');
});

test('five runs stand side by side', async ({ page }) => {
  await openTrial(page);
  await page.getByRole('button', { name: 'Compare with parts switched off' }).click();
  const rows = page.locator('.trial-table', { hasText: 'outcome' }).locator('tbody tr');
  await expect(rows).toHaveCount(5);
  await expect(rows.nth(1)).toContainText(/Gimbals locked.*falls/);
  await expect(rows.nth(4)).toContainText(/Both.*holds/);
  await expect(page.locator('.small-multiples svg')).toHaveCount(10);
});

test('randomised runs show their progress, can be cancelled, and end in a rate with its interval', async ({
  page,
}, { project }) => {
  test.skip(project.name === 'phone', 'a minute of work that is the same at any width');
  await openTrial(page);
  await page.getByRole('button', { name: '5000', exact: true }).click();
  await page.getByRole('button', { name: 'Run 5000 trials' }).click();
  await expect(page.getByRole('progressbar', { name: 'Runs done' })).toBeVisible();
  await expect(page.getByText(/^[1-9]\d* of 5000 runs$/)).toBeVisible();
  await page.getByRole('button', { name: 'Cancel' }).click();
  await expect(page.getByRole('progressbar', { name: 'Runs done' })).toBeHidden();

  await page.getByRole('button', { name: '200', exact: true }).click();
  const rateOf = async (): Promise<string> => {
    await page.getByRole('button', { name: 'Run 200 trials' }).click();
    await expect(page.locator('.many-rate')).toContainText('of 200', { timeout: 45_000 });
    return (await page.locator('.many-rate').textContent()) ?? '';
  };
  const first = await rateOf();
  expect(first).toMatch(/% hold\d+ of 200; .+ to .+ with 95 % confidence/);
  await expect(page.getByRole('img', { name: 'Survival against size of shove' })).toBeVisible();
  await expect(page.locator('.influences li').first()).toContainText('Shove out of the blue');
  expect(await rateOf()).toBe(first);
});

for (const scheme of ['light', 'dark'] as const) {
  test(`nothing bars the way on the Trial station in ${scheme}`, async ({ page }) => {
    await page.emulateMedia({ colorScheme: scheme });
    await openTrial(page);
    await page.getByRole('button', { name: 'Compare with parts switched off' }).click();
    await expect(page.locator('.small-multiples')).toBeVisible();
    await expect(page.locator('.gain-map')).toBeVisible();
    const { violations } = await new AxeBuilder({ page }).include('.sheet').analyze();
    const serious = violations
      .filter(({ impact }) => impact === 'serious' || impact === 'critical')
      .map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join(' | ')}`);
    expect(serious).toEqual([]);
  });
}
