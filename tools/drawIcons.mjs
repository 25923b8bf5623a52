/** Draws public/icons/*.png from public/icons/icon.svg with the browser the tests use. Usage: node tools/drawIcons.mjs */
import { readFileSync, writeFileSync } from 'node:fs';
import { chromium } from '@playwright/test';
import { ensureChromium } from './findChromium.mjs';

const folder = new URL('../public/icons/', import.meta.url);
const drawing = readFileSync(new URL('icon.svg', folder), 'utf8');

/** A maskable icon may lose all but the middle four fifths, so its ground runs to the edge and its drawing shrinks. */
const maskable = drawing
  .replace('<rect width="64" height="64" rx="12"', '<rect x="-32" y="-32" width="128" height="128"')
  .replace('viewBox="0 0 64 64"', 'viewBox="-8 -8 80 80"');

const wanted = [
  { file: 'icon-192.png', size: 192, svg: drawing },
  { file: 'icon-512.png', size: 512, svg: drawing },
  { file: 'icon-maskable-512.png', size: 512, svg: maskable },
];

const browser = await chromium.launch({ executablePath: await ensureChromium() });
const page = await browser.newPage();
for (const { file, size, svg } of wanted) {
  await page.setViewportSize({ width: size, height: size });
  await page.setContent(
    `<style>body{margin:0}svg{display:block;width:${size}px;height:${size}px}</style>${svg}`,
  );
  writeFileSync(new URL(file, folder), await page.screenshot({ omitBackground: true }));
  console.log(`${file}: ${size} x ${size}`);
}
await browser.close();
