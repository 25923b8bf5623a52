import { expect, openApp, pause, test } from './page';

test('the yard runs live on the stage, is kicked, met by a block, and put back', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await page.getByRole('button', { name: 'Yard', exact: true }).click();
  const yard = page.getByRole('region', { name: 'Yard' });
  await expect(yard).toBeVisible();
  const time = async (): Promise<number> =>
    Number.parseFloat((await page.locator('.yard-head output').first().textContent()) ?? '0');
  await expect.poll(time, { timeout: 30_000 }).toBeGreaterThan(0.3);

  await yard.getByRole('button', { name: /^Drop block/ }).click();
  for (let i = 0; i < 6; i++) await yard.getByRole('button', { name: /^Kick left/ }).click();
  await expect(page.locator('.yard-head')).toContainText(/over|toppled|fell/i, { timeout: 40_000 });

  await yard.getByRole('button', { name: 'Reset' }).click();
  await expect.poll(time, { timeout: 30_000 }).toBeLessThan(3);
  await page.getByRole('button', { name: 'Yard', exact: true }).click();
  await expect(yard).toBeHidden();
});
