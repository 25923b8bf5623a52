/** A made-up motion for looking at the stage and testing what reads motions: smooth, plausible, and not physics. */
import { hipPositions, restFeet } from '../../src/core/physics';
import type { Rig } from '../../src/core/rig';
import type { Motion } from '../../src/core/trial';

export interface FixtureOptions {
  readonly samples?: number;
  readonly duration?: number;
  /** Roll that grows from half of the time on, rad at the end. */
  readonly fall?: number;
}

/** Swings of every column about where the rig stands; feet of each side lift in turn. */
export function motionFixture(rig: Rig, options: FixtureOptions = {}): Motion {
  const { samples = 241, duration = 2.4, fall = 0 } = options;
  const gyros = rig.array.gyros.length;
  const { body } = rig;
  const legs = body.kind === 'legged' ? body.legs : 0;
  const isAfloat = body.kind === 'hull';
  const stance = rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stanceWidth : 0.1;
  const soles = body.kind === 'legged' ? restFeet(body, stance) : [];
  const top =
    body.kind === 'legged' ? (hipPositions(body)[0]?.[2] ?? 0) * 1.2 : isAfloat ? body.section.depth : 0.3;
  const motion: Motion = {
    samples,
    gyros,
    legs,
    isCyclic: fall === 0,
    time: Float64Array.from({ length: samples }, (_, i) => (duration * i) / (samples - 1)),
    pose: new Float64Array(7 * samples),
    tilt: new Float64Array(gyros * samples),
    tiltRate: new Float64Array(gyros * samples),
    plannedTilt: new Float64Array(gyros * samples),
    feet: new Float64Array(3 * legs * samples),
    isFootDown: new Uint8Array(legs * samples),
    centreOfMass: new Float64Array(3 * samples),
    centreOfPressure: new Float64Array(2 * samples).fill(Number.NaN),
    momentum: new Float64Array(3 * samples),
    torque: new Float64Array(3 * samples),
    demand: new Float64Array(samples),
    water: isAfloat ? new Float64Array(samples) : new Float64Array(0),
    waterSlope: isAfloat ? new Float64Array(samples) : new Float64Array(0),
  };
  for (let i = 0; i < samples; i++) {
    const turn = (2 * Math.PI * i) / (samples - 1);
    const s = Math.sin(turn);
    const c = Math.cos(turn);
    const late = Math.max(0, (2 * i) / (samples - 1) - 1);
    const roll = fall > 0 ? fall * late * late : isAfloat ? 0.09 * s : 0.01 * s;
    const sway = isAfloat ? 0 : 0.012 * s;
    motion.pose.set([0, sway, isAfloat ? -0.18 : 0, Math.cos(roll / 2), Math.sin(roll / 2), 0, 0], 7 * i);
    rig.array.gyros.forEach((gyro, k) => {
      const sign = gyro.drive.kind === 'geared' ? -1 : 1;
      const reach = 0.8 * gyro.tilt.max;
      motion.tilt[i * gyros + k] = sign * reach * s;
      motion.tiltRate[i * gyros + k] = (sign * reach * c * 2 * Math.PI) / duration;
      motion.plannedTilt[i * gyros + k] = sign * reach * Math.sin(turn + 0.12);
    });
    soles.forEach(([x, y, z], leg) => {
      const isLeft = leg % 2 === 0;
      const lift = Math.max(0, (isLeft ? -s : s) - 0.25);
      motion.feet.set([x, y, z + 0.03 * lift], 3 * (i * legs + leg));
      motion.isFootDown[i * legs + leg] = lift > 0 ? 0 : 1;
    });
    motion.centreOfMass.set(
      [0, sway - top * Math.sin(roll), top * Math.cos(roll) - (isAfloat ? 0.18 : 0)],
      3 * i,
    );
    if (!isAfloat) motion.centreOfPressure.set([0.01, 2.5 * sway], 2 * i);
    motion.momentum.set([s, 0.1 * c, 0], 3 * i);
    motion.torque.set([-2 * c, 0, 0.3 * s], 3 * i);
    motion.demand[i] = -2.1 * Math.cos(turn + 0.1);
    if (isAfloat) motion.waterSlope[i] = 0.07 * c;
  }
  return motion;
}
