import { defineConfig } from '@playwright/test';

const PORT = 4187;

const launchOptions = {
  executablePath: process.env.CHROMIUM_PATH ?? '/usr/bin/chromium',
  args: [
    '--enable-unsafe-swiftshader',
    '--disable-quic',
    '--no-first-run',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
    '--disable-dev-shm-usage',
  ],
};

const touch = { hasTouch: true, isMobile: true, deviceScaleFactor: 1, launchOptions };

export default defineConfig({
  testDir: 'tests/browser',
  timeout: 60_000,
  expect: { timeout: 15_000 },
  workers: 2,
  // Software drawing on a busy machine can lose a race; what passes only on a second try is reported as flaky.
  retries: process.env.CI ? 2 : 0,
  forbidOnly: Boolean(process.env.CI),
  reporter: [['list']],
  outputDir: 'test-results',
  use: { baseURL: `http://127.0.0.1:${PORT}`, trace: 'off' },
  projects: [
    { name: 'tablet', use: { ...touch, viewport: { width: 1180, height: 820 } } },
    // The same code runs at both sizes; a phone is walked through once and looked at for access on every station.
    {
      name: 'phone',
      testMatch: /(access|visit|stage)\.spec\.ts/,
      use: { ...touch, viewport: { width: 390, height: 844 } },
    },
  ],
  webServer: {
    command: `node tools/serve.mjs ${PORT}`,
    url: `http://127.0.0.1:${PORT}/`,
    reuseExistingServer: !process.env.CI,
    timeout: 30_000,
  },
});
