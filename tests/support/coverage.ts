import { expect } from 'vitest';

interface Interval {
  readonly name: string;
  readonly value: number;
  readonly low: number;
  readonly high: number;
}

type Outcome =
  | { readonly kind: 'identified'; readonly estimates: readonly Interval[] }
  | { readonly kind: 'refused'; readonly sentence: string };

/**
 * Runs an identification on seeds 1 to `seeds` and requires every true value to lie in its 95 % interval in at least
 * 90 of 100. With 300 seeds a true 95 % interval fails this once in twenty thousand times; with 100, one in 35.
 * Prints seeds, share inside and typical width, so that intervals too wide to mean anything are seen too.
 */
export function expectCoverage(
  label: string,
  seeds: number,
  run: (seed: number) => Outcome,
  truths: Readonly<Record<string, number>>,
  largestRelativeWidth: Readonly<Record<string, number>> = {},
): void {
  const inside: Record<string, number> = {};
  const widths: Record<string, number[]> = {};
  let refusals = 0;
  for (let seed = 1; seed <= seeds; seed++) {
    const outcome = run(seed);
    if (outcome.kind === 'refused') {
      refusals++;
      if (refusals === 1) console.log(`${label}, seed ${seed}: ${outcome.sentence}`);
      continue;
    }
    for (const [name, truth] of Object.entries(truths)) {
      const e = outcome.estimates.find((x) => x.name === name);
      if (!e)
        throw new Error(`${label}: no estimate "${name}" among ${outcome.estimates.map((x) => x.name)}`);
      if (e.low <= truth && truth <= e.high) inside[name] = (inside[name] ?? 0) + 1;
      widths[name] = [...(widths[name] ?? []), (e.high - e.low) / 2];
    }
  }
  const rows = Object.entries(truths).map(([name, truth]) => {
    const w = (widths[name] ?? []).sort((a, b) => a - b);
    return `${name} ${inside[name] ?? 0}/${seeds}, half width ${(w[w.length >> 1] ?? Number.NaN).toPrecision(3)} of ${truth.toPrecision(4)}`;
  });
  console.log(`${label}, seeds 1-${seeds}: ${rows.join('; ')}; refused ${refusals}`);
  for (const [name, truth] of Object.entries(truths)) {
    expect(inside[name] ?? 0, `${label}: ${name} inside its interval`).toBeGreaterThanOrEqual(0.9 * seeds);
    const limit = largestRelativeWidth[name];
    if (limit !== undefined) {
      const w = widths[name];
      expect(w[w.length >> 1] / Math.abs(truth), `${label}: width of ${name}`).toBeLessThan(limit);
    }
  }
}
