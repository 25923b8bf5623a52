import { createHash } from 'node:crypto';
import { mkdtempSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { readRigText } from '../../src/core/rig';
import { runRig } from '../support/runRig';

const folder = mkdtempSync(join(tmpdir(), 'handover-'));

interface Answer {
  readonly noPlan?: string;
  readonly files: readonly { readonly name: string; readonly size: number; readonly sha256: string }[];
}

const hashOf = (path: string): string => createHash('sha256').update(readFileSync(path)).digest('hex');

describe('the handover command', () => {
  it('writes everything, and lists each file with its size and hash', () => {
    const out = join(folder, 'strider');
    const { status, out: printed } = runRig(
      'handover',
      'public/rigs/strider.json',
      '--out',
      out,
      '--date',
      '2026-03-01',
    );
    expect(status).toBe(0);
    const { files, noPlan } = JSON.parse(printed) as Answer;
    expect(noPlan).toBeUndefined();
    expect(readdirSync(out).sort()).toEqual(files.map(({ name }) => name).sort());
    for (const { name, size, sha256 } of files) {
      expect(readFileSync(join(out, name)).length, name).toBe(size);
      expect(hashOf(join(out, name)), name).toBe(sha256);
    }
    for (const ending of ['.csv', '.json', '.h', '.urdf', '.glb', '.stl', '.svg', '.html', '.txt'])
      expect(
        files.some(({ name }) => name.endsWith(ending)),
        ending,
      ).toBe(true);
    const rigFile = join(out, 'strider.rig.json');
    expect(readFileSync(join(out, 'strider-calculation-sheet.txt'), 'utf8')).toContain(hashOf(rigFile));
    expect(readRigText(readFileSync(rigFile, 'utf8')).kind).toBe('read');
  });

  it('ends with 1 for a rig with no plan, and writes what can be written', () => {
    const text = readFileSync('public/rigs/strider.json', 'utf8').replace('"sway": 0.03', '"sway": 0.004');
    const rig = join(folder, 'stiff.json');
    writeFileSync(rig, text);
    const out = join(folder, 'stiff');
    const { status, out: printed } = runRig('handover', rig, '--out', out);
    expect(status).toBe(1);
    expect((JSON.parse(printed) as Answer).noPlan).toMatch(/falls short by/);
    expect(readdirSync(out)).toContain('strider.urdf');
    expect(readdirSync(out)).not.toContain('strider-tilt-schedule.csv');
  });

  it('ends with 2 and a sentence for a bad date or a folder that cannot be', () => {
    const rig = 'public/rigs/pacer.json';
    expect(runRig('handover', rig).err).toMatch(/--out: must be given/);
    const dated = runRig('handover', rig, '--out', join(folder, 'x'), '--date', 'today');
    expect([dated.status, dated.err]).toEqual([2, expect.stringMatching(/"today" is not a date/)]);
    const blocked = runRig('handover', rig, '--out', join(folder, 'stiff.json', 'in'));
    expect([blocked.status, blocked.err]).toEqual([2, expect.stringMatching(/cannot be written/)]);
  });
});
