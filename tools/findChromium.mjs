/** Finds a Chromium to test with, installs one by the means at hand when there is none, or says what to install. */
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { delimiter, join } from 'node:path';

const VARIABLES = ['CHROMIUM_PATH', 'CHROME_PATH', 'CHROME_BIN'];

const FIXED_PLACES = {
  linux: [
    '/usr/bin/chromium',
    '/usr/bin/chromium-browser',
    '/usr/bin/google-chrome',
    '/usr/bin/google-chrome-stable',
    '/snap/bin/chromium',
  ],
  darwin: [
    '/Applications/Chromium.app/Contents/MacOS/Chromium',
    '/Applications/Google Chrome.app/Contents/MacOS/Google Chrome',
    '/Applications/Microsoft Edge.app/Contents/MacOS/Microsoft Edge',
  ],
  win32: [
    'C:\\Program Files\\Google\\Chrome\\Application\\chrome.exe',
    'C:\\Program Files (x86)\\Google\\Chrome\\Application\\chrome.exe',
    'C:\\Program Files (x86)\\Microsoft\\Edge\\Application\\msedge.exe',
    'C:\\Program Files\\Microsoft\\Edge\\Application\\msedge.exe',
  ],
};

const NAMES_ON_PATH = ['chromium', 'chromium-browser', 'google-chrome', 'google-chrome-stable', 'chrome'];

/** On Windows asking a browser its version opens a window, so there it is enough that the file is there. */
function isBrowser(path) {
  if (!path || !existsSync(path)) return false;
  if (process.platform === 'win32') return true;
  const answer = spawnSync(path, ['--version'], { encoding: 'utf8', timeout: 20_000 });
  return answer.status === 0 && /chrom|edge/i.test(answer.stdout);
}

async function ownBrowserOfPlaywright() {
  const { chromium } = await import('@playwright/test');
  return chromium.executablePath();
}

const candidatesOnPath = () =>
  (process.env.PATH ?? '')
    .split(delimiter)
    .flatMap((folder) => NAMES_ON_PATH.map((name) => join(folder, name)));

async function look() {
  const candidates = [
    await ownBrowserOfPlaywright(),
    ...(FIXED_PLACES[process.platform] ?? []),
    ...candidatesOnPath(),
  ];
  return candidates.find(isBrowser);
}

const canUseApt = () =>
  process.platform === 'linux' && process.getuid?.() === 0 && existsSync('/usr/bin/apt-get');

const ADVICE =
  'No Chromium was found. Install one (Debian and Ubuntu: "apt-get install chromium"; macOS and Windows: Chromium, Chrome or Edge from its maker; anywhere: "npx playwright install chromium"), or set CHROMIUM_PATH to the one you have.';

/** Path of a browser that runs; throws an error that says what to do when there is none. */
export async function ensureChromium() {
  for (const variable of VARIABLES) {
    const path = process.env[variable];
    if (!path) continue;
    if (isBrowser(path)) return path;
    throw new Error(`${variable}=${path} does not run as a browser: fix or unset it.`);
  }
  const found = await look();
  if (found) return found;
  if (process.env.NO_BROWSER_INSTALL) throw new Error(ADVICE);

  console.log('No Chromium here; installing one.');
  spawnSync(process.execPath, ['node_modules/@playwright/test/cli.js', 'install', 'chromium'], {
    stdio: 'inherit',
  });
  if (canUseApt() && !(await look())) {
    spawnSync('apt-get', ['update'], { stdio: 'inherit' });
    spawnSync('apt-get', ['install', '-y', '--no-install-recommends', 'chromium'], { stdio: 'inherit' });
  }
  const installed = await look();
  if (installed) return installed;
  throw new Error(ADVICE);
}
