import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { makeHandover, PROGRAM, sha256 } from '../../core/handover';
import type { Command } from '../command';

export const handoverCommand: Command = {
  name: 'handover',
  purpose:
    'writes everything that is handed over: schedules, gains, C header, robot and 3D models, plots, sheet',
  example: 'handover public/rigs/strider.json --out handed-over --date 2026-03-01',
  options: [
    { name: 'out', meaning: 'folder to write into; made when it is not there' },
    {
      name: 'date',
      meaning: 'date that stands in the files, as year-month-day',
      fallback: new Date().toISOString().slice(0, 10),
    },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const out = options.text('out');
    const date = options.text('date');
    if (!/^\d{4}-\d{2}-\d{2}$/.test(date))
      return { kind: 'refused', sentences: [`--date: "${date}" is not a date such as 2026-03-01.`] };
    const outcome = makeHandover(rig, { program: PROGRAM, date }, () => performance.now() / 1000);
    if (outcome.kind === 'refused')
      return { kind: 'refused', sentences: outcome.refusals.map(({ sentence }) => sentence) };
    const { files, noPlan } = outcome.handover;
    try {
      mkdirSync(out, { recursive: true });
      for (const { name, bytes } of files) writeFileSync(join(out, name), bytes);
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error);
      return { kind: 'refused', sentences: [`--out: ${out} cannot be written: ${reason}.`] };
    }
    const output = {
      rig: rig.name,
      ...(noPlan === undefined ? {} : { noPlan }),
      files: files.map(({ name, purpose, bytes }) => ({
        name,
        purpose,
        size: bytes.length,
        sha256: sha256(bytes),
      })),
    };
    return { kind: noPlan === undefined ? 'done' : 'failing', output };
  },
};
