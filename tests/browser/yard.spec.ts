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
  // Kicked until it goes over: how many that takes depends on where in its step each one lands.
  await expect(async () => {
    await yard.getByRole('button', { name: /^Kick left/ }).click();
    await expect(page.locator('.yard-head')).toContainText('Toppled', { timeout: 400 });
  }).toPass({ timeout: 40_000, intervals: [50] });

  await yard.getByRole('button', { name: 'Reset' }).click();
  await expect.poll(time, { timeout: 30_000 }).toBeLessThan(3);
  await page.getByRole('button', { name: 'Yard', exact: true }).click();
  await expect(yard).toBeHidden();
});
