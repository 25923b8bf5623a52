import { readdirSync, readFileSync } from 'node:fs';
import { gzipSync } from 'node:zlib';
import { expect, test } from '@playwright/test';

const DIST = new URL('../../dist/', import.meta.url);
const read = (file: string): string => readFileSync(new URL(file, DIST), 'utf8');

test('everything that was built is kept for use without a network, worker chunks too', () => {
  const worker = read('sw.js');
  const files = readdirSync(DIST, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => `${entry.parentPath}/${entry.name}`.slice(DIST.pathname.length).replace(/^\/+/, ''))
    .filter((file) => !/^(sw|workbox-\w+)\.js$/.test(file));
  expect(files.some((file) => /evaluationWorker/.test(file))).toBe(true);
  expect(files.filter((file) => !worker.includes(file))).toEqual([]);
});

test('what a first visit must load before it shows anything stays small', () => {
  // The entry and all it imports outright; what is loaded later (the stage) is not in it.
  const seen = new Set<string>();
  const follow = (file: string): void => {
    if (seen.has(file)) return;
    seen.add(file);
    for (const [, next] of read(file).matchAll(/(?:from|import)\s*"\.\/([^"]+\.js)"/g))
      follow(`assets/${next}`);
  };
  for (const [, file] of read('index.html').matchAll(/(?:src|href)="\/(assets\/[^"]+\.js)"/g))
    follow(file as string);
  const size = [...seen].reduce((sum, file) => sum + gzipSync(read(file), { level: 9 }).length, 0);
  expect(seen.size).toBeGreaterThan(0);
  expect(size).toBeGreaterThan(50_000);
  expect(size).toBeLessThan(450_000); // measured 133 kB
});

test('the server sends a policy that lets nothing in from elsewhere', async ({ request }) => {
  const headers = (await request.get('/')).headers();
  const policy = headers['content-security-policy'] ?? '';
  expect(policy).toContain("default-src 'self'");
  expect(policy).not.toContain('unsafe');
  expect(headers['cross-origin-opener-policy']).toBe('same-origin');
  expect(headers['x-content-type-options']).toBe('nosniff');
});
