import { add, angleOf, negate, type Phasor, phasor, sizeOf, subtract } from './phasor';

export interface HoleRing {
  /** rad on the wheel, from the mark in the direction of rotation. */
  readonly angles: readonly number[];
  /** kg, most that one hole takes (or may lose); Infinity for no limit. */
  readonly mostPerHole: number;
  /** kg, masses come in whole multiples of this; 0 for any mass. */
  readonly step?: number;
  /** Weights are screwed in, or metal is drilled out on the far side. */
  readonly way: 'add' | 'drill';
}

export type HoleOutcome =
  | {
      readonly kind: 'split';
      /** kg a hole, in the order of the ring. */
      readonly masses: readonly number[];
      /** What the masses together amount to as a correction, kg at an angle. */
      readonly achieved: Phasor;
      /** kg, size of what is still missing. */
      readonly left: number;
    }
  | { readonly kind: 'refused'; readonly sentence: string };

/**
 * Splits a correction over the holes a wheel has, with the least mass in all.
 *
 * A linear program in the hole masses with two equations: at its optimum all holes but two are empty or full, so every
 * pair is tried with the full ones told by the sign of the reduced cost. Exact; O(n^3) for n holes.
 * With a step, masses are then rounded and the neighbours of the rounding searched for the least remainder.
 */
export function splitOverHoles(correction: Phasor, ring: HoleRing): HoleOutcome {
  const n = ring.angles.length;
  const goal = ring.way === 'add' ? correction : negate(correction);
  const need = sizeOf(goal);
  if (n < 2)
    return { kind: 'refused', sentence: `The wheel has ${n} holes: at least 2 are needed to set an angle.` };
  if (!(ring.mostPerHole > 0))
    return {
      kind: 'refused',
      sentence: `The most per hole is ${ring.mostPerHole} kg: it must be above zero.`,
    };
  const e = ring.angles.map((a) => phasor(1, a));
  let masses: number[] | undefined = need === 0 ? new Array(n).fill(0) : undefined;
  if (!masses) masses = findLeastMass(goal, e, ring.mostPerHole);
  if (!masses) {
    const reach =
      e.reduce((s, h) => s + Math.max(0, (h.re * goal.re + h.im * goal.im) / need), 0) * ring.mostPerHole;
    const degrees = ((angleOf(goal) * 180) / Math.PI).toFixed(0);
    return {
      kind: 'refused',
      sentence:
        Number.isFinite(reach) && reach < need
          ? `The holes cannot take it: ${(need * 1e3).toPrecision(3)} g are needed towards ${degrees}°, ${(reach * 1e3).toPrecision(3)} g is the most they give there.`
          : `The holes cannot make ${(need * 1e3).toPrecision(3)} g at ${degrees}°: no set of them points there.`,
    };
  }
  const step = ring.step ?? 0;
  const rounded = step > 0 ? roundMasses(goal, e, masses, step, ring.mostPerHole) : masses;
  const sum = sumOf(e, rounded);
  const achieved = ring.way === 'add' ? sum : negate(sum);
  return { kind: 'split', masses: rounded, achieved, left: sizeOf(subtract(goal, sum)) };
}

const sumOf = (e: readonly Phasor[], m: readonly number[]): Phasor =>
  e.reduce((s, h, k) => add(s, { re: h.re * m[k], im: h.im * m[k] }), { re: 0, im: 0 });

function findLeastMass(goal: Phasor, e: readonly Phasor[], most: number): number[] | undefined {
  const n = e.length;
  const slack = 1e-9 * sizeOf(goal);
  let best: number[] | undefined;
  let bestSum = Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i++) {
    for (let j = i + 1; j < n; j++) {
      const det = e[i].re * e[j].im - e[i].im * e[j].re;
      if (Math.abs(det) < 1e-9) continue;
      // Price of a unit of correction in each direction: lambda . e = 1 on the two holes that are neither empty nor full.
      const lx = (e[j].im - e[i].im) / det;
      const ly = (e[i].re - e[j].re) / det;
      const m = e.map((h, k) => (k !== i && k !== j && h.re * lx + h.im * ly > 1 + 1e-12 ? most : 0));
      if (m.includes(Number.POSITIVE_INFINITY)) continue;
      const rest = subtract(goal, sumOf(e, m));
      m[i] = (rest.re * e[j].im - rest.im * e[j].re) / det;
      m[j] = (e[i].re * rest.im - e[i].im * rest.re) / det;
      if (m[i] < -slack || m[j] < -slack || m[i] > most + slack || m[j] > most + slack) continue;
      m[i] = Math.min(most, Math.max(0, m[i]));
      m[j] = Math.min(most, Math.max(0, m[j]));
      const sum = m.reduce((s, v) => s + v, 0);
      if (sum < bestSum - slack) [best, bestSum] = [m, sum];
    }
  }
  return best;
}

/**
 * Descends from the nearest multiples: one hole up or down, or one up and another down, while the remainder shrinks; only
 * holes on the side of the goal are touched.
 */
function roundMasses(
  goal: Phasor,
  e: readonly Phasor[],
  masses: readonly number[],
  step: number,
  most: number,
): number[] {
  const counts = masses.map((m) => Math.round(m / step));
  const open = e.map((_, k) => k).filter((k) => e[k].re * goal.re + e[k].im * goal.im > 0);
  const highest = Math.floor(most / step + 1e-9);
  for (let k = 0; k < counts.length; k++) counts[k] = Math.min(counts[k], highest);
  const left = (c: readonly number[]): number =>
    sizeOf(
      subtract(
        goal,
        sumOf(
          e,
          c.map((v) => v * step),
        ),
      ),
    );
  let best = left(counts);
  for (let hasImproved = true; hasImproved; ) {
    hasImproved = false;
    for (const i of open) {
      for (const j of open) {
        for (const [di, dj] of [
          [1, 0],
          [-1, 0],
          [1, -1],
          [-1, 1],
          [1, 1],
        ]) {
          const trial = counts.slice();
          trial[i] += di;
          trial[j] += dj;
          if (trial[i] < 0 || trial[j] < 0 || trial[i] > highest || trial[j] > highest) continue;
          const value = left(trial);
          if (value >= best - 1e-15) continue;
          best = value;
          for (let k = 0; k < counts.length; k++) counts[k] = trial[k];
          hasImproved = true;
        }
      }
    }
  }
  return counts.map((v) => v * step);
}
