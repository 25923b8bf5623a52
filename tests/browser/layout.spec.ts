import { expect, goTo, lookAtStage, openApp, openPart, pause, test, type } from './page';

test('the layout check tells torque, leak and singularity, and draws the envelope', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await page.getByRole('button', { name: 'Pyramid', exact: true }).click();
  await page.getByRole('button', { name: 'Layout check' }).click();
  await expect(page.getByRole('heading', { name: 'At a tilt' })).toBeVisible();
  const row = (label: string) => page.locator('.figure > button', { hasText: label }).first();
  await expect(row('Most torque in yaw')).toContainText('N·m');
  await row('Distance to singularity').click();
  await expect(page.locator('.grounds').first()).toContainText('Yoshikawa');
  const before = await lookAtStage(page);
  await page.getByRole('switch', { name: /^On the stage/ }).click();
  await expect.poll(async () => (await lookAtStage(page)).digest).not.toBe(before.digest);
  const outer = await lookAtStage(page);
  await page.getByRole('switch', { name: /^Inner singular surfaces/ }).click();
  await expect.poll(async () => (await lookAtStage(page)).digest).not.toBe(outer.digest);
});

test('a fault of a pair is told in numbers and shown as a leak', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await page.getByRole('button', { name: 'Layout check' }).click();
  const show = page.getByRole('button', { name: 'Turned about vertical: show the leak' });
  await show.scrollIntoViewIfNeeded();
  const before = await lookAtStage(page);
  await show.click();
  await expect(show).toHaveAttribute('aria-pressed', 'true');
  await expect.poll(async () => (await lookAtStage(page)).digest).not.toBe(before.digest);
});

test('the weigh station tells how it falls and puts trim ballast in as one step to undo', async ({
  page,
}) => {
  await openApp(page);
  await pause(page);
  await goTo(page, 'Weigh');
  await expect(page.locator('.figure', { hasText: 'A lean doubles in' })).toBeVisible();
  await expect(page.getByText('no ballast is called for')).toBeVisible();
  await goTo(page, 'Assemble');
  await openPart(page, 'Payloads');
  await type(page, 'Payload centre y, left', '30');
  await goTo(page, 'Weigh');
  await expect(page.locator('.figure', { hasText: 'Ballast that cures it' })).toBeVisible();
  await page.getByRole('button', { name: 'Put it in the rig' }).click();
  await expect(page.getByText('no ballast is called for')).toBeVisible();
  await page.getByRole('button', { name: 'Undo: Put trim ballast in' }).click();
  await expect(page.getByRole('button', { name: 'Put it in the rig' })).toBeVisible();
});
