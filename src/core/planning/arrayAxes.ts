/** Which part of an array pushes about which axis, and how one planned tilt becomes the tilt of every gimbal. */
import type { CompiledRig } from '../physics';
import { unit3 } from '../physics';
import type { Gyro, Servo } from '../rig';
import { type GimbalGroup, gimbalGroups, gimbalInertia, wheelMomentum, workingSpeed } from './gimbalGroups';
import type { AxisArray } from './momentumPlanProblem';

/** Gimbals, or reaction wheels, that work about one body axis as one. */
export interface ArrayAxis {
  readonly axis: 'roll' | 'pitch';
  /** True for a stand-in of a steered array: its momentum is planned, and shared among the gimbals afterwards. */
  readonly isSteered: boolean;
  readonly array: AxisArray;
  /** Gyro and the sign with which it follows the planned tilt (or, for a reaction wheel, its momentum). */
  readonly followers: readonly { readonly gyro: number; readonly sign: number }[];
  /** Servo whose limits are planned with; undefined for a reaction wheel. */
  readonly servo: Servo | undefined;
}

export type ArrayAxes =
  | { readonly kind: 'axes'; readonly axes: readonly ArrayAxis[] }
  | { readonly kind: 'steered' }
  | { readonly kind: 'idle'; readonly sentence: string };

const SMALL = 1e-9;

/** The axis a group works about alone, its torque about the other level axis being nothing; undefined otherwise. */
function axisOf(group: GimbalGroup): 'roll' | 'pitch' | undefined {
  const size = Math.max(...group.sine.map(Math.abs), ...group.cosine.map(Math.abs));
  if (size < SMALL || group.members.some(({ ratio }) => Math.abs(Math.abs(ratio) - 1) > 1e-9))
    return undefined;
  const isNothing = (value: number | undefined) => Math.abs(value as number) < 1e-6 * size;
  const works = [0, 1].filter((k) => !isNothing(group.sine[k]));
  if (works.length !== 1 || !isNothing(group.cosine[0]) || !isNothing(group.cosine[1])) return undefined;
  return works[0] === 0 ? 'roll' : 'pitch';
}

/**
 * Sorts an array into a roll axis and a pitch axis that can be planned each as one momentum.
 *
 * @returns the axes (roll first), or why there are none: gimbals whose torques mix axes are `steered`, an
 *          array with nothing that moves is `idle`
 */
export function arrayAxes(compiled: CompiledRig): ArrayAxes {
  const { gyros } = compiled.rig.array;
  if (gyros.length === 0)
    return { kind: 'idle', sentence: 'The rig has no wheels yet: add a layout in Assemble.' };
  const groups = gimbalGroups(compiled);
  const reaction = reactionAxis(compiled);
  if (groups.length === 0) {
    return reaction
      ? { kind: 'axes', axes: [reaction] }
      : { kind: 'idle', sentence: 'Every gimbal is free or locked: nothing here can be planned.' };
  }
  const sorted = groups.map((group) => ({ group, axis: axisOf(group) }));
  if (sorted.some(({ axis }) => axis === undefined)) {
    return { kind: 'steered' };
  }
  const axes = (['roll', 'pitch'] as const).flatMap((axis) => {
    const found = joinGroups(
      compiled,
      axis,
      sorted.filter((entry) => entry.axis === axis).map((entry) => entry.group),
    );
    return found ? [found] : [];
  });
  return { kind: 'axes', axes: reaction ? [reaction, ...axes.filter(({ axis }) => axis !== 'roll')] : axes };
}

/** Groups about one axis worked as one: equal tilts, signs set so that their momenta add. */
function joinGroups(
  compiled: CompiledRig,
  axis: 'roll' | 'pitch',
  groups: readonly GimbalGroup[],
): ArrayAxis | undefined {
  const first = groups[0];
  if (!first) return undefined;
  const k = axis === 'roll' ? 0 : 1;
  const { gyros } = compiled.rig.array;
  let momentum = 0;
  let tiltMin = -Math.PI / 2 + 0.01;
  let tiltMax = Math.PI / 2 - 0.01;
  const followers: { gyro: number; sign: number }[] = [];
  for (const group of groups) {
    const sign = Math.sign(group.sine[k] as number);
    momentum += Math.abs(group.sine[k] as number);
    for (const { index, ratio } of group.members) {
      const { min, max } = (gyros[index] as Gyro).tilt;
      const way = sign * ratio;
      tiltMin = Math.max(tiltMin, way > 0 ? min : -max);
      tiltMax = Math.min(tiltMax, way > 0 ? max : -min);
      followers.push({ gyro: index, sign: way });
    }
  }
  const weakest = groups.reduce((a, b) => (workingSpeed(b.servo) < workingSpeed(a.servo) ? b : a));
  return {
    axis,
    isSteered: false,
    servo: weakest.servo,
    followers,
    array: {
      kind: 'gimballed',
      momentum,
      tiltMin,
      tiltMax,
      tiltRate: workingSpeed(weakest.servo),
      torque: Number.POSITIVE_INFINITY,
      servo: {
        torque: Math.min(...groups.map(({ servo }) => servo.stallTorque)),
        gimbalInertia: gimbalInertia(compiled, weakest.leader),
        wheelMomentum: Math.abs(wheelMomentum(compiled, weakest.leader)),
        gimbals: weakest.members.length,
      },
    },
  };
}

/** Reaction wheels along the roll axis, as one; undefined when there are none. */
function reactionAxis(compiled: CompiledRig): ArrayAxis | undefined {
  const { gyros } = compiled.rig.array;
  const { cells, cellVoltage } = compiled.rig.power;
  let momentum = 0;
  let torque = 0;
  const followers: { gyro: number; sign: number }[] = [];
  gyros.forEach((gyro, index) => {
    if (gyro.drive.kind !== 'locked' || gyro.spin.kind !== 'actuated') return;
    const along = unit3(gyro.spinAxis)[0];
    if (Math.abs(along) < 0.999) return;
    const topSpeed = gyro.motor.velocityConstant * cells * cellVoltage;
    momentum +=
      (compiled.wheels[index]?.spinInertia ?? 0) *
      Math.max(0, topSpeed - Math.abs(compiled.speeds[index] as number));
    torque += gyro.spin.torque;
    followers.push({ gyro: index, sign: Math.sign(along) });
  });
  if (followers.length === 0 || !(momentum > 0)) return undefined;
  return {
    axis: 'roll',
    isSteered: false,
    servo: undefined,
    followers,
    array: { kind: 'reaction', momentum, tiltMin: 0, tiltMax: 0, tiltRate: 0, torque, servo: null },
  };
}
