import AxeBuilder from '@axe-core/playwright';
import { expect, goTo, openApp, openRigs, pause, test } from './page';

const STATIONS = ['Assemble', 'Weigh', 'Spin up', 'Plan', 'Trial', 'Bench', 'Hand over'] as const;

for (const scheme of ['light', 'dark'] as const) {
  test(`nothing bars the way on any station in ${scheme}`, async ({ page }) => {
    await page.emulateMedia({ colorScheme: scheme });
    await openApp(page);
    await pause(page);
    for (const station of STATIONS) {
      await goTo(page, station);
      await page.waitForTimeout(200);
      const found = await new AxeBuilder({ page }).analyze();
      const serious = found.violations
        .filter(({ impact }) => impact === 'serious' || impact === 'critical')
        .map(
          ({ id, nodes }) => `${station}: ${id}: ${nodes.map(({ target }) => target.join(' ')).join(' | ')}`,
        );
      expect(serious).toEqual([]);
    }
    await openRigs(page);
    const inDialog = await new AxeBuilder({ page }).include('dialog').analyze();
    expect(inDialog.violations.filter(({ impact }) => impact === 'serious' || impact === 'critical')).toEqual(
      [],
    );
  });
}

test('every control is large enough for a finger', async ({ page }) => {
  await openApp(page);
  await pause(page);
  for (const station of STATIONS) {
    await goTo(page, station);
    const small = await page.evaluate(() =>
      [...document.querySelectorAll('button, select, .number-box, .toggle')]
        .map((element) => ({
          name: element.textContent?.trim() || element.getAttribute('aria-label'),
          box: element.getBoundingClientRect(),
        }))
        .filter(({ box }) => box.width > 0 && (box.height < 43.5 || box.width < 43.5))
        .map(({ name, box }) => `${name}: ${box.width.toFixed(0)} x ${box.height.toFixed(0)}`),
    );
    expect(small, station).toEqual([]);
  }
});

test('nothing runs out of the page sideways', async ({ page }) => {
  await openApp(page);
  await pause(page);
  for (const station of STATIONS) {
    await goTo(page, station);
    const wide = await page.evaluate(() =>
      [...document.querySelectorAll('.sheet *, .ledger *, .transport *')]
        .filter((element) => {
          const box = element.getBoundingClientRect();
          return box.width > 1 && box.right > innerWidth + 1;
        })
        .map((element) => `${element.tagName}.${element.className}`),
    );
    expect(wide, station).toEqual([]);
  }
});
