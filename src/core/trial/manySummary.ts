/** What many runs say together. Rows are put in the order of their runs first, so that who ran them says nothing. */
import type { RunRow } from './randomised';
import { TOLERANCE_NAMES, type ToleranceName } from './tolerances';

/** A share of successes with its 95 % interval. */
export interface Rate {
  readonly runs: number;
  readonly held: number;
  readonly rate: number;
  readonly low: number;
  readonly high: number;
}

export interface SurvivalPoint extends Rate {
  /** N*s, size of the shove, from and to. */
  readonly from: number;
  readonly to: number;
}

/** A tolerance, or the shove, and the share of the spread of the largest lean that it explains by itself. */
export interface Influence {
  readonly name: ToleranceName | 'knock';
  readonly share: number;
}

export interface ManySummary {
  readonly success: Rate;
  /** rad, of the largest lean of each run, a fall counting as the lean at which it was lost. */
  readonly medianLean: number;
  readonly highLean: number;
  readonly survival: readonly SurvivalPoint[];
  /** Most influential first. */
  readonly influences: readonly Influence[];
}

/** Standard normal quantile of 97.5 %. */
const Z = 1.959963984540054;

/**
 * Share of successes with its 95 % interval. Source: Wilson, Probable inference, J. Am. Stat. Assoc. 22 (1927).
 *
 * @param held,runs  whole numbers; no runs give the whole range
 */
export function wilsonRate(held: number, runs: number): Rate {
  if (runs === 0) return { runs, held, rate: Number.NaN, low: 0, high: 1 };
  const rate = held / runs;
  const z2 = Z * Z;
  const middle = (rate + z2 / (2 * runs)) / (1 + z2 / runs);
  const half = (Z * Math.sqrt((rate * (1 - rate)) / runs + z2 / (4 * runs * runs))) / (1 + z2 / runs);
  return {
    runs,
    held,
    rate,
    low: held === 0 ? 0 : Math.max(0, middle - half),
    high: held === runs ? 1 : Math.min(1, middle + half),
  };
}

/**
 * Share of the variance of y that x explains by itself, whatever the shape of the dependence: the correlation ratio
 * over classes of equal count, less what chance alone gives, never below 0.
 *
 * O(n log n). Sources: Pearson's correlation ratio, its correction by Kelley, Proc. Natl. Acad. Sci. 21 (1935);
 * as a first-order sensitivity from given data: Plischke, Borgonovo and Smith, Eur. J. Oper. Res. 226 (2013).
 */
export function explainedShare(x: readonly number[], y: readonly number[]): number {
  const n = x.length;
  const classes = Math.min(20, Math.floor(n / 25));
  if (classes < 2) return 0;
  const order = Array.from({ length: n }, (_, i) => i).sort(
    (a, b) => (x[a] as number) - (x[b] as number) || a - b,
  );
  const mean = y.reduce((sum, value) => sum + value, 0) / n;
  let total = 0;
  for (const value of y) total += (value - mean) ** 2;
  if (!(total > 0) || x[order[0] as number] === x[order[n - 1] as number]) return 0;
  let between = 0;
  for (let c = 0; c < classes; c++) {
    const from = Math.round((c * n) / classes);
    const to = Math.round(((c + 1) * n) / classes);
    let sum = 0;
    for (let i = from; i < to; i++) sum += y[order[i] as number] as number;
    between += (to - from) * (sum / (to - from) - mean) ** 2;
  }
  const ratio = between / total;
  return Math.max(0, 1 - ((1 - ratio) * (n - 1)) / (n - classes));
}

const MOST_POINTS = 12;
const LEAST_RUNS_IN_POINT = 20;

/** Success against size of shove, in steps of equal width from nothing to the largest drawn; none without shoves. */
function survivalOf(rows: readonly RunRow[]): readonly SurvivalPoint[] {
  const most = rows.reduce((largest, { shove }) => Math.max(largest, Math.abs(shove)), 0);
  if (!(most > 0)) return [];
  const points = Math.max(2, Math.min(MOST_POINTS, Math.floor(rows.length / LEAST_RUNS_IN_POINT)));
  const held = new Float64Array(points);
  const runs = new Float64Array(points);
  for (const { shove, figures } of rows) {
    const at = Math.min(points - 1, Math.floor((Math.abs(shove) / most) * points));
    runs[at] += 1;
    if (!figures.hasFallen) held[at] += 1;
  }
  return Array.from({ length: points }, (_, i) => ({
    from: (most * i) / points,
    to: (most * (i + 1)) / points,
    ...wilsonRate(held[i] as number, runs[i] as number),
  }));
}

/** Sums up rows, in whatever order they come. O(n log n). */
export function summariseMany(given: readonly RunRow[]): ManySummary {
  const rows = [...given].sort((a, b) => a.run - b.run);
  const held = rows.filter(({ figures }) => !figures.hasFallen).length;
  const worst = Math.max(0, ...rows.filter((r) => !r.figures.hasFallen).map((r) => r.figures.peakLean));
  // A body that has gone over leans more than any that held, by no telling how much.
  const lean = rows.map(({ figures }) =>
    figures.hasFallen ? Math.max(worst, Math.min(figures.peakLean, FALLEN_LEAN)) : figures.peakLean,
  );
  const sorted = [...lean].sort((a, b) => a - b);
  const quantile = (share: number): number =>
    sorted[Math.min(sorted.length - 1, Math.floor(share * sorted.length))] ?? Number.NaN;
  const influences: Influence[] = TOLERANCE_NAMES.map((name) => ({
    name,
    share: explainedShare(
      rows.map((row) => row.drawn[name]),
      lean,
    ),
  }));
  influences.push({
    name: 'knock',
    share: explainedShare(
      rows.map((row) => row.shove),
      lean,
    ),
  });
  return {
    success: wilsonRate(held, rows.length),
    medianLean: quantile(0.5),
    highLean: quantile(0.95),
    survival: survivalOf(rows),
    influences: influences.sort((a, b) => b.share - a.share),
  };
}

/** rad, lean at which feet are counted as lost. */
const FALLEN_LEAN = 0.3;
