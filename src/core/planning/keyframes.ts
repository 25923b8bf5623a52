/** Gaits from a table of instants and places, as a walker with fixed timers has them. */
import type { Gait, Refusal } from '../rig';
import { formatQuantity } from '../units';
import type { FootSpan, FootTrack } from './footMotion';

export type KeyframeGait = Extract<Gait, { kind: 'keyframes' }>;

/** A sole at most this far above the ground (m) stands on it. */
export const GROUND = 1e-4;

/** Feet that are down may part or close by this much (m) between two keyframes before it is called sliding. */
const MOST_SLIDE = 1e-3;

/** The last keyframe may be this far (m) from the first and still close the cycle. */
const MOST_GAP = 1e-4;

export type KeyframeOutcome =
  | {
      readonly kind: 'tracks';
      readonly period: number;
      readonly velocity: readonly [number, number];
      readonly feet: readonly FootTrack[];
      readonly body: FootTrack;
    }
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

const refuse = (field: string, sentence: string): KeyframeOutcome => ({
  kind: 'refused',
  refusals: [{ field, sentence: `${field}: ${sentence}` }],
});

const length = (value: number) => formatQuantity(value, 'length', 'mm');
const instant = (value: number) => formatQuantity(value, 'time');

/**
 * Tracks of feet and body from keyframes.
 *
 * Keyframes give each sole in the body frame. Between two of them every foot goes from rest to rest, all by the
 * same law of time, so feet that stand keep still on the ground while the body is carried along by what they
 * move back. A foot on the ground at both ends of an interval stands throughout; any other is in the air.
 *
 * @param legs  number of legs of the body
 */
export function keyframeTracks(gait: KeyframeGait, legs: number): KeyframeOutcome {
  const fault = refuseTable(gait, legs);
  if (fault !== undefined) return fault;
  const { times, feet } = gait;
  const start = times[0] as number;
  const period = (times.at(-1) as number) - start;
  const isDown = (k: number, leg: number) =>
    Math.abs(placeOf(feet, k, leg)[2]) <= GROUND && Math.abs(placeOf(feet, k + 1, leg)[2]) <= GROUND;

  // Where the body's origin is in the world at each keyframe.
  const origin: [number, number][] = [[0, 0]];
  for (let k = 0; k + 1 < times.length; k++) {
    const shifts: [number, number][] = [];
    for (let leg = 0; leg < legs; leg++) {
      if (!isDown(k, leg)) continue;
      const [x0, y0] = placeOf(feet, k, leg);
      const [x1, y1] = placeOf(feet, k + 1, leg);
      shifts.push([x0 - x1, y0 - y1]);
    }
    const field = `jobs.gait.feet[${k}]`;
    const between = `between ${instant(times[k] as number)} and ${instant(times[k + 1] as number)}`;
    if (shifts.length === 0) {
      return refuse(
        field,
        `${between} no foot is on the ground (z within ${length(GROUND)} of 0 at both); keep at least one down.`,
      );
    }
    const mean = [0, 1].map(
      (axis) => shifts.reduce((sum, shift) => sum + (shift[axis] as number), 0) / shifts.length,
    );
    const slide = Math.max(
      ...shifts.map(([x, y]) => Math.sqrt((x - (mean[0] as number)) ** 2 + (y - (mean[1] as number)) ** 2)),
    );
    if (slide > MOST_SLIDE) {
      return refuse(
        field,
        `${between} the feet on the ground slide ${length(slide)} against each other; from 0 to ${length(MOST_SLIDE)} is allowed.`,
      );
    }
    const [x, y] = origin[k] as [number, number];
    origin.push([x + (mean[0] as number), y + (mean[1] as number)]);
  }
  const travel = origin.at(-1) as [number, number];
  const velocity = [travel[0] / period, travel[1] / period] as const;
  const track = (spanOf: (k: number) => Pick<FootSpan, 'start' | 'end' | 'isDown'>): FootTrack => ({
    period,
    velocity,
    spans: Array.from({ length: times.length - 1 }, (_, k) => ({
      from: (times[k] as number) - start,
      to: (times[k + 1] as number) - start,
      rise: 0,
      ...spanOf(k),
    })),
  });
  const world = (k: number, leg: number): [number, number, number] => {
    const [x, y, z] = placeOf(feet, k, leg);
    const [ox, oy] = origin[k] as [number, number];
    return [x + ox, y + oy, z];
  };
  return {
    kind: 'tracks',
    period,
    velocity,
    feet: Array.from({ length: legs }, (_, leg) =>
      track((k) => {
        const isStanding = isDown(k, leg);
        const from = world(k, leg);
        return { start: from, end: isStanding ? from : world(k + 1, leg), isDown: isStanding };
      }),
    ),
    body: track((k) => {
      const [x0, y0] = origin[k] as [number, number];
      const [x1, y1] = origin[k + 1] as [number, number];
      return { start: [x0, y0, 0], end: [x1, y1, 0], isDown: false };
    }),
  };
}

const placeOf = (feet: KeyframeGait['feet'], k: number, leg: number): readonly [number, number, number] => {
  const row = feet[k] as readonly number[];
  return [row[3 * leg] as number, row[3 * leg + 1] as number, row[3 * leg + 2] as number];
};

function refuseTable(gait: KeyframeGait, legs: number): KeyframeOutcome | undefined {
  const { times, feet } = gait;
  if (feet.length !== times.length) {
    return refuse(
      'jobs.gait.feet',
      `${feet.length} rows for ${times.length} instants; give one row for each instant.`,
    );
  }
  for (let k = 0; k < times.length; k++) {
    const count = (feet[k] as readonly number[]).length;
    if (count !== 3 * legs) {
      return refuse(
        `jobs.gait.feet[${k}]`,
        `${count} numbers; ${legs} legs need ${3 * legs} (x, y, z of each, m).`,
      );
    }
    if (k > 0 && !((times[k] as number) > (times[k - 1] as number))) {
      return refuse(
        `jobs.gait.times[${k}]`,
        `${instant(times[k] as number)} does not come after ${instant(times[k - 1] as number)}; times must rise.`,
      );
    }
    for (let leg = 0; leg < legs; leg++) {
      const z = placeOf(feet, k, leg)[2];
      if (z < -GROUND) {
        return refuse(
          `jobs.gait.feet[${k}]`,
          `the sole of foot ${leg + 1} is at ${length(z)}, below the ground; z is from 0 up.`,
        );
      }
    }
  }
  const first = feet[0] as readonly number[];
  const last = feet.at(-1) as readonly number[];
  const gap = Math.max(...first.map((value, i) => Math.abs(value - (last[i] as number))));
  if (gap > MOST_GAP) {
    return refuse(
      `jobs.gait.feet[${feet.length - 1}]`,
      `the last keyframe is ${length(gap)} off the first; a gait closes on itself, within ${length(MOST_GAP)}.`,
    );
  }
  return undefined;
}
