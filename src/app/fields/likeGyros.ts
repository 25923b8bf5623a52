/** Gyros of one array are mostly alike, so what is changed on one is changed on all that were the same there. */
import type { Rig } from '../../core/rig';
import { type RigPath, readAt, writeAt } from './rigPath';

const isSame = (a: unknown, b: unknown): boolean => JSON.stringify(a) === JSON.stringify(b);

/**
 * Writes a value into a gyro and into every other gyro that held the same value there.
 *
 * @param inner  path within the gyro, such as `['wheel', 'parts', 0, 'width']`
 */
export function writeToLikeGyros(rig: Rig, gyro: number, inner: RigPath, value: unknown): Rig {
  const path = (index: number): RigPath => ['array', 'gyros', index, ...inner];
  const before = readAt(rig, path(gyro));
  return rig.array.gyros.reduce(
    (changed, _, index) =>
      index === gyro || isSame(readAt(rig, path(index)), before)
        ? writeAt(changed, path(index), value)
        : changed,
    rig,
  );
}

/** How many gyros would follow a change made there, the changed one included. */
export const countLikeGyros = (rig: Rig, gyro: number, inner: RigPath): number => {
  const before = readAt(rig, ['array', 'gyros', gyro, ...inner]);
  return rig.array.gyros.filter((_, index) =>
    isSame(readAt(rig, ['array', 'gyros', index, ...inner]), before),
  ).length;
};
