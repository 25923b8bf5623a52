import { readFileSync } from 'node:fs';
import { balanceWheel, readBalanceSheet } from '../../core/bench';
import type { Command } from '../command';

export const balanceCommand: Command = {
  name: 'balance',
  purpose: 'masses and angles that balance a wheel, split over its holes, with its grade before and after',
  example: 'balance readings.json --csv',
  options: [],
  reads: 'file',
  run: ({ path }) => {
    let text: string;
    try {
      text = readFileSync(path, 'utf8');
    } catch {
      return { kind: 'refused', sentences: [`${path}: there is no such file, or it cannot be read.`] };
    }
    const sheet = readBalanceSheet(text);
    if (!('method' in sheet)) return { kind: 'refused', sentences: sheet };
    const outcome = balanceWheel(sheet);
    if (outcome.kind === 'refused') return outcome;
    const holes = sheet.holes?.angles ?? [];
    const rows = ['plane,where,mass_g,angle_deg'];
    outcome.planes.forEach((plane, p) => {
      rows.push([p + 1, 'correction', plane.mass_g, plane.angle].join(','));
      if (plane.holes?.kind !== 'split') return;
      plane.holes.masses.forEach((mass, k) => {
        if (mass > 0) rows.push([p + 1, `hole ${k + 1}`, mass * 1e3, holes[k]].join(','));
      });
    });
    const refusals = outcome.planes.flatMap((plane) =>
      plane.holes?.kind === 'refused' ? [plane.holes.sentence] : [],
    );
    return {
      kind: refusals.length > 0 ? 'failing' : 'done',
      output: outcome,
      csv: `${rows.join('\r\n')}\r\n`,
    };
  },
};
