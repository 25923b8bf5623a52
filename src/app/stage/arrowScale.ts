import type { Motion } from '../../core/trial';

/** How a quantity turns into the length of its arrow. */
export interface ArrowScale {
  /** SI value that draws the longest arrow: a round number. */
  readonly full: number;
  /** m, length of the longest arrow. */
  readonly longest: number;
}

export interface ArrowLength {
  /** m, never negative and never longer than the scale allows. */
  readonly length: number;
  /** True when the value is greater than the arrow can show: it then carries the clamp mark. */
  readonly isClamped: boolean;
}

/** The leads that lengths of a grid may have, and those of an arrow's full value, which may come closer. */
export const GRID_LEADS = [1, 2, 5, 10] as const;
const SCALE_LEADS = [1, 1.5, 2, 3, 4, 5, 6, 8, 10] as const;

/** The next round number at or above a value: one of the leads times a power of ten; 1 for nothing at all. */
export function roundUp(value: number, leads: readonly number[]): number {
  if (!(value > 0) || !Number.isFinite(value)) return 1;
  const decade = 10 ** Math.floor(Math.log10(value));
  const lead = value / decade;
  // A hair of slack, so that 0.2 / 0.1 does not count as more than 2.
  const step = leads.find((s) => lead <= s * (1 + 1e-9)) ?? 10;
  return step * decade;
}

/**
 * Scale for values seen over a motion. The one in fifty largest are left out of the choice, so that the moment
 * of a fall does not make every other arrow too short to see; they are drawn clamped.
 */
export function chooseScale(sizes: readonly number[], longest: number): ArrowScale {
  const sorted = sizes.filter((s) => Number.isFinite(s)).sort((a, b) => a - b);
  const high = sorted[Math.floor(0.98 * (sorted.length - 1))] ?? 0;
  return { full: roundUp(high, SCALE_LEADS), longest };
}

/** Length of an arrow for a value; a value that is not a number draws none. */
export function arrowLength(value: number, scale: ArrowScale): ArrowLength {
  const size = Math.abs(value);
  if (!Number.isFinite(size)) return { length: 0, isClamped: false };
  if (size > scale.full * (1 + 1e-9)) return { length: scale.longest, isClamped: true };
  return { length: (size / scale.full) * scale.longest, isClamped: false };
}

export interface QuantityScales {
  readonly momentum: ArrowScale;
  /** Torque, demand and yaw leak share one scale, so that they can be held against each other. */
  readonly torque: ArrowScale;
}

/** The scales of a motion's arrows, both with the same longest arrow (m, or rad for arcs). O(samples log samples). */
export function motionScales(motion: Motion, longest: number): QuantityScales {
  const momentum: number[] = [];
  const torque: number[] = [];
  for (let i = 0; i < motion.samples; i++) {
    momentum.push(sizeOf(motion.momentum, i));
    torque.push(Math.max(sizeOf(motion.torque, i), Math.abs(motion.demand[i]) || 0));
  }
  return { momentum: chooseScale(momentum, longest), torque: chooseScale(torque, longest) };
}

const sizeOf = (column: Float64Array, i: number): number =>
  Math.hypot(column[3 * i], column[3 * i + 1], column[3 * i + 2]);
