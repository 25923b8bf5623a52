/** The picture in words, for those who do not see it. */
import type { Rig } from '../../core/rig';
import { formatQuantity } from '../../core/units';
import { type Instant, rollAndPitch } from './motionInstant';

const names = (rig: Rig): readonly string[] => rig.array.gyros.map((gyro) => gyro.name);

/** Which feet carry load, as a clause; empty for bodies without feet. */
function describeFeet(instant: Instant): string {
  const count = instant.isFootDown.length;
  if (count === 0) return '';
  const down = instant.isFootDown.reduce((sum, foot) => sum + foot, 0);
  if (down === count) return count === 2 ? ' Both feet down.' : ` All ${count} feet down.`;
  return down === 0 ? ' No foot down.' : ` ${down} of ${count} feet down.`;
}

const angle = (radians: number): string =>
  formatQuantity(Math.abs(radians) < 5e-4 ? 0 : radians, 'angle', '°', 2);

/** Lean, tilts, feet and failure of one instant in a few short sentences. */
export function describeInstant(
  rig: Rig,
  instant: Instant,
  seconds: number,
  fellAt: number | undefined,
): string {
  const [roll, pitch] = rollAndPitch(instant.pose);
  const time = formatQuantity(seconds, 'time', 's', 3);
  const tilts = names(rig).map((name, i) => `${name} ${angle(instant.tilt[i] ?? 0)}`);
  const tilted = tilts.length > 0 ? ` Tilt: ${tilts.join(', ')}.` : '';
  const fallen =
    fellAt !== undefined && seconds >= fellAt ? ` Fell at ${formatQuantity(fellAt, 'time', 's', 3)}.` : '';
  return `${rig.name} at ${time}: roll ${angle(roll)}, pitch ${angle(pitch)}.${tilted}${describeFeet(instant)}${fallen}`;
}
