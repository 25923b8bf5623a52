import { readFileSync, writeFileSync } from 'node:fs';
import { STRIDER } from '../../src/core/rig';
import { expect, figure, goTo, openApp, openRigs, pause, test, type } from './page';

const strider = (): Record<string, unknown> => JSON.parse(JSON.stringify(STRIDER)) as Record<string, unknown>;

test('the tilt schedule comes out as CSV with units in its header', async ({ page }) => {
  await openApp(page);
  await goTo(page, 'Plan');
  const coming = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Schedule as CSV' }).click();
  const download = await coming;
  expect(download.suggestedFilename()).toBe('strider-tilt-schedule.csv');
  const lines = readFileSync(await download.path(), 'utf8')
    .trim()
    .split('\r\n');
  expect(lines[0]).toBe(
    'time (s),Front tilt (rad),Front tilt rate (rad/s),Back tilt (rad),Back tilt rate (rad/s)',
  );
  expect(lines.length).toBeGreaterThan(100);
  const rows = lines.slice(1).map((line) => line.split(',').map(Number));
  expect(rows.flat().every(Number.isFinite)).toBe(true);
  const most = Math.max(...rows.map((row) => Math.abs(row[1] as number)));
  expect(most).toBeGreaterThan(0.1);
  expect(most).toBeLessThanOrEqual(Math.PI / 4 + 1e-6);
  // The pair is geared: what one does, the other does the other way.
  for (const row of rows) expect(Math.abs((row[1] as number) + (row[3] as number))).toBeLessThan(1e-6); // measured 0
});

test('a rig goes out to a file and comes back the same', async ({ page }, info) => {
  await openApp(page);
  await pause(page);
  await type(page, 'Wheel speed', '6543');
  await openRigs(page);
  const coming = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Save to a file' }).click();
  const path = info.outputPath('out.rig.json');
  await (await coming).saveAs(path);
  const saved = JSON.parse(readFileSync(path, 'utf8')) as typeof STRIDER;
  expect(saved.format).toBe('tiltwright-rig');
  await page.getByRole('button', { name: /^Pacer/ }).click();
  await expect(page.locator('.rig-name')).toContainText('Pacer');
  await openRigs(page);
  await page.getByLabel('Rig file').setInputFiles(path);
  await expect(page.locator('.rig-name')).toContainText('Strider');
  await expect(page.getByRole('spinbutton', { name: /^Wheel speed/ }).first()).toHaveValue('6543');
});

test('a file dropped on the page is opened', async ({ page }) => {
  await openApp(page);
  await pause(page);
  const text = JSON.stringify({ ...strider(), name: 'Dropped in' });
  const data = await page.evaluateHandle((content) => {
    const transfer = new DataTransfer();
    transfer.items.add(new File([content], 'dropped.json', { type: 'application/json' }));
    return transfer;
  }, text);
  await page.dispatchEvent('.stage-frame', 'drop', { dataTransfer: data });
  await expect(page.locator('.rig-name')).toContainText('Dropped in');
});

interface BadFile {
  readonly what: string;
  readonly content: () => string | Buffer;
  readonly says: RegExp;
}

const withTorsoMass = (mass: unknown): string => {
  const rig = strider();
  ((rig.body as Record<string, unknown>).torso as Record<string, unknown>).mass = mass;
  return JSON.stringify(rig);
};

const BAD_FILES: readonly BadFile[] = [
  {
    what: 'a mass below nothing',
    content: () => withTorsoMass(-2),
    says: /body\.torso\.mass: Torso mass is −2\.00 kg; it must be a number from 0\.0100 kg to 5000 kg/,
  },
  {
    what: 'a word for a number',
    content: () => withTorsoMass('heavy'),
    says: /body\.torso\.mass: Torso mass is "heavy"; it must be a number from/,
  },
  {
    what: 'NaN, which JSON does not know',
    content: () => withTorsoMass(1).replace('"mass":1,', '"mass":NaN,'),
    says: /The file is not JSON/,
  },
  {
    what: 'a missing field',
    content: () => {
      const rig = strider();
      delete rig.power;
      return JSON.stringify(rig);
    },
    says: /power: missing/,
  },
  {
    what: 'a newer version',
    content: () => JSON.stringify({ ...strider(), version: 9999 }),
    says: /saved as version 9999 by a newer Tiltwright; this one reads versions 1 to \d+/,
  },
  {
    what: 'prototype keys',
    content: () => JSON.stringify(strider()).replace('{', '{"__proto__":{"isAdmin":true},'),
    says: /__proto__: this name is not allowed/,
  },
  {
    what: 'fifty megabytes of zeros',
    content: () => Buffer.alloc(50 * 1024 * 1024),
    says: /50\.0 MB; a rig file is at most 8\.0 MB/,
  },
  { what: 'another kind of file', content: () => 'time,roll\n0,1\n', says: /The file is not JSON/ },
];

test('bad files are refused in words and change nothing', async ({ page }, info) => {
  await openApp(page);
  await pause(page);
  const before = await figure(page, 'Momentum to give');
  await type(page, 'Wheel speed', '6100');
  await expect.poll(() => figure(page, 'Momentum to give')).not.toBe(before);
  const momentum = await figure(page, 'Momentum to give');
  const undo = page.getByRole('button', { name: 'Undo: Wheel speed' });
  for (const [index, bad] of BAD_FILES.entries()) {
    const path = info.outputPath(`bad-${index}.json`);
    writeFileSync(path, bad.content());
    await openRigs(page);
    await page.getByLabel('Rig file').setInputFiles(path);
    const notice = page.getByRole('alert').filter({ hasText: `bad-${index}.json` });
    await expect(notice, bad.what).toContainText(bad.says);
    await expect(notice, bad.what).toContainText('The rig on screen is unchanged.');
    await expect(page.getByRole('dialog')).toHaveCount(0);
    await expect(page.getByRole('spinbutton', { name: /^Wheel speed/ }).first()).toHaveValue('6100');
    expect(await figure(page, 'Momentum to give'), bad.what).toBe(momentum);
    await expect(undo).toBeEnabled();
    await notice.getByRole('button', { name: 'Put this notice away' }).click();
  }
});

test('a newer document may be looked at, and only that', async ({ page }, info) => {
  await openApp(page);
  await pause(page);
  const path = info.outputPath('newer.json');
  writeFileSync(path, JSON.stringify({ ...strider(), name: 'From the future', version: 9999 }));
  await openRigs(page);
  await page.getByLabel('Rig file').setInputFiles(path);
  await page.getByRole('button', { name: 'Look at it, unchangeable' }).click();
  await expect(page.locator('.rig-name')).toContainText('From the future');
  await expect(page.locator('.rig-name')).toContainText('read only');
  await expect(page.getByRole('button', { name: 'More Wheel speed' })).toBeDisabled();
});
