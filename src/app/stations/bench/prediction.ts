import type { LogQuantity, Samples } from '../../../core/bench';
import type { Motion } from '../../../core/trial';
import { useDocument } from '../../state/document';
import { stream } from '../../state/stream';

/** Roll, pitch and yaw of a quaternion w x y z, body to world: turned about z, then y, then x. */
function anglesOf(pose: Float64Array, at: number): readonly [number, number, number] {
  const [w, x, y, z] = [pose[at + 3], pose[at + 4], pose[at + 5], pose[at + 6]] as [
    number,
    number,
    number,
    number,
  ];
  return [
    Math.atan2(2 * (w * x + y * z), 1 - 2 * (x * x + y * y)),
    Math.asin(Math.max(-1, Math.min(1, 2 * (w * y - z * x)))),
    Math.atan2(2 * (w * z + x * y), 1 - 2 * (y * y + z * z)),
  ];
}

const ANGLES: readonly LogQuantity[] = ['roll', 'pitch', 'yaw'];
const RATES: readonly LogQuantity[] = ['rollRate', 'pitchRate', 'yawRate'];

/**
 * What the preview on screen says a logged quantity should be; undefined where it says nothing of it. Tilt is that of
 * one gyro, which the log must be of.
 */
export function predictQuantity(
  motion: Motion,
  quantity: LogQuantity,
  gyro: number,
  wheelSpeed: number | undefined,
): Samples | undefined {
  const { samples, time } = motion;
  if (samples < 2) return undefined;
  const from = (value: (i: number) => number): Samples => ({
    time: time.slice(0, samples),
    values: Float64Array.from({ length: samples }, (_, i) => value(i)),
  });
  const axis = ANGLES.indexOf(quantity);
  if (axis >= 0) return from((i) => anglesOf(motion.pose, 7 * i)[axis] as number);
  const rate = RATES.indexOf(quantity);
  if (rate >= 0) {
    const angle = (i: number): number => anglesOf(motion.pose, 7 * i)[rate] as number;
    const clamp = (i: number): number => Math.max(0, Math.min(samples - 1, i));
    return from((i) => {
      const [a, b] = [clamp(i - 1), clamp(i + 1)];
      return (angle(b) - angle(a)) / ((time[b] as number) - (time[a] as number));
    });
  }
  if (gyro >= motion.gyros) return undefined;
  const column = (values: Float64Array): Samples => from((i) => values[i * motion.gyros + gyro] as number);
  switch (quantity) {
    case 'tilt':
      return column(motion.tilt);
    case 'tiltRate':
      return column(motion.tiltRate);
    case 'tiltCommand':
      return column(motion.plannedTilt);
    case 'wheelSpeed':
      return wheelSpeed === undefined ? undefined : from(() => wheelSpeed);
    default:
      return undefined;
  }
}

/** The same for the preview and rig on screen. */
export function predictionOf(quantity: LogQuantity, gyro = 0): Samples | undefined {
  const shown = stream.shown;
  const wheelSpeed = useDocument.getState().rig.array.gyros[gyro]?.speed;
  return shown ? predictQuantity(shown.motion, quantity, gyro, wheelSpeed) : undefined;
}
