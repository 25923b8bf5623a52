import AxeBuilder from '@axe-core/playwright';
import type { Page } from '@playwright/test';
import { expect, field, goTo, openApp, pause, test, type } from './page';

const openPlan = async (page: Page): Promise<void> => {
  await openApp(page);
  await pause(page);
  await goTo(page, 'Plan');
};

const unfold = async (page: Page, title: string): Promise<void> => {
  const button = page.getByRole('button', { name: title, exact: true });
  await button.scrollIntoViewIfNeeded();
  await button.click();
};

const addShove = async (page: Page): Promise<void> => {
  await page.getByLabel('Add to the run').selectOption({ label: 'Shove' });
  await expect(page.getByRole('list', { name: 'Sequence' }).getByRole('button')).toHaveCount(1);
};

const shoveBlock = (page: Page) =>
  page.getByRole('list', { name: 'Sequence' }).getByRole('button', { name: /^Shove at/ });

test('a shove is added, moved on the ribbon by finger and by key, edited and taken out', async ({ page }) => {
  await openPlan(page);
  await addShove(page);
  const block = shoveBlock(page);
  const box = await block.boundingBox();
  if (!box) throw new Error('the block is not on the ribbon');
  const session = await page.context().newCDPSession(page);
  const touch = (kind: 'touchStart' | 'touchMove' | 'touchEnd', x?: number) =>
    session.send('Input.dispatchTouchEvent', {
      type: kind,
      touchPoints: x === undefined ? [] : [{ x, y: box.y + box.height / 2 }],
    });
  const before = Number(await field(page, 'Starts at').inputValue());
  await touch('touchStart', box.x + 8);
  for (const by of [10, 30, 60]) await touch('touchMove', box.x + 8 + by);
  await touch('touchEnd');
  await expect.poll(async () => Number(await field(page, 'Starts at').inputValue())).toBeGreaterThan(before);
  const dragged = Number(await field(page, 'Starts at').inputValue());
  await expect(page.getByRole('button', { name: /^Undo: Move: Shove/ })).toBeVisible();

  await block.focus();
  await page.keyboard.press('ArrowRight');
  await expect
    .poll(async () => Math.abs(Number(await field(page, 'Starts at').inputValue()) - dragged - 0.05))
    .toBeLessThan(1e-6);

  await type(page, 'Impulse', '0.1');
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
  await page.getByRole('button', { name: /^Take out: Shove/ }).click();
  await expect(page.getByRole('list', { name: 'Sequence' })).toHaveCount(0);
});

test('a step too slow has no plan, and a cure is one tap', async ({ page }) => {
  await openPlan(page);
  await type(page, 'Step time', '4');
  await expect(page.getByRole('heading', { name: 'No plan' })).toBeVisible();
  const cure = page.locator('.cures button').first();
  await expect(cure).toBeVisible({ timeout: 45_000 });
  await cure.click();
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
});

test('the plan goes out as JSON and CSV', async ({ page }) => {
  await openPlan(page);
  for (const [button, name] of [
    ['Plan as JSON', 'strider-plan.json'],
    ['Schedule as CSV', 'strider-tilt-schedule.csv'],
  ] as const) {
    const download = page.waitForEvent('download');
    await page.getByRole('button', { name: button }).click();
    expect((await download).suggestedFilename()).toBe(name);
  }
});

test('a trade map is cancelled at once while the screen stays live, and a cell loads its rig', async ({
  page,
}) => {
  await openPlan(page);
  await unfold(page, 'Trade map');
  await page.getByRole('button', { name: 'Draw the map' }).click();
  const cancel = page.getByRole('button', { name: 'Cancel the map' });
  await expect(cancel).toBeVisible();
  // the screen answers while the map is drawn: a field takes a key
  await type(page, 'Length of the run', '6');
  await expect(field(page, 'Length of the run')).toHaveValue('6');
  const start = Date.now();
  if (await cancel.isVisible()) await cancel.click();
  await expect(page.getByRole('button', { name: 'Draw the map' })).toBeVisible();
  expect(Date.now() - start).toBeLessThan(3000);

  await page.getByRole('button', { name: 'Draw the map' }).click();
  await expect(page.getByRole('button', { name: /^Trade map, 20 of 20 rows/ })).toBeVisible({
    timeout: 45_000,
  });
  const picture = page.locator('.trade-picture canvas');
  await picture.scrollIntoViewIfNeeded();
  const box = await picture.boundingBox();
  if (!box) throw new Error('the map is not on screen');
  await page.touchscreen.tap(box.x + 0.62 * box.width, box.y + 0.4 * box.height);
  await expect(page.locator('.trade [role="status"]')).toContainText('Step time');
  await expect(
    page.getByRole('button', { name: /^Undo: Step time and hip sway from the map/ }),
  ).toBeVisible();
});

test('the smallest wheel goes into the rig by one tap', async ({ page }) => {
  await openPlan(page);
  await unfold(page, 'Smallest wheel');
  await page.getByRole('button', { name: 'Find the smallest wheel' }).click();
  await expect(page.getByText('Lightest wheel:')).toBeVisible({ timeout: 30_000 });
  await page.getByRole('button', { name: 'Put all 2 in the rig' }).click();
  await expect(page.getByRole('button', { name: 'Undo: Smallest wheels' })).toBeVisible();
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
});

test('keyframes that do not fit are answered in words and change nothing', async ({ page }) => {
  await openPlan(page);
  await page
    .locator('input[aria-label="Read keyframes from CSV"]')
    .setInputFiles({ name: 'gait.csv', mimeType: 'text/csv', buffer: Buffer.from('time,x\n0,1\n1,2\n') });
  await expect(page.getByRole('alert').filter({ hasText: 'columns' })).toContainText('2 legs need 7');
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
});

for (const theme of ['light', 'dark'] as const) {
  test(`nothing on the opened sheet is out of reach, ${theme}`, async ({ page }) => {
    await openPlan(page);
    await page.evaluate((name) => document.documentElement.setAttribute('data-theme', name), theme);
    await addShove(page);
    for (const title of ['Smallest wheel', 'Trade map', 'Shoves and steady loads']) await unfold(page, title);
    await expect(page.getByText('Largest shove from rest, by the array alone')).toBeVisible({
      timeout: 20_000,
    });
    const { violations } = await new AxeBuilder({ page }).analyze();
    expect(
      violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join(', ')}`),
    ).toEqual([]);
  });
}
