import { spawnSync } from 'node:child_process';
import { join } from 'node:path';

const root = join(import.meta.dirname, '../..');

/** Runs a command of the headless program as a user would. */
export function runRig(...args: readonly string[]): {
  readonly status: number;
  readonly out: string;
  readonly err: string;
} {
  const { status, stdout, stderr } = spawnSync(
    process.execPath,
    ['--import', 'tsx', join(root, 'src/headless/main.ts'), ...args],
    { cwd: root, encoding: 'utf8', maxBuffer: 256 * 1024 * 1024 },
  );
  return { status: status ?? -1, out: stdout, err: stderr };
}
