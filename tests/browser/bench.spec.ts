import AxeBuilder from '@axe-core/playwright';
import type { Page } from '@playwright/test';
import { expect, goTo, openApp, openRigs, pause, test } from './page';

const topic = (page: Page, word: string): Promise<void> =>
  page.getByRole('navigation', { name: 'At the bench' }).getByRole('button', { name: word }).click();

async function openBench(page: Page, rig?: string): Promise<void> {
  await openApp(page);
  await pause(page);
  if (rig) {
    await openRigs(page);
    await page.getByRole('button', { name: new RegExp(`^${rig}`) }).click();
    await expect(page.locator('.rig-name')).toContainText(rig);
  }
  await goTo(page, 'Bench');
  await expect(page.getByRole('button', { name: 'Open a log' })).toBeVisible();
}

const openText = (page: Page, name: string, text: string): Promise<void> =>
  page.getByLabel('Log file').setInputFiles({ name, mimeType: 'text/csv', buffer: Buffer.from(text) });

/** A spread of readings that repeats from run to run. */
const noise = (i: number): number => (((i * 7919) % 1009) / 1009 - 0.5) * 2;

/** A swing that dies down by linear and quadratic damping, decimal commas and semicolons: 100 Hz, 20 s. */
function swingLog(): string {
  let roll = 0.25;
  let rate = 0;
  const lines = ['Time (ms);Roll (deg);Batt (V)'];
  const comma = (x: number, digits: number): string => x.toFixed(digits).replace('.', ',');
  for (let i = 0; i < 2000; i++) {
    lines.push(
      `${10 * i};${comma((roll * 180) / Math.PI + 0.05 * noise(i), 3)};${comma(15.2 - 1e-4 * i, 2)}`,
    );
    for (let k = 0; k < 10; k++) {
      rate += 0.001 * (-9 * roll - 0.12 * rate - 0.25 * rate * Math.abs(rate));
      roll += 0.001 * rate;
    }
  }
  return `${lines.join('\r\n')}\r\n`;
}

/** Steps of a servo with 28 ms delay (14 readings, the 15th has moved) and 50 ms lag, no play, 500 Hz. */
function servoLog(): string {
  const levels = [0, 5, -5, 10, -10, 5, 0, -5];
  const commands: number[] = [];
  let tilt = 0;
  const lines = ['t,tilt_cmd_deg,tilt_deg'];
  for (let i = 0; i < 4000; i++) {
    const command = levels[Math.floor(i / 500)] ?? 0;
    commands.push(command);
    const felt = commands[Math.max(0, i - 15)] ?? 0;
    tilt += (felt - tilt) * (1 - Math.exp(-0.002 / 0.05));
    lines.push(`${(0.002 * i).toFixed(3)},${command},${(tilt + 0.02 * noise(i)).toFixed(4)}`);
  }
  return `${lines.join('\n')}\n`;
}

test('a log is opened, cut, identified, put into the rig and taken back', async ({ page }) => {
  await openBench(page, 'Skiff');
  await openText(page, 'servo.csv', servoLog());
  await expect(page.getByRole('heading', { name: 'servo.csv' })).toBeVisible();
  await expect(page.locator('.bench-head')).toContainText('4,000 rows');
  await expect(page.locator('.bench-head')).toContainText('Parted by commas, decimal point');
  const plot = page.getByTestId('stretcher');
  await plot.scrollIntoViewIfNeeded();
  const box = await plot.boundingBox();
  if (!box) throw new Error('the plot has no box');
  await page.mouse.move(box.x + 60, box.y + 60);
  await page.mouse.down();
  await page.mouse.move(box.x + 0.9 * box.width, box.y + 70, { steps: 4 });
  await page.mouse.up();
  await expect(page.getByRole('button', { name: 'The whole log again' })).toBeVisible();
  await page.getByRole('button', { name: 'The whole log again' }).click();

  await topic(page, 'Identify');
  await page.getByLabel('From', { exact: true }).selectOption({ label: 'Servo, steps' });
  const play = page.getByRole('spinbutton', { name: 'Servo backlash' });
  await play.click();
  await play.fill('0');
  await play.press('Enter');
  await page.getByRole('button', { name: 'Identify', exact: true }).last().click();
  const delay = page.locator('.bench-estimates li', { hasText: 'delay' }).first();
  await expect(delay).toBeVisible({ timeout: 30_000 });
  const found = Number(((await delay.locator('b').textContent()) ?? '').split(' ')[0]);
  expect(Math.abs(found - 0.028)).toBeLessThan(1e-4); // measured 0.000005
  await expect(page.getByRole('button', { name: /^Bench/ })).toContainText('fails');

  const put = page.locator('.bench-patch', { hasText: 'Delay' }).getByRole('button');
  await expect(put).toHaveText(/^Put .* into the rig$/);
  await put.click();
  await expect(put).toHaveText(/^In the rig: /);
  await expect(page.locator('.rig-name')).toContainText('not saved');
  await page.getByRole('button', { name: /^Undo: .* from a log/ }).click();
  await expect(put).toHaveText(/^Put .* into the rig$/);
  await expect(page.locator('.rig-name')).toContainText('no changes');

  // Its columns are remembered for the next log of the kind.
  await topic(page, 'Log');
  await page.getByLabel('Unit of tilt_deg').selectOption('rad');
  await page.waitForTimeout(300);
  await openText(page, 'again.csv', servoLog());
  await expect(page.getByRole('heading', { name: 'again.csv' })).toBeVisible();
  await expect(page.getByLabel('Unit of tilt_deg')).toHaveValue('rad');
});

test('the damping of a swing is told apart from a log with decimal commas', async ({ page }) => {
  await openBench(page, 'Skiff');
  await openText(page, 'swing.csv', swingLog());
  await expect(page.locator('.bench-head')).toContainText('Parted by semicolons, decimal comma');
  await topic(page, 'Identify');
  await page.getByRole('button', { name: 'Identify', exact: true }).last().click();
  const row = (name: string) =>
    page.locator('.bench-estimates li', { hasText: new RegExp(`^${name}`) }).locator('b');
  await expect(row('natural frequency')).toBeVisible({ timeout: 30_000 });
  const value = async (name: string): Promise<number> =>
    Number.parseFloat((await row(name).textContent()) ?? '');
  expect(Math.abs((await value('natural frequency')) - 3)).toBeLessThan(0.01); // measured 0.0002
  expect(Math.abs((await value('linear damping over inertia')) - 0.12)).toBeLessThan(0.015); // measured 0.0003
  expect(Math.abs((await value('quadratic damping over inertia')) - 0.25)).toBeLessThan(0.03); // measured 0.0006
  // What is no field of the rig is said, not put in.
  await expect(page.locator('p.bench-patch', { hasText: 'Body inertia' })).toContainText(
    'works its inertia out',
  );

  await page
    .locator('.bench-patch', { hasText: /linear roll damping/i })
    .getByRole('button')
    .first()
    .click();
  await topic(page, 'Retune');
  await page.getByRole('button', { name: 'Retune' }).last().click();
  await expect(page.getByRole('table').first()).toContainText('before', { timeout: 30_000 });
  await expect(page.locator('.bench-compare')).toHaveCount(3);
});

test('a malformed log leaves everything as it was', async ({ page }) => {
  await openBench(page);
  await openText(page, 'good.csv', servoLog());
  await expect(page.getByRole('heading', { name: 'good.csv' })).toBeVisible();
  for (const [name, text, says] of [
    ['empty.csv', '', /empty/],
    ['header.csv', 't,roll\n', /no .*row|rows? of numbers/i],
    ['picture.csv', '\u0089PNG\r\n\u001a\n\u0000\u0000\u0000\rIHDR', /./],
  ] as const) {
    await openText(page, name, text);
    const notice = page.getByRole('alert').filter({ hasText: `${name} was not opened.` });
    await expect(notice).toBeVisible();
    await expect(notice).toContainText(says);
    await expect(page.getByRole('heading', { name: 'good.csv' })).toBeVisible();
  }
  await expect(page.getByTestId('stretcher')).toBeVisible();
});

test('a wheel is balanced in grams at an angle, and over its holes', async ({ page }) => {
  await openBench(page);
  await topic(page, 'Balance');
  const type = async (label: string, nth: number, text: string): Promise<void> => {
    const input = page.getByRole('spinbutton', { name: label, exact: true }).nth(nth);
    await input.click();
    await input.fill(text);
    await input.press('Enter');
  };
  // Bare 6 at 60 degrees, with 2 g at 0 degrees 8 at 120: the correction follows from the triangle of the two.
  await type('Amplitude', 0, '6');
  await type('Angle', 0, '60 deg');
  await type('Trial weight', 0, '2 g');
  await type('Amplitude', 1, '8');
  await type('Angle', 1, '120 deg');
  const bare = { re: 6 * Math.cos(Math.PI / 3), im: 6 * Math.sin(Math.PI / 3) };
  const loaded = { re: 8 * Math.cos((2 * Math.PI) / 3), im: 8 * Math.sin((2 * Math.PI) / 3) };
  const effect = { re: loaded.re - bare.re, im: loaded.im - bare.im };
  const grams = (2 * 6) / Math.sqrt(effect.re ** 2 + effect.im ** 2);
  const degrees = ((Math.PI + Math.PI / 3 - Math.atan2(effect.im, effect.re)) * 180) / Math.PI;
  const answer = page.locator('.balance-figure b');
  const shown = ((await answer.textContent()) ?? '').match(/^([\d.]+) g at ([\d.]+)°$/);
  expect(Math.abs(Number(shown?.[1]) - grams)).toBeLessThan(0.005); // measured 0.0041, the rounding shown
  expect(Math.abs(Number(shown?.[2]) - ((degrees + 360) % 360))).toBeLessThan(0.05); // measured 0.002
  await expect(page.getByRole('img', { name: /Weight to add: .* g at/ })).toBeVisible();
  await page.getByRole('switch', { name: /Split over holes/ }).click();
  await expect(page.getByRole('columnheader', { name: 'put in' })).toBeVisible();
});

/** Plugs the simulator in and waits for lines. */
async function plugIn(page: Page, format: string, clock: string): Promise<void> {
  await topic(page, 'Live link');
  await page.getByRole('button', { name: format }).click();
  await page.getByRole('button', { name: clock }).or(page.getByText(clock)).first().click();
  await page.getByRole('button', { name: 'Connect', exact: true }).click();
  await expect(page.locator('.link-counts')).toBeVisible();
}

const countOf = async (page: Page, word: string): Promise<number> =>
  Number(
    (
      (await page.locator('.link-counts > div', { hasText: word }).locator('dd').textContent()) ?? ''
    ).replaceAll(',', ''),
  );

/** 60,000 lines of a device that samples at 1 kHz, its clock at ten times real time: 6 s of the suite for 60 s of it. */
test('a minute at 1 kHz is recorded without a lost line', async ({ page }, info) => {
  test.skip(info.project.name !== 'tablet', 'the line does not depend on the size of the screen');
  await openBench(page, 'Skiff');
  await plugIn(page, 'CSV lines', 'ten times');
  await expect.poll(() => countOf(page, 'rows'), { timeout: 45_000 }).toBeGreaterThanOrEqual(60_000);
  await page.getByRole('button', { name: 'Disconnect' }).click();
  expect(await countOf(page, 'lost on the line')).toBe(0);
  expect(await countOf(page, 'unreadable')).toBe(0);
  const rows = await countOf(page, 'rows');
  const coming = page.waitForEvent('download');
  await page.getByRole('button', { name: 'Save as CSV' }).click();
  const stream = await (await coming).createReadStream();
  let text = '';
  for await (const piece of stream) text += String(piece);
  const lines = text.trim().split('\r\n');
  expect(lines[0]).toBe('n,t,roll_rad,roll_rate_rad/s,tilt_rad,tilt_command_rad');
  expect(lines.length).toBe(rows + 1);
  const first = Number(lines[1]?.split(',')[0]);
  lines.slice(1).forEach((line, i) => {
    if (Number(line.split(',')[0]) !== first + i) throw new Error(`row ${i} is out of order: ${line}`);
  });
});

test('a pulled cable loses nothing of the recording, and it goes on after', async ({ page }) => {
  await openBench(page, 'Skiff');
  await plugIn(page, 'JSON lines', 'real time');
  await expect.poll(() => countOf(page, 'rows')).toBeGreaterThan(1000);
  await page.getByRole('button', { name: 'Pull the cable' }).click();
  await expect(page.getByRole('heading', { name: 'Recorded; the line is gone' })).toBeVisible();
  await expect(page.getByRole('button', { name: /Release/ })).toBeHidden();
  const before = await countOf(page, 'rows');
  expect(await countOf(page, 'lost on the line')).toBe(0);
  await page.waitForTimeout(300);
  expect(await countOf(page, 'rows')).toBe(before);
  await page.getByRole('button', { name: 'Connect again' }).click();
  await expect.poll(() => countOf(page, 'rows')).toBeGreaterThan(before + 500);
  // What the device measured meanwhile never came: it is counted, not hidden.
  expect(await countOf(page, 'lost on the line')).toBeGreaterThan(200);
  expect(await countOf(page, 'breaks')).toBe(1);
  await page.getByRole('button', { name: 'Open as the log' }).click();
  await topic(page, 'Log');
  await expect(page.getByRole('heading', { name: /skiff-recording\.csv/ })).toBeVisible();
  await expect(page.getByLabel('Unit of roll_rad')).toHaveValue('rad');
});

test('gains go out line by line when a button is pressed, and the stop line goes at once', async ({
  page,
}) => {
  await openBench(page, 'Skiff');
  await plugIn(page, 'CSV lines', 'real time');
  await expect.poll(() => countOf(page, 'rows')).toBeGreaterThan(100);
  await expect(page.getByText(/lines acknowledged|are acknowledged/)).toBeHidden();
  await page.getByRole('button', { name: 'Work out the gains to send' }).click();
  const send = page.getByRole('button', { name: /^Send these \d gains: a running loop moves/ });
  await expect(send).toBeVisible({ timeout: 30_000 });
  await send.click();
  await expect(page.getByText(/All 5 lines are acknowledged/)).toBeVisible();
  await page.getByRole('button', { name: /^Send the schedule, \d+ points: 2 gimbals start/ }).click();
  await expect(page.getByText(/of \d+ lines acknowledged/)).toBeVisible();
  await page.getByRole('button', { name: /^Release/ }).click();
  await expect(page.getByText(/“STOP” was sent/)).toBeVisible();
  await expect(page.getByText(/Dropped after \d+ of \d+ lines/)).toBeVisible();
});

test('a browser without a serial port says so', async ({ page }) => {
  await page.addInitScript(() => {
    Reflect.deleteProperty(Navigator.prototype, 'serial');
  });
  await openBench(page);
  await topic(page, 'Live link');
  await page.getByRole('button', { name: 'serial port' }).click();
  await expect(page.getByText(/This browser has no serial port/)).toBeVisible();
  await expect(page.getByRole('button', { name: 'Connect', exact: true })).toBeDisabled();
});

for (const scheme of ['light', 'dark'] as const) {
  test(`nothing bars the way at the bench in ${scheme}`, async ({ page }) => {
    await page.emulateMedia({ colorScheme: scheme });
    await openBench(page, 'Skiff');
    await openText(page, 'servo.csv', servoLog());
    await expect(page.getByTestId('stretcher')).toBeVisible();
    for (const word of ['Log', 'Identify', 'Balance', 'Live link', 'Retune']) {
      await topic(page, word);
      if (word === 'Live link') {
        await page.getByRole('button', { name: 'Connect', exact: true }).click();
        await expect(page.locator('.link-counts')).toBeVisible();
      }
      const found = await new AxeBuilder({ page }).include('.sheet').analyze();
      const serious = found.violations
        .filter(({ impact }) => impact === 'serious' || impact === 'critical')
        .map(({ id, nodes }) => `${word}: ${id}: ${nodes.map(({ target }) => target.join(' ')).join(' | ')}`);
      expect(serious).toEqual([]);
      const misfits = await page.evaluate(() =>
        [...document.querySelectorAll('.sheet *')]
          .map((element) => ({ element, box: element.getBoundingClientRect() }))
          .filter(({ element, box }) => {
            const isTouched = element.matches('button, select, .number-box, .toggle, summary');
            const isSmall = isTouched && box.width > 0 && (box.height < 43.5 || box.width < 43.5);
            return isSmall || (box.width > 1 && box.right > innerWidth + 1);
          })
          .map(({ element, box }) => `${element.tagName}.${element.className}: ${box.width} x ${box.height}`),
      );
      expect(misfits, word).toEqual([]);
    }
  });
}
