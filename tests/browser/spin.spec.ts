import { readFileSync, writeFileSync } from 'node:fs';
import AxeBuilder from '@axe-core/playwright';
import type { Page } from '@playwright/test';
import { BENCH_MOTOR, NO_PARTS } from '../../src/core/rig';
import { expect, figure, goTo, openApp, pause, test, type } from './page';

async function openSpin(page: Page): Promise<void> {
  await openApp(page);
  await pause(page);
  await goTo(page, 'Spin up');
  await expect(page.locator('.key-figures')).toContainText('Safe speed');
}

const openTopic = (page: Page, topic: string): Promise<void> =>
  page
    .getByRole('navigation', { name: 'Of the wheel' })
    .getByRole('button', { name: topic, exact: true })
    .click();

const safeSpeed = async (page: Page): Promise<number> => Number.parseFloat(await figure(page, 'Safe speed'));

const stackNames = (page: Page): Promise<string[]> => page.locator('.stack-name b').allTextContents();

test('a stack is edited, its order changed by key and touch, and its safe speed follows', async ({
  page,
}) => {
  await openSpin(page);
  const before = await safeSpeed(page);
  expect(before).toBeGreaterThan(8000);
  await page.locator('.stack-name', { hasText: '1 · Rim' }).click();
  await page.getByLabel('Material').selectOption({ label: 'PLA printed' });
  await expect.poll(() => safeSpeed(page)).not.toBe(before);
  await expect(page.locator('.key-figures')).toContainText('printed');
  await expect(page.locator('.cautions')).toContainText('Printed plastic varies');

  await page.getByRole('button', { name: 'Undo: Material' }).click();
  await expect.poll(() => safeSpeed(page)).toBe(before);

  await page.getByRole('button', { name: 'Bolts on a circle' }).click();
  await expect.poll(() => stackNames(page)).toEqual(['1 · Rim', '2 · Disc', '3 · Hub', '4 · Bolts']);
  await page.getByRole('button', { name: 'Move 4 · Bolts up' }).click();
  await expect.poll(() => stackNames(page)).toEqual(['1 · Rim', '2 · Disc', '3 · Bolts', '4 · Hub']);
  // The key moves it again, and again: the focus goes with the part.
  await page.locator('.stack-name', { hasText: 'Bolts' }).focus();
  await page.keyboard.press('Alt+ArrowUp');
  await expect(page.locator('.stack-name:focus')).toContainText('2 · Bolts');
  await page.keyboard.press('Alt+ArrowUp');
  await expect.poll(() => stackNames(page)).toEqual(['1 · Bolts', '2 · Rim', '3 · Disc', '4 · Hub']);
  // The bolt's holes weaken the part that carries them.
  await expect.poll(() => safeSpeed(page)).toBeLessThan(before);
  await page.getByRole('button', { name: 'Take off 1 · Bolts' }).click();
  await expect.poll(() => safeSpeed(page)).toBe(before);
});

test('too fast fails in words, on the mark and in the drawing; every number opens', async ({ page }) => {
  await openSpin(page);
  await type(page, 'Wheel speed', '30000');
  await expect(page.getByRole('alert').filter({ hasText: 'Do not spin it so' })).toContainText(
    'faster than its safe speed',
  );
  await expect(
    page.getByRole('navigation', { name: 'Stations' }).getByRole('button', { name: /^Spin up ?: fails/ }),
  ).toBeVisible();
  await expect(page.locator('.wheel-part[data-over]').first()).toBeVisible();
  await expect(page.getByText('Battery and motor current').first()).toBeVisible();

  await openTopic(page, 'Stress');
  const row = page.locator('.figure', { hasText: 'Safe speed' });
  await row.getByRole('button').click();
  await expect(row.locator('.grounds')).toContainText('σ_allowable');
  await expect(row.locator('.grounds')).toContainText('Minimum allowable');
  await expect(row.locator('.grounds-source')).toContainText('Source: ');

  const undo = page.getByRole('button', { name: 'Undo: Wheel speed' });
  await undo.click();
  await expect(page.locator('.plan-state[data-state="holds"]')).toContainText('May be spun');
});

test('a factor that is chosen changes the verdict and the mark, and no rig', async ({ page }) => {
  await openSpin(page);
  await openTopic(page, 'Stress');
  await type(page, 'Factor on speed squared', '20');
  await expect(page.locator('.plan-state')).toContainText('faster than its safe speed');
  await expect(page.getByRole('button', { name: /^Spin up ?: fails/ })).toBeVisible();
  await expect(page.locator('.rig-name')).toContainText('no changes');
});

test('a bearing is chosen from the standard sizes and lives longer; undo brings the old one back', async ({
  page,
}) => {
  await openSpin(page);
  await openTopic(page, 'Bearings');
  await expect(page.locator('.spin-note').first()).toContainText('the gyroscopic couple rules');
  const life = page.locator('.figure', { hasText: 'Life of nine in ten' }).locator('b');
  const before = (await life.textContent()) ?? '';
  const size = page.getByLabel('Standard size');
  await size.selectOption({ label: '6000 · 10 × 26 × 8' });
  await expect(life).not.toHaveText(before);
  await expect(page.getByRole('spinbutton', { name: /^Dynamic load rating/ })).toHaveValue('4750');
  await page.getByRole('button', { name: 'Undo: Bearing 6000' }).click();
  await expect(life).toHaveText(before);
  await expect(size.locator('option:checked')).toHaveText('626 · 6 × 19 × 6');
});

test('the spin-up is drawn; what drags on the wheel is told beside open air', async ({ page }) => {
  await openSpin(page);
  await openTopic(page, 'Drive');
  const canvas = page.locator('.spin-curve canvas');
  await expect(canvas).toBeVisible();
  const isDrawn = await canvas.evaluate((element: HTMLCanvasElement) =>
    element
      .getContext('2d')
      ?.getImageData(0, 0, element.width, element.height)
      .data.some((value) => value > 0),
  );
  expect(isDrawn).toBe(true);
  for (const label of [
    'Time to spin up',
    'Power to hold speed',
    'Heat in the motor',
    'Coasts to',
    'Stops under',
  ]) {
    await expect(page.locator('.figure', { hasText: label })).toBeVisible();
  }
  await expect(page.locator('.figure', { hasText: 'The same wheel in open air' })).toBeVisible();
  await openTopic(page, 'Run');
  const run = page.locator('.figure', { hasText: 'Run time on one charge' });
  await run.getByRole('button').click();
  await expect(run.locator('.grounds')).toContainText('Mean power of the gimbal drives');
});

test("one's own parts are kept, shared as a file, and taken in; a bad file changes nothing", async ({
  page,
}, info) => {
  await openSpin(page);
  await openTopic(page, 'My parts');
  await page.getByRole('button', { name: /^Keep this motor/ }).click();
  await expect(page.locator('.own-parts li')).toHaveCount(1);
  const other = { ...NO_PARTS, motors: [{ ...BENCH_MOTOR, name: 'Bell, 700 rpm/V', velocityConstant: 73 }] };
  const good = info.outputPath('good.parts.json');
  writeFileSync(good, JSON.stringify(other));
  await page.getByLabel('Parts file').setInputFiles(good);
  await expect(page.locator('.own-parts li')).toHaveCount(2);
  const bad = info.outputPath('bad.parts.json');
  writeFileSync(bad, JSON.stringify({ ...other, motors: [{ ...BENCH_MOTOR, resistance: 0 }] }));
  await page.getByLabel('Parts file').setInputFiles(bad);
  await expect(page.locator('.notice[data-kind="fault"]')).toContainText(
    'motors[0].resistance: Winding resistance is 0 mΩ; it must be a number from',
  );
  await expect(page.locator('.own-parts li')).toHaveCount(2);
  const coming = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Save my parts to a file' }).click();
  const saved = JSON.parse(readFileSync(await (await coming).path(), 'utf8')) as typeof NO_PARTS;
  expect(saved.motors.map(({ name }) => name)).toEqual([BENCH_MOTOR.name, 'Bell, 700 rpm/V']);

  await page.getByRole('button', { name: 'Use Bell, 700 rpm/V' }).click();
  await expect(page.getByRole('button', { name: 'Undo: Use Bell, 700 rpm/V' })).toBeEnabled();
  await page.reload();
  await goTo(page, 'Spin up');
  await openTopic(page, 'My parts');
  await expect(page.locator('.own-parts li')).toHaveCount(2);
});

for (const scheme of ['light', 'dark'] as const) {
  test(`nothing bars the way on any topic in ${scheme}, and all is large enough for a finger`, async ({
    page,
  }) => {
    await page.emulateMedia({ colorScheme: scheme });
    await openSpin(page);
    for (const topic of ['Wheel', 'Stress', 'Balance', 'Bearings', 'Drive', 'Run', 'My parts']) {
      await openTopic(page, topic);
      await expect(page.locator('.cautions li').first()).toContainText('Because: ');
      const found = await new AxeBuilder({ page }).include('.sheet').analyze();
      const serious = found.violations
        .filter(({ impact }) => impact === 'serious' || impact === 'critical')
        .map(
          ({ id, nodes }) => `${topic}: ${id}: ${nodes.map(({ target }) => target.join(' ')).join(' | ')}`,
        );
      expect(serious).toEqual([]);
      const faults = await page.evaluate(() => {
        const small = [...document.querySelectorAll('.sheet button, .sheet select, .sheet .number-box')]
          .map((element) => ({ name: element.textContent ?? '', box: element.getBoundingClientRect() }))
          .filter(({ box }) => box.width > 0 && (box.height < 43.5 || box.width < 43.5))
          .map(({ name, box }) => `small: ${name} ${box.width} x ${box.height}`);
        const sheet = document.querySelector('.sheet-body');
        const wide = sheet && sheet.scrollWidth > sheet.clientWidth + 1 ? ['wider than the sheet'] : [];
        return [...small, ...wide];
      });
      expect(faults, topic).toEqual([]);
    }
  });
}
