import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { runRig } from '../support/runRig';

const STRIDER = 'public/rigs/strider.json';
const folder = mkdtempSync(join(tmpdir(), 'trial-'));
afterAll(() => rmSync(folder, { recursive: true }));

describe('trial', () => {
  it('prints what the run came to, and the record as a table', () => {
    const { status, out } = runRig('trial', STRIDER, '--seconds', '3');
    expect(status).toBe(0);
    const found = JSON.parse(out);
    expect(found).toMatchObject({ rig: 'Strider', seconds: 3, isPlanned: true, hasFallen: false });
    expect(found.loop.verdict.kind).toBe('holds');
    const table = runRig('trial', STRIDER, '--seconds', '3', '--csv');
    const lines = table.out.trimEnd().split('\r\n');
    expect(lines.length).toBe(302);
    expect(lines[0]).toMatch(/^time \(s\),lean \(rad\)/);
    const peak = Math.max(...lines.slice(1).map((line) => Math.abs(Number(line.split(',')[1]))));
    expect(peak).toBeLessThanOrEqual(found.peakLean);
    expect(peak).toBeGreaterThan(0.5 * found.peakLean);
  });

  it('fails when the rig falls: gimbals locked, or shoved too hard', () => {
    expect(runRig('trial', STRIDER, '--with', 'locked').status).toBe(1);
    const shoved = runRig('trial', STRIDER, '--shove', '1:20:0.4');
    expect(shoved.status).toBe(1);
    expect(JSON.parse(shoved.out).fellAt).toBeGreaterThan(1);
  });

  it('refuses what it cannot read, naming the option and the value', () => {
    const { status, err } = runRig('trial', STRIDER, '--shove', '1:x:0.4', '--with', 'luck');
    expect(status).toBe(2);
    expect(err).toContain('"1:x:0.4"');
    expect(err).toContain('"luck"');
  });
});

describe('many', () => {
  const job = [STRIDER, '--runs', '24', '--seed', '3', '--shove-most', '3', '--seconds', '3'] as const;

  it('says the same of shards put together in any order as of the whole', () => {
    const whole = JSON.parse(runRig('many', ...job).out);
    const lines = [2, 1].map((k) => runRig('many', ...job, '--shard', `${k}/2`).out);
    const path = join(folder, 'all.jsonl');
    writeFileSync(path, lines.join(''));
    const merged = runRig('many', path, '--merge', 'yes');
    expect(merged.status).toBe(0);
    const summary = JSON.parse(merged.out);
    for (const part of ['success', 'medianLean', 'highLean', 'survival', 'influences']) {
      expect(summary[part], part).toEqual(whole[part]);
    }
    expect(whole.success.held).toBeGreaterThan(0);
    expect(whole.success.held).toBeLessThan(24);
  });

  it('refuses lines that are no runs, and runs that come twice', () => {
    const path = join(folder, 'twice.jsonl');
    const line = readFileSync(join(folder, 'all.jsonl'), 'utf8').split('\n')[0]!;
    writeFileSync(path, `${line}\n${line}\nnot a run\n`);
    const { status, err } = runRig('many', path, '--merge', 'yes');
    expect(status).toBe(2);
    expect(err).toMatch(/line 2 repeats run/);
    expect(err).toMatch(/line 3 is not a run/);
  });

  it('fails below the share that is asked for, and refuses a shard that is none', () => {
    const few = ['many', STRIDER, '--runs', '4', '--seconds', '2', '--with', 'locked'] as const;
    expect(runRig(...few, '--least', '0.9').status).toBe(1);
    const { status, err } = runRig(...few, '--shard', '5/4');
    expect(status).toBe(2);
    expect(err).toContain('"5/4"');
  });
});
