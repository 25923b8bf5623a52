/** How one foot moves: spans on the ground and spans through the air, joined with continuous position, velocity and acceleration. */

/** One span of a foot's track, in the world. The foot goes from `start` to `end` from rest to rest; a foot that is down has both alike. */
export interface FootSpan {
  /** s from the start of the cycle; `to` may lie beyond the end of the cycle. */
  readonly from: number;
  readonly to: number;
  /** m, world as it is in the first cycle. */
  readonly start: readonly [number, number, number];
  readonly end: readonly [number, number, number];
  /** m, lift above the straight line in the middle of the span. */
  readonly rise: number;
  readonly isDown: boolean;
}

/** A foot over one cycle: spans that follow each other without gap and together last one period. */
export interface FootTrack {
  readonly period: number;
  /** m/s along and across, of the frame that walks with the body's mean motion. */
  readonly velocity: readonly [number, number];
  readonly spans: readonly FootSpan[];
}

/** Instants closer to a boundary than this share of a period count as lying on it. */
const ON_BOUNDARY = 1e-9;

/** Time within the cycle that `track.spans[0]` begins, s. */
function timeInCycle(track: FootTrack, time: number): number {
  const first = (track.spans[0] as FootSpan).from;
  const cycles = Math.floor((time - first) / track.period + ON_BOUNDARY);
  return Math.max(first, time - cycles * track.period);
}

/** The span that holds a time of the cycle; one that ends there has passed. By halving: a table may have thousands. */
function spanAt(track: FootTrack, local: number): FootSpan {
  const slack = ON_BOUNDARY * track.period;
  const { spans } = track;
  let low = 0;
  let high = spans.length - 1;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (local < (spans[middle] as FootSpan).to - slack) high = middle;
    else low = middle + 1;
  }
  return spans[low] as FootSpan;
}

/** Whether the foot carries load just after an instant: down from touch-down until lift-off. */
export const isFootDownAt = (track: FootTrack, time: number): boolean =>
  spanAt(track, timeInCycle(track, time)).isDown;

/** Whether the foot is down at every instant between two. `to` is at least `from`. O(spans x periods between). */
export function isFootDownThroughout(track: FootTrack, from: number, to: number): boolean {
  const slack = ON_BOUNDARY * track.period;
  const first = (track.spans[0] as FootSpan).from;
  let base = Math.floor((from - first) / track.period) * track.period;
  for (; first + base < to - slack; base += track.period) {
    for (const span of track.spans) {
      if (!span.isDown && span.from + base < to - slack && span.to + base > from + slack) return false;
    }
  }
  return true;
}

/**
 * Position, velocity and acceleration of a foot in the frame that walks with the body's mean motion.
 *
 * @param track  the foot
 * @param time   s, any
 * @param out    at least at + 9: m, m/s, m/s^2, each as x, y, z
 * @param at     where in `out` to write
 *
 * From rest to rest by the path of least jerk, 10 s^3 - 15 s^4 + 6 s^5 (Flash and Hogan, J. Neuroscience 5,
 * 1985); lifted by 64 s^3 (1 - s)^3, which is 1 in the middle and has no velocity or acceleration at the ends.
 * O(spans), allocates nothing.
 */
export function footStateAt(track: FootTrack, time: number, out: Float64Array, at = 0): void {
  const local = timeInCycle(track, time);
  const span = spanAt(track, local);
  const length = span.to - span.from;
  const s = Math.min(1, Math.max(0, (local - span.from) / length));
  const r = 1 - s;
  const blend = s * s * s * (10 + s * (-15 + 6 * s));
  const blendRate = (30 * s * s * r * r) / length;
  const blendSecond = (60 * s * r * (1 - 2 * s)) / (length * length);
  const lift = 64 * s * s * s * r * r * r;
  const liftRate = (192 * s * s * r * r * (1 - 2 * s)) / length;
  const liftSecond = (384 * s * r * (1 - 5 * s * r)) / (length * length);
  for (let axis = 0; axis < 3; axis++) {
    const start = span.start[axis] as number;
    const step = (span.end[axis] as number) - start;
    const rise = axis === 2 ? span.rise : 0;
    const drift = axis === 2 ? 0 : (track.velocity[axis] as number);
    out[at + axis] = start + step * blend + rise * lift - drift * local;
    out[at + 3 + axis] = step * blendRate + rise * liftRate - drift;
    out[at + 6 + axis] = step * blendSecond + rise * liftSecond;
  }
}
