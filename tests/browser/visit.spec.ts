import {
  expect,
  field,
  figure,
  goTo,
  lookAtStage,
  openApp,
  openPart,
  openRigs,
  pause,
  test,
  type,
  waitForApp,
} from './page';

const clock = '.transport-clock';

test('a first visit shows a rig that is already balancing', async ({ page }) => {
  await openApp(page);
  await expect(page.getByRole('button', { name: 'Pause', exact: true })).toBeVisible();
  const before = await page.locator(clock).textContent();
  await expect(page.locator(clock)).not.toHaveText(before ?? '');
  const first = await lookAtStage(page);
  expect(first.colours).toBeGreaterThan(50);
  await expect
    .poll(async () => (await lookAtStage(page)).digest, { message: 'another picture as it plays' })
    .not.toBe(first.digest);
});

test('the stage is still while nothing moves', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await page.waitForTimeout(500);
  const first = await lookAtStage(page);
  await page.waitForTimeout(500);
  expect((await lookAtStage(page)).digest).toBe(first.digest);
});

test('an edit changes the figures, undo and redo give them back', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const before = await figure(page, 'Momentum to give');
  await type(page, 'Wheel speed', '6000');
  await expect.poll(() => figure(page, 'Momentum to give')).not.toBe(before);
  const after = await figure(page, 'Momentum to give');
  await page.getByRole('button', { name: 'Undo: Wheel speed' }).click();
  await expect.poll(() => figure(page, 'Momentum to give')).toBe(before);
  await page.getByRole('button', { name: 'Redo: Wheel speed' }).click();
  await expect.poll(() => figure(page, 'Momentum to give')).toBe(after);
});

test('a number takes expressions, steps, and refuses what is out of range with a sentence', async ({
  page,
}) => {
  await openApp(page);
  await pause(page);
  await openPart(page, 'Body');
  await type(page, 'Torso mass', '2 + 1');
  await expect(field(page, 'Torso mass')).toHaveValue('3');
  await page.getByRole('button', { name: 'More Torso mass' }).click();
  await expect(field(page, 'Torso mass')).toHaveValue('3.1');
  await type(page, 'Torso mass', '2 lb');
  await expect(field(page, 'Torso mass')).toHaveValue('0.9072');
  await type(page, 'Torso mass', '-4');
  await expect(page.getByRole('alert').filter({ hasText: 'Torso mass' })).toContainText(
    'Torso mass: −4.00 kg will not do; it must be from 0.0100 kg to 5000 kg.',
  );
  await expect(field(page, 'Torso mass')).toHaveValue('0.9072');
});

test('a finger drags a number sideways, as one step to undo', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const input = field(page, 'Middle z, up');
  await input.scrollIntoViewIfNeeded();
  const box = await input.boundingBox();
  if (!box) throw new Error('the field is not on screen');
  const session = await page.context().newCDPSession(page);
  const touch = (kind: 'touchStart' | 'touchMove' | 'touchEnd', x?: number) =>
    session.send('Input.dispatchTouchEvent', {
      type: kind,
      touchPoints: x === undefined ? [] : [{ x, y: box.y + box.height / 2 }],
    });
  const from = box.x + box.width / 2;
  await touch('touchStart', from);
  for (let moved = 4; moved <= 40; moved += 4) await touch('touchMove', from + moved);
  await touch('touchEnd');
  await expect(input).not.toHaveValue('560');
  await page.getByRole('button', { name: /^Undo: Middle z/ }).click();
  await expect(input).toHaveValue('560');
});

test('layouts are laid out by one tap', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const before = await figure(page, 'Mass');
  const lay = (layout: string) => page.getByRole('button', { name: layout, exact: true });
  await lay('Two pairs').click();
  await expect(lay('Two pairs')).toHaveAttribute('aria-pressed', 'true');
  await expect.poll(() => figure(page, 'Mass')).not.toBe(before);
  // Roll and pitch each have their lines; opening one must not open the other.
  if ((page.viewportSize()?.width ?? 0) >= 760) {
    await page.locator('.rung', { hasText: 'Momentum in pitch' }).click();
    await expect(page.locator('.rung[aria-expanded="true"]')).toHaveCount(1);
  }
  for (const layout of ['Single', 'Pyramid', 'Reaction wheel', 'Scissored pair']) {
    await lay(layout).click();
    await expect(lay(layout)).toHaveAttribute('aria-pressed', 'true');
  }
  await expect.poll(() => figure(page, 'Mass')).toBe(before);
});

test('a plan that cannot exist says why, and a cure makes it exist', async ({ page }) => {
  await openApp(page);
  await goTo(page, 'Plan');
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
  await type(page, 'Step time', '3');
  const state = page.locator('.plan-state');
  await expect(state).toContainText('No plan');
  await expect(state.locator('.cures button').first()).toBeVisible({ timeout: 30_000 });
  await state.locator('.cures button').first().click();
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible();
});

test('with the array switched off the body falls', async ({ page }) => {
  await openApp(page);
  await goTo(page, 'Plan');
  await expect(page.locator('.plan-state')).toContainText('holds to the end');
  await page.getByRole('switch', { name: /^Array/ }).click();
  await expect(page.locator('.plan-state')).toContainText(/Falls in the preview after \d+\.\d\d s/);
  await page.getByRole('switch', { name: /^Array/ }).click();
  await expect(page.locator('.plan-state')).toContainText('holds to the end');
});

test('the ledger opens a line to its grounds and moves the ribbon there', async ({ page, isMobile }) => {
  await openApp(page);
  await pause(page);
  if (isMobile && (page.viewportSize()?.width ?? 0) < 760) await page.locator('.ledger-folded').click();
  const rung = page.locator('.rung', { hasText: 'Momentum in roll' });
  await rung.click();
  await expect(rung).toHaveAttribute('aria-expanded', 'true');
  const grounds = page.locator('.line-grounds');
  await expect(grounds).toContainText('Source:');
  const at = /Tightest at ([\d.]+) s/.exec((await grounds.textContent()) ?? '')?.[1];
  await expect(page.locator(clock)).toHaveText(`${Number(at).toFixed(2)} s`);
  expect(await page.evaluate(() => [scrollX, scrollY])).toEqual([0, 0]);
});

test('the ribbon is scrubbed by pointer and by key', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const strip = page.getByRole('slider', { name: 'Playhead' });
  const box = await strip.boundingBox();
  if (!box) throw new Error('the ribbon is not on screen');
  await page.mouse.click(box.x + box.width / 2, box.y + box.height / 2);
  const length = Number(await strip.getAttribute('aria-valuemax'));
  expect(Math.abs(Number(await strip.getAttribute('aria-valuenow')) - length / 2)).toBeLessThan(0.05); // measured 0.01
  await strip.press('Home');
  await expect(page.locator(clock)).toHaveText('0.00 s');
});

test('what is saved is there after a reload, and unsaved work too', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await openRigs(page);
  const name = page.getByLabel('Name');
  await name.fill('Bench walker');
  await name.press('Enter');
  await page.getByRole('button', { name: 'Save in this browser' }).click();
  await expect(page.getByText('"Bench walker" is kept in this browser.')).toBeVisible();
  await page.keyboard.press('Escape');
  await page.reload();
  await waitForApp(page);
  await expect(page.locator('.rig-name')).toContainText('Bench walker');
  await expect(page.locator('.rig-name')).toContainText('no changes');
  await type(page, 'Wheel speed', '7000');
  await expect(page.locator('.rig-name')).toContainText('not saved');
  // The draft is written once the hand has rested.
  await page.waitForTimeout(1200);
  await page.reload();
  await waitForApp(page);
  await expect(field(page, 'Wheel speed')).toHaveValue('7000');
  await expect(page.locator('.rig-name')).toContainText('not saved');
});

test('it works on without a network', async ({ page, context }) => {
  await openApp(page);
  await page.waitForFunction(async () => (await navigator.serviceWorker.ready).active?.state === 'activated');
  await context.setOffline(true);
  await page.reload();
  await waitForApp(page);
  await pause(page);
  expect((await lookAtStage(page)).colours).toBeGreaterThan(50);
  const before = await figure(page, 'Momentum to give');
  await type(page, 'Wheel speed', '5000');
  await expect.poll(() => figure(page, 'Momentum to give')).not.toBe(before);
  await context.setOffline(false);
});

test('the browser offers to install it', async ({ page, context }) => {
  await openApp(page);
  await page.waitForFunction(async () => (await navigator.serviceWorker.ready).active?.state === 'activated');
  const session = await context.newCDPSession(page);
  const { installabilityErrors } = await session.send('Page.getInstallabilityErrors');
  // A test's context counts as a private window, where no browser installs anything.
  expect(installabilityErrors.map(({ errorId }) => errorId).filter((id) => id !== 'in-incognito')).toEqual(
    [],
  );
});
