import type { Page } from '@playwright/test';
import { expect, field, lookAtStage, openApp, openPart, pause, test } from './page';

const canvas = (page: Page) => page.locator('[data-ready="true"] canvas');

/** Place on the page, CSS pixels, of the thickest clump of pixels in the colour of grips. */
async function findGrip(page: Page): Promise<{ x: number; y: number } | undefined> {
  const box = await canvas(page).boundingBox();
  const png = (await canvas(page).screenshot()).toString('base64');
  const found = await page.evaluate(async (encoded) => {
    const bytes = Uint8Array.from(atob(encoded), (letter) => letter.charCodeAt(0));
    const bitmap = await createImageBitmap(new Blob([bytes], { type: 'image/png' }));
    const context = new OffscreenCanvas(bitmap.width, bitmap.height).getContext('2d');
    if (!context) throw new Error('no 2D canvas to look at the picture with');
    context.drawImage(bitmap, 0, 0);
    const { data, width, height } = context.getImageData(0, 0, bitmap.width, bitmap.height);
    const isGrip = (x: number, y: number): boolean => {
      const at = 4 * (y * width + x);
      return data[at] === 0x0b && data[at + 1] === 0x7a && data[at + 2] === 0x72;
    };
    const REACH = 6;
    let best: { x: number; y: number; count: number } | undefined;
    for (let y = REACH; y < height - REACH; y += 2) {
      for (let x = REACH; x < width - REACH; x += 2) {
        if (!isGrip(x, y)) continue;
        let count = 0;
        for (let dy = -REACH; dy <= REACH; dy++)
          for (let dx = -REACH; dx <= REACH; dx++) if (isGrip(x + dx, y + dy)) count++;
        if (!best || count > best.count) best = { x, y, count };
      }
    }
    return best;
  }, png);
  return found && box ? { x: box.x + found.x, y: box.y + found.y } : undefined;
}

/** Moves one finger along a line on the page. */
async function swipe(
  page: Page,
  from: { x: number; y: number },
  by: { x: number; y: number },
): Promise<void> {
  const session = await page.context().newCDPSession(page);
  const STEPS = 8;
  for (let step = 0; step <= STEPS; step++) {
    const x = from.x + (by.x * step) / STEPS;
    const y = from.y + (by.y * step) / STEPS;
    await session.send('Input.dispatchTouchEvent', {
      type: step === 0 ? 'touchStart' : 'touchMove',
      touchPoints: [{ x, y }],
    });
  }
  await session.send('Input.dispatchTouchEvent', { type: 'touchEnd', touchPoints: [] });
}

const stageMiddle = async (page: Page): Promise<{ x: number; y: number }> => {
  const box = await canvas(page).boundingBox();
  if (!box) throw new Error('the stage is not on screen');
  // What is to the left of the ledger and below the caption.
  const isWide = box.width > 600;
  return { x: box.x + (box.width - (isWide ? 236 : 0)) / 2, y: box.y + box.height / 2 };
};

test('a finger turns the view, and a tap selects what is under it', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await page.getByRole('slider', { name: 'Playhead' }).press('Home');
  const middle = await stageMiddle(page);
  const before = await lookAtStage(page);
  await swipe(page, { x: middle.x - 90, y: middle.y + 60 }, { x: 80, y: 12 });
  await expect.poll(async () => (await lookAtStage(page)).digest).not.toBe(before.digest);
  // The body stands somewhere on the upright line through the middle: tap up along it until something is met.
  const words = page.locator('.stage-words[aria-live]');
  await expect(async () => {
    for (const up of [0, 30, 60, 90, -30]) {
      await page.touchscreen.tap(middle.x, middle.y - up);
      await page.waitForTimeout(250);
      if ((await words.textContent())?.includes('Selected:')) return;
    }
    throw new Error('nothing along the line was selected');
  }).toPass({ timeout: 20_000 });
});

test('a grip dragged by a finger changes its number, as one step to undo', async ({ page }) => {
  await openApp(page);
  await pause(page);
  // Always the same pose, so that the thickest clump is always the same grip.
  await page.getByRole('slider', { name: 'Playhead' }).press('Home');
  await openPart(page, 'Body');
  await expect(page.locator('.stage-words[aria-live]')).toContainText('Selected: Torso');
  const grip = await findGrip(page);
  if (!grip) throw new Error('no grip is to be seen');
  await swipe(page, grip, { x: 30, y: -30 });
  const undo = page.getByRole('button', { name: /^Undo: / });
  await expect(undo).toBeEnabled();
  await undo.click();
  await expect(page.getByRole('button', { name: /^Redo: / })).toBeEnabled();
  // The view was not turned by it: undone, the grip is where it was. Measured 2 px off, from where the eye was led.
  await expect
    .poll(async () => {
      const now = await findGrip(page);
      return now ? Math.hypot(now.x - grip.x, now.y - grip.y) : Number.POSITIVE_INFINITY;
    })
    .toBeLessThan(6);
});

test('the stage takes the room it is given', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const size = page.viewportSize();
  if (!size) throw new Error('no viewport');
  const sizeOf = () => canvas(page).evaluate((element: HTMLCanvasElement) => [element.width, element.height]);
  const [width, height] = (await sizeOf()) as [number, number];
  await page.setViewportSize({ width: size.width + 60, height: size.height - 40 });
  await expect.poll(async () => (await sizeOf())[0]).toBe(width + 60);
  expect((await sizeOf())[1]).toBeLessThan(height);
  expect((await lookAtStage(page)).colours).toBeGreaterThan(50);
});

test('a picture lost with its context is drawn again', async ({ page }) => {
  await openApp(page);
  await pause(page);
  await expect(field(page, 'Wheel speed')).toBeVisible();
  const before = await lookAtStage(page);
  await canvas(page).evaluate(async (element: HTMLCanvasElement) => {
    const loss = element.getContext('webgl2')?.getExtension('WEBGL_lose_context');
    if (!loss) throw new Error('the browser cannot lose a context on purpose');
    const lost = new Promise((resolve) =>
      element.addEventListener('webglcontextlost', resolve, { once: true }),
    );
    loss.loseContext();
    await lost;
    await new Promise((resolve) => setTimeout(resolve, 100));
    loss.restoreContext();
  });
  await expect.poll(async () => (await lookAtStage(page)).digest).toBe(before.digest);
});
