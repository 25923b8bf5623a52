/** Gimbals sorted by the servo that turns them. */
import type { CompiledRig } from '../physics';
import { unit3 } from '../physics';
import type { Gyro, Servo } from '../rig';

/** A servo with every gimbal it turns: itself and those geared to it. */
export interface GimbalGroup {
  readonly leader: number;
  readonly members: readonly { readonly index: number; readonly ratio: number }[];
  readonly servo: Servo;
  /** N*m*s about x, y, z: momentum = constant + cosine cos(tilt) + sine sin(tilt); ratios of one only. */
  readonly constant: readonly number[];
  readonly cosine: readonly number[];
  readonly sine: readonly number[];
}

/** Speed a servo can keep while it gives its continuous torque, from its straight speed-torque line, rad/s. */
export const workingSpeed = (servo: Servo): number =>
  servo.noLoadSpeed * Math.max(0.05, 1 - servo.continuousTorque / servo.stallTorque);

/** Inertia of a gimbal about its own axis, frame and wheel, kg*m^2. */
export function gimbalInertia(compiled: CompiledRig, index: number): number {
  return compiled.model.hingeInertia[index] as number;
}

/** Momentum of one wheel with its sign, N*m*s. */
export const wheelMomentum = (compiled: CompiledRig, index: number): number =>
  (compiled.wheels[index]?.spinInertia ?? 0) * (compiled.speeds[index] as number);

/** Groups gimbals by the servo that turns them. Free and locked gimbals belong to no group. O(gyros). */
export function gimbalGroups(compiled: CompiledRig): readonly GimbalGroup[] {
  const { gyros } = compiled.rig.array;
  return gyros.flatMap((gyro, leader): readonly GimbalGroup[] => {
    if (gyro.drive.kind !== 'servo') return [];
    const members = gyros.flatMap((other, index) => {
      if (index === leader) return [{ index, ratio: 1 }];
      return other.drive.kind === 'geared' && other.drive.leader === leader
        ? [{ index, ratio: other.drive.ratio }]
        : [];
    });
    const series = { constant: [0, 0, 0], cosine: [0, 0, 0], sine: [0, 0, 0] };
    for (const { index, ratio } of members) {
      const member = gyros[index] as Gyro;
      const g = unit3(member.gimbalAxis);
      const s = unit3(member.spinAxis);
      const h = wheelMomentum(compiled, index);
      const along = g[0] * s[0] + g[1] * s[1] + g[2] * s[2];
      const across = [g[1] * s[2] - g[2] * s[1], g[2] * s[0] - g[0] * s[2], g[0] * s[1] - g[1] * s[0]];
      for (let k = 0; k < 3; k++) {
        series.constant[k] += h * along * (g[k] as number);
        series.cosine[k] += h * ((s[k] as number) - along * (g[k] as number));
        series.sine[k] += h * ratio * (across[k] as number);
      }
    }
    return [{ leader, members, servo: gyro.drive.servo, ...series }];
  });
}
