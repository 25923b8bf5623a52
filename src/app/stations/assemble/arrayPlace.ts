/** The place of a whole array: its middle and its spread, worked out from its gyros and written back to them. */
import type { Gyro, Rig } from '../../../core/rig';

type Vector = readonly [number, number, number];

export interface ArrayPlace {
  readonly centre: Vector;
  /** m, greatest distance between two gimbal centres. */
  readonly spacing: number;
}

const mean = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0) / values.length;

/** Middle and spread of an array; undefined when it has no gyros. */
export function placeOfArray(gyros: readonly Gyro[]): ArrayPlace | undefined {
  if (gyros.length === 0) return undefined;
  const centre = [0, 1, 2].map((axis) =>
    mean(gyros.map((gyro) => gyro.position[axis] as number)),
  ) as unknown as Vector;
  let spacing = 0;
  for (const a of gyros) {
    for (const b of gyros) {
      const apart = a.position.map((value, axis) => value - (b.position[axis] as number));
      spacing = Math.max(spacing, Math.hypot(...apart));
    }
  }
  return { centre, spacing };
}

const withPositions = (rig: Rig, place: (position: Vector) => Vector): Rig => ({
  ...rig,
  array: {
    ...rig.array,
    gyros: rig.array.gyros.map((gyro) => ({ ...gyro, position: place(gyro.position) })),
  },
});

/** Moves the whole array so that its middle stands at a coordinate. */
export function moveArray(rig: Rig, axis: 0 | 1 | 2, to: number): Rig {
  const now = placeOfArray(rig.array.gyros);
  if (!now) return rig;
  const shift = to - now.centre[axis];
  return withPositions(
    rig,
    (p) => p.map((value, k) => (k === axis ? value + shift : value)) as unknown as Vector,
  );
}

/** Spreads the gyros from their middle, or draws them in; an array of one stays as it is. */
export function spreadArray(rig: Rig, spacing: number): Rig {
  const now = placeOfArray(rig.array.gyros);
  if (!now || now.spacing === 0) return rig;
  const factor = spacing / now.spacing;
  return withPositions(
    rig,
    (p) => p.map((value, k) => now.centre[k]! + (value - now.centre[k]!) * factor) as unknown as Vector,
  );
}
