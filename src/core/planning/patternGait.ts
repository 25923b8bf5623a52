/** Gaits by pattern and timers: from footfalls and step figures to the track of each foot. */

import type { Vec3 } from '../physics';
import type { LeggedBody, PatternGait, Refusal } from '../rig';
import { formatQuantity } from '../units';
import type { FootTrack } from './footMotion';
import { beatGaps, type Footfalls, footfallsOf, legsFor, patternsFor } from './gaitPatterns';

/** Gaps are compared to shares of a cycle a person typed: this much is rounding. */
const ROUNDING = 1e-9;

/** Longest share of the cycle a foot may be down. */
const MOST_DUTY = 0.98;

const refuse = (name: keyof PatternGait, sentence: string): Refusal => ({
  field: `jobs.gait.${name}`,
  sentence: `jobs.gait.${name}: ${sentence}`,
});

/** Least duty factor a pattern allows, with what would go wrong below it. */
function leastDuty(
  pattern: string,
  falls: Footfalls,
  dwell: number,
): { readonly least: number; readonly why: string } {
  const { widest, narrowest } = beatGaps(falls.beats);
  const legs = falls.touchDown.length;
  const bounds = [{ least: widest, why: 'or there are instants with no foot down' }];
  if (falls.mostLifted === 1) {
    bounds.push({ least: 1 - 1 / legs, why: `or ${pattern} lifts more than one foot at a time` });
  }
  if (dwell > 0) {
    bounds.push({ least: 1 - narrowest, why: 'or a foot is in the air where the dwell has all feet down' });
  }
  return bounds.reduce((a, b) => (b.least > a.least + ROUNDING ? b : a));
}

/** Everything about a pattern that no legs could walk, each a sentence with field, value, range and unit. */
export function refusePattern(body: LeggedBody, gait: PatternGait): readonly Refusal[] {
  const falls = footfallsOf(gait.pattern, body.legs);
  if (falls === undefined) {
    const needed = legsFor(gait.pattern).join(' or ');
    const offered = patternsFor(body.legs).join(', ');
    return [
      refuse(
        'pattern',
        `${gait.pattern} needs ${needed} legs and this body has ${body.legs}; choose one of: ${offered}.`,
      ),
    ];
  }
  const { least, why } = leastDuty(gait.pattern, falls, gait.dwell);
  const { dutyFactor } = gait;
  if (dutyFactor < least - ROUNDING || dutyFactor > MOST_DUTY + ROUNDING) {
    const percent = (share: number) => formatQuantity(share, 'ratio', '%');
    return [
      refuse(
        'dutyFactor',
        `${percent(dutyFactor)} is out of the range from ${percent(least)} to ${percent(MOST_DUTY)} for ${gait.pattern} on ${body.legs} legs, ${why}.`,
      ),
    ];
  }
  return [];
}

export interface PatternTracks {
  /** s: as many step times, and as many dwells, as the pattern has distinct touch-downs. */
  readonly period: number;
  readonly velocity: readonly [number, number];
  readonly feet: readonly FootTrack[];
}

/**
 * Tracks of the feet of a pattern gait that `refusePattern` has nothing against.
 *
 * The step time runs from one touch-down of the pattern to the next (walk on two legs, trot, pace, bound and
 * tripod: half a cycle; four-legged walk, crawl and amble: a quarter, on the mean for the amble; six-legged walk a
 * third, crawl a sixth). The body goes one step length in one step time and dwell. The duty factor is the
 * share of the cycle, dwells left out, that a foot is down. Each dwell begins at a touch-down. A foot is
 * under its hip in the middle of its stance. Time 0 is the first touch-down of the pattern.
 *
 * @param hips  m, body frame, in leg order
 */
export function patternTracks(body: LeggedBody, gait: PatternGait, hips: readonly Vec3[]): PatternTracks {
  const falls = footfallsOf(gait.pattern, body.legs);
  if (falls === undefined) throw new Error(`${gait.pattern} on ${body.legs} legs was to be refused before`);
  const beats = falls.beats.length;
  const walking = beats * gait.stepTime;
  const period = beats * (gait.stepTime + gait.dwell);
  const speed = gait.stepLength / (gait.stepTime + gait.dwell);
  const velocity = [speed, 0] as const;

  // Time of a phase: the walking time up to it and the dwells that have passed.
  const timeOf = (phase: number, isAfterDwell: boolean): number => {
    const cycles = Math.floor(phase + ROUNDING);
    const share = phase - cycles;
    const edge = isAfterDwell ? share + ROUNDING : share - ROUNDING;
    const passed = falls.beats.filter((beat) => beat < edge).length;
    return phase * walking + (cycles * beats + passed) * gait.dwell;
  };

  const feet = hips.map((hip, leg): FootTrack => {
    const phase = falls.touchDown[leg] as number;
    const down = timeOf(phase, false);
    const up = timeOf(phase + gait.dutyFactor, true);
    const ahead = (speed * (up - down)) / 2;
    const y = (Math.sign(hip[1]) * gait.stanceWidth) / 2;
    const stand = [hip[0] + ahead + speed * down, y, 0] as const;
    const next = [stand[0] + speed * period, y, 0] as const;
    return {
      period,
      velocity,
      spans: [
        { from: down, to: up, start: stand, end: stand, rise: 0, isDown: true },
        { from: up, to: down + period, start: stand, end: next, rise: gait.stepHeight, isDown: false },
      ],
    };
  });
  return { period, velocity, feet };
}
