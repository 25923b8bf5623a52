/** The page under test, with two watches on it: nothing may be logged as an error, no request may leave the origin. */
import { test as base, expect, type Locator, type Page } from '@playwright/test';

/** Said by the 3D libraries and the software renderer, and no fault of the app's. */
const EXPECTED_NOISE = [/THREE\.Clock: This module has been deprecated/, /GPU stall due to ReadPixels/];

export const test = base.extend<{ watched: undefined }>({
  watched: [
    async ({ page, baseURL }, use) => {
      const faults: string[] = [];
      page.on('console', (message) => {
        const text = message.text();
        const isFault = message.type() === 'error' || message.type() === 'warning';
        if (isFault && !EXPECTED_NOISE.some((noise) => noise.test(text))) faults.push(text);
      });
      page.on('pageerror', (error) => faults.push(`${error.message}\n${error.stack}`));
      page.context().on('request', (request) => {
        const address = request.url();
        const isOwn = address.startsWith(`${baseURL}/`) || /^(blob|data):/.test(address);
        if (!isOwn) faults.push(`request to ${address}`);
      });
      await use(undefined);
      expect(faults).toEqual([]);
    },
    { auto: true },
  ],
});

export { expect };

/** Opens the app in its plain quality and waits until the stage has drawn and the ledger is there. */
export async function openApp(page: Page): Promise<void> {
  await page.goto('/?quality=low');
  await waitForApp(page);
}

export async function waitForApp(page: Page): Promise<void> {
  await expect(page.locator('[data-ready="true"] canvas')).toBeVisible({ timeout: 30_000 });
  await expect(page.locator('.readouts output').first()).toBeVisible();
}

export const goTo = async (page: Page, station: string): Promise<void> => {
  await page.getByRole('navigation', { name: 'Stations' }).getByRole('button', { name: station }).click();
};

export const openPart = async (page: Page, part: string): Promise<void> => {
  await page
    .getByRole('navigation', { name: 'Parts of the rig' })
    .getByRole('button', { name: part })
    .click();
};

export const pause = async (page: Page): Promise<void> => {
  const button = page.getByRole('button', { name: 'Pause', exact: true });
  if (await button.isVisible()) await button.click();
  await expect(page.getByRole('button', { name: 'Play', exact: true })).toBeVisible();
};

/** The field with a label that begins so. */
export const field = (page: Page, label: string): Locator =>
  page.getByRole('spinbutton', { name: new RegExp(`^${label}`) }).first();

export async function type(page: Page, label: string, text: string): Promise<void> {
  const input = field(page, label);
  await input.scrollIntoViewIfNeeded();
  await input.click();
  await input.fill(text);
  await input.press('Enter');
}

export const figure = async (page: Page, label: string): Promise<string> =>
  (await page.locator('.key-figures > div', { hasText: label }).locator('dd').first().textContent()) ?? '';

export async function openRigs(page: Page): Promise<void> {
  await page.getByRole('button', { name: /save and open rigs/ }).click();
  await expect(page.getByRole('dialog', { name: 'Rigs' })).toBeVisible();
}

export interface Picture {
  readonly colours: number;
  /** Sum over the pixels, to tell two pictures apart. */
  readonly digest: number;
}

/** What the canvas shows: how many colours, and a digest of its pixels. */
export async function lookAtStage(page: Page): Promise<Picture> {
  const png = (await page.locator('[data-ready="true"] canvas').screenshot()).toString('base64');
  return page.evaluate(async (encoded) => {
    const bytes = Uint8Array.from(atob(encoded), (letter) => letter.charCodeAt(0));
    const bitmap = await createImageBitmap(new Blob([bytes], { type: 'image/png' }));
    const canvas = new OffscreenCanvas(bitmap.width, bitmap.height);
    const context = canvas.getContext('2d');
    if (!context) throw new Error('no 2D canvas to look at the picture with');
    context.drawImage(bitmap, 0, 0);
    const pixels = new Uint32Array(context.getImageData(0, 0, bitmap.width, bitmap.height).data.buffer);
    let digest = 0;
    for (const [place, pixel] of pixels.entries()) digest = (digest * 31 + pixel + place) >>> 0;
    return { colours: new Set(pixels).size, digest };
  }, png);
}
