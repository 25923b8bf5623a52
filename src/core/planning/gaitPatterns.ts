/** Footfall patterns: when each foot touches down within the cycle, and on which bodies each pattern makes sense. */
import type { GaitPattern } from '../rig';

export interface Footfalls {
  /** Touch-down of each leg as a share of the cycle, in leg order; the first touch-down is at 0. */
  readonly touchDown: readonly number[];
  /** Distinct touch-downs in the cycle: the cycle lasts this many step times. */
  readonly beats: readonly number[];
  /** Most legs that may be in the air at once; undefined where the pattern sets no bound. */
  readonly mostLifted: number | undefined;
}

/**
 * Leg order: 2 legs L R; 4 legs FL FR RL RR; 6 legs FL FR ML MR RL RR.
 * Four legs: lateral-sequence walk, trot, pace and bound by Hildebrand, Symmetrical gaits of horses, Science 150
 * (1965); the amble is his lateral couplet, fore foot an eighth of the cycle after the hind foot of its side.
 * Six legs: alternating tripod, tetrapod walk and metachronal wave (crawl) by Wilson, Insect walking, Annual
 * Review of Entomology 11 (1966).
 */
const PATTERNS: Readonly<Record<2 | 4 | 6, Partial<Record<GaitPattern, readonly number[]>>>> = {
  2: { walk: [0, 1 / 2] },
  4: {
    walk: [1 / 4, 3 / 4, 0, 1 / 2],
    crawl: [1 / 4, 3 / 4, 0, 1 / 2],
    trot: [0, 1 / 2, 1 / 2, 0],
    pace: [0, 1 / 2, 0, 1 / 2],
    amble: [1 / 8, 5 / 8, 0, 1 / 2],
    bound: [1 / 2, 1 / 2, 0, 0],
  },
  6: {
    walk: [2 / 3, 0, 1 / 3, 2 / 3, 0, 1 / 3],
    crawl: [2 / 6, 5 / 6, 1 / 6, 4 / 6, 0, 3 / 6],
    tripod: [0, 1 / 2, 1 / 2, 0, 0, 1 / 2],
  },
};

/** Patterns a body of so many legs can walk, in the order they are offered. */
export const patternsFor = (legs: 2 | 4 | 6): readonly GaitPattern[] =>
  Object.keys(PATTERNS[legs]) as GaitPattern[];

/** Footfalls of a pattern; undefined where the pattern does not apply to so many legs. */
export function footfallsOf(pattern: GaitPattern, legs: 2 | 4 | 6): Footfalls | undefined {
  const touchDown = PATTERNS[legs][pattern];
  if (touchDown === undefined) return undefined;
  const beats = [...new Set(touchDown)].toSorted((a, b) => a - b);
  return { touchDown, beats, mostLifted: pattern === 'crawl' ? 1 : undefined };
}

/** Numbers of legs a pattern applies to. */
export const legsFor = (pattern: GaitPattern): readonly number[] =>
  ([2, 4, 6] as const).filter((legs) => PATTERNS[legs][pattern] !== undefined);

/** Widest and narrowest gap between one touch-down and the next, as shares of the cycle. */
export function beatGaps(beats: readonly number[]): { readonly widest: number; readonly narrowest: number } {
  const gaps = beats.map((beat, i) => (i + 1 < beats.length ? (beats[i + 1] as number) : 1) - beat);
  return { widest: Math.max(...gaps), narrowest: Math.min(...gaps) };
}
