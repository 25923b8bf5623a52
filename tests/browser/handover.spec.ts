import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import type { Download, Page } from '@playwright/test';
import { unzipSync } from 'three/addons/libs/fflate.module.js';
import { hashRig } from '../../src/core/handover';
import { describeTrigger, spinRig } from '../../src/core/physics';
import { STRIDER } from '../../src/core/rig';
import { expect, goTo, openApp, openRigs, pause, test } from './page';

async function openStation(page: Page): Promise<void> {
  await openApp(page);
  await pause(page);
  await goTo(page, 'Hand over');
  await expect(page.getByRole('button', { name: 'All of it in one file' })).toBeVisible();
}

async function saved(page: Page, button: string | RegExp): Promise<Download> {
  const coming = page.waitForEvent('download');
  await page.getByRole('button', { name: button }).click();
  return coming;
}

/** Text of a PDF, page by page, read by a program that knows nothing of ours. */
function textOfPdf(path: string): readonly string[] {
  const read = spawnSync('pdftotext', ['-layout', path, '-'], { encoding: 'utf8' });
  if (read.error || read.status !== 0)
    throw new Error(
      'This test reads the printed sheet with pdftotext, which is not here: install the package poppler-utils.',
    );
  return read.stdout.split('\f').slice(0, -1);
}

test('the calculation sheet prints on A4, with formulas, limits, cautions, hash and version', async ({
  page,
}, info) => {
  await openStation(page);
  await page.getByRole('button', { name: 'Calculation sheet: read and print' }).click();
  const sheet = page.getByRole('dialog', { name: 'Calculation sheet of Strider' });
  await expect(sheet.getByRole('heading', { name: 'Strider: calculation sheet' })).toBeVisible();
  const path = info.outputPath('sheet.pdf');
  await page.pdf({ path, preferCSSPageSize: true });
  const pages = textOfPdf(path);
  expect(pages.length).toBeGreaterThan(4);
  expect(pages.length).toBeLessThan(24);
  const all = pages.join('\n').replace(/\s+/g, ' ');
  expect(pages[0]).toContain('Strider: calculation sheet');
  expect(all).toContain(hashRig(STRIDER));
  expect(all).toMatch(/Tiltwright \d+\.\d+\.\d+ · \d{4}-\d{2}-\d{2}/);
  for (const words of ['h = J_s ω', 'Torso mass', '3.500 kg', 'Gain', 'ISO 281:2007', 'Spare'])
    expect(all, words).toContain(words);
  const { cautions } = spinRig(STRIDER);
  expect(cautions.length).toBeGreaterThan(4);
  for (const caution of cautions) {
    expect(all).toContain(caution.sentence);
    expect(all).toContain(describeTrigger(caution.trigger));
  }
  // Of the page behind it nothing is printed.
  expect(all).not.toContain('Print, or save as PDF');
  expect(all).not.toContain('All of it in one file');
  await page.keyboard.press('Escape');
  await expect(sheet).toBeHidden();
  await expect(page.getByRole('button', { name: 'Calculation sheet: read and print' })).toBeFocused();
});

test('every file goes out alone, pictures as PNG too, and all of them in one archive', async ({ page }) => {
  await openStation(page);
  const header = await saved(page, /^Save as H:/);
  expect(header.suggestedFilename()).toBe('strider-control.h');
  expect(readFileSync(await header.path(), 'utf8')).toContain('strider_tilt_rad');
  for (const [button, name] of [
    ['Save as PNG: the stage', 'strider-stage.png'],
    ['Save as PNG: planned tilt', 'strider-tilt.png'],
  ] as const) {
    const download = await saved(page, new RegExp(`^${button}$`));
    expect(download.suggestedFilename()).toBe(name);
    const png = readFileSync(await download.path());
    expect(png.subarray(1, 4).toString('latin1')).toBe('PNG');
    expect(png.readUInt32BE(16)).toBeGreaterThan(300);
    // More than one flat colour would pack into.
    expect(png.length).toBeGreaterThan(5000);
  }
  const archive = await saved(page, 'All of it in one file');
  expect(archive.suggestedFilename()).toBe('strider-handover.zip');
  const names = Object.keys(unzipSync(readFileSync(await archive.path())));
  const listed = await page.locator('.handover-files small').allTextContents();
  for (const line of listed.slice(0, -1)) {
    const name = line.split(',')[0] as string;
    if (name.includes('.')) expect(names).toContain(name);
  }
  expect(names).toEqual(
    expect.arrayContaining(['strider-stage.png', 'strider-tilt.svg', 'strider-tilt.png', 'strider.urdf']),
  );
});

test('a rig with no plan says so, and the rest can still go out', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const text = JSON.stringify(STRIDER).replace('"sway":0.03', '"sway":0.004');
  await openRigs(page);
  await page
    .getByLabel('Rig file')
    .setInputFiles({ name: 'stiff.json', mimeType: 'application/json', buffer: Buffer.from(text) });
  await goTo(page, 'Hand over');
  await expect(page.getByText('There is no schedule to hand over; the rest can go out.')).toBeVisible();
  await expect(
    page.getByRole('navigation', { name: 'Stations' }).getByRole('button', { name: /^Hand over\s*: fails/ }),
  ).toBeVisible();
  await expect(page.getByRole('button', { name: /^Save as CSV: tilt/ })).toHaveCount(0);
  const model = await saved(page, /^Save as URDF/);
  expect(readFileSync(await model.path(), 'utf8')).toContain('<robot name="Strider">');
  await page.getByRole('button', { name: 'Calculation sheet: read and print' }).click();
  await expect(page.locator('.calculation-sheet .fails').first()).toHaveText('Fails');
});
