import { median } from '../statistics';
import type { RunData, Stretch } from './rollPrediction';

/** A stretch was knocked when its misfit lies this many standard deviations of a pure-noise misfit above the usual. */
const KNOCKED = 5;

/** Readings in all stretches together. */
export const countReadings = (run: RunData): number => run.stretches.reduce((n, s) => n + s.length, 0);

/** The run without the stretches whose residuals (all readings long) show a knock. */
export function dropKnocked(run: RunData, residuals: Float64Array): RunData {
  const spreads = run.stretches.map(({ from, length }) => {
    let s = 0;
    for (let i = from; i < from + length; i++) s += residuals[i] * residuals[i];
    return Math.sqrt(s / length);
  });
  const usual = median(spreads);
  const limit = usual * (1 + KNOCKED / Math.sqrt(2 * run.stretches[0].length));
  const byMisfit = spreads.map((_, k) => k).sort((a, b) => spreads[b] - spreads[a]);
  // At most a third: beyond that it is the model that fails, not the run.
  const knocked = new Set(
    byMisfit.slice(0, Math.floor(spreads.length / 3)).filter((k) => spreads[k] > limit),
  );
  return { ...run, stretches: run.stretches.filter((_, k) => !knocked.has(k)) };
}

/** Joins neighbouring stretches, at most so many to one. */
export function joinStretches(run: RunData, most: number): Stretch[] {
  const joined: Stretch[] = [];
  let count = 0;
  for (const s of run.stretches) {
    const last = joined[joined.length - 1];
    if (last && last.from + last.length === s.from && count < most) {
      joined[joined.length - 1] = { from: last.from, length: last.length + s.length };
      count++;
    } else {
      joined.push(s);
      count = 1;
    }
  }
  return joined;
}
