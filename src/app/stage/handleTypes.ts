import { type QuantityInfo, quantityInfo, type Rig } from '../../core/rig';
import type { Point } from './bodyPlaces';

/** Which pair of keys moves a handle: left and right, up and down, or page up and page down. */
export type HandleKeys = 'across' | 'up' | 'along' | 'none';

interface HandleCommon {
  readonly id: string;
  readonly info: QuantityInfo;
  readonly keys: HandleKeys;
  /** The value a drag or key changes, SI. */
  readonly value: number;
  /** The rig with another value; the value has been snapped and kept in range. */
  readonly write: (rig: Rig, value: number) => Rig;
  /** What values snap to, SI. */
  readonly step: number;
  /** The grip keeps at least this far from the middle of its part on the screen, CSS pixels. */
  readonly leastPixels: number;
}

export interface SlideHandle extends HandleCommon {
  readonly kind: 'slide';
  /** A point of the line it slides along; m, in the frame of the part: the body's, or the sole's for a foot. */
  readonly at: Point;
  /** How far along the axis from there the grip stands, m. */
  readonly clear: number;
  /** Unit vector in the same frame: the way the value grows. */
  readonly axis: Point;
  /** Change of the value for a metre of drag: 2 for a width whose far side moves as well. */
  readonly gain: number;
}

export interface TurnHandle extends HandleCommon {
  readonly kind: 'turn';
  readonly centre: Point;
  /** Unit vector the angle is right-handed about. */
  readonly normal: Point;
  /** Unit vector at angle zero, square to the normal. */
  readonly zero: Point;
  /** m. */
  readonly radius: number;
  /** True when the grip stands at `value` itself; else it stands at `zero` and drags turn from there. */
  readonly isAbsolute: boolean;
}

export type Handle = SlideHandle | TurnHandle;

export interface HandleSet {
  /** Frame the handles live in. */
  readonly frame: 'body' | 'foot';
  readonly handles: readonly Handle[];
}

export const AXES: readonly Point[] = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];

const AXIS_KEYS: readonly HandleKeys[] = ['along', 'across', 'up'];

/** What the schema says of the number a handle changes: its label, range and dimension are written once, there. */
export const infoOf = (schema: Parameters<typeof quantityInfo>[0]): QuantityInfo => {
  const info = quantityInfo(schema);
  if (!info) throw new Error('A handle was given a schema that is not a quantity.');
  return info;
};

type SlideParts = Pick<SlideHandle, 'id' | 'at' | 'value' | 'step' | 'write'> &
  Partial<Pick<SlideHandle, 'axis' | 'gain' | 'clear' | 'leastPixels'>>;

/** A handle along body axis 0, 1 or 2 for the number of a schema. */
export const slideHandle = (
  schema: Parameters<typeof quantityInfo>[0],
  axis: 0 | 1 | 2,
  parts: SlideParts,
): SlideHandle => ({
  kind: 'slide',
  info: infoOf(schema),
  keys: AXIS_KEYS[axis],
  axis: AXES[axis],
  gain: 1,
  clear: 0,
  leastPixels: 0,
  ...parts,
});
