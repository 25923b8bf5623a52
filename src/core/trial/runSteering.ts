/** How a run's law for roll, and the plan's pitch, become the tilt of every servo where one sign for each will not do. */
import {
  type AxisSchedule,
  createSteeringWork,
  gimbalCourses,
  gimbalGroups,
  type PlanSetting,
  type SteeredArray,
  steerTo,
} from '../planning';
import type { PlanPlace } from './planPlace';

export interface RunSteering {
  /** Tilts to command when the law says `command` for roll, rad, one for each servo; kept and reused. */
  readonly tiltsFor: (command: number, place: PlanPlace) => Float64Array;
  /** (N + 1) x gyros, rad: every gimbal's tilt as planned; undefined without a plan. */
  readonly planned: Float64Array | undefined;
}

/**
 * The steering of a run: a steered array's, or that of pitch gimbals beside those of roll; undefined for an array
 * that works in roll alone.
 *
 * @param schedules  the plan's axes; empty when there is none, or it is switched off
 */
export function createRunSteering(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
): RunSteering | undefined {
  const { steered, axes } = setting;
  const roll = axes.find(({ axis }) => axis === 'roll');
  const pitchAt = axes.findIndex(({ axis }) => axis === 'pitch');
  if (!roll || (!steered && pitchAt < 0)) return undefined;
  const planned = schedules.length > 0 ? gimbalCourses(setting, schedules).tilt : undefined;
  const pitch = schedules[pitchAt];
  if (steered) return { planned, tiltsFor: steerBy(steered, roll.array.momentum, pitch?.momentum) };
  return { planned, tiltsFor: followBoth(setting, pitch?.tilt) };
}

/** Passes of the steering law at each tick of the loop, from the tilts of the tick before. */
const PASSES = 2;

function steerBy(
  array: SteeredArray,
  momentum: number,
  pitch: Float64Array | undefined,
): RunSteering['tiltsFor'] {
  const work = createSteeringWork(array);
  const wanted = new Float64Array(3);
  const tilt = new Float64Array(array.count);
  let isUnderWay = false;
  return (command, place) => {
    wanted[0] = momentum * Math.sin(command);
    wanted[1] = pitch ? place.valueOf(pitch) : 0;
    if (isUnderWay) steerTo(array, work, wanted, tilt, PASSES);
    else steerTo(array, work, wanted, tilt);
    isUnderWay = true;
    for (let i = 0; i < array.count; i++) {
      tilt[i] = Math.min(array.tiltMax[i], Math.max(array.tiltMin[i], tilt[i]));
    }
    return tilt;
  };
}

/** Each servo follows the axis it works about: roll as the law says, pitch as planned. */
function followBoth(setting: PlanSetting, pitchTilt: Float64Array | undefined): RunSteering['tiltsFor'] {
  const groups = gimbalGroups(setting.compiled);
  const signs = (name: 'roll' | 'pitch'): readonly number[] => {
    const axis = setting.axes.find(({ axis: its }) => its === name);
    return groups.map(({ leader }) => axis?.followers.find(({ gyro }) => gyro === leader)?.sign ?? 0);
  };
  const isRollGimballed = setting.axes.some(
    ({ axis, array }) => axis === 'roll' && array.kind === 'gimballed',
  );
  const roll = signs('roll');
  const pitch = signs('pitch');
  const tilt = new Float64Array(groups.length);
  return (command, place) => {
    const ofPitch = pitchTilt ? place.valueOf(pitchTilt) : 0;
    for (let i = 0; i < tilt.length; i++) {
      tilt[i] = (isRollGimballed ? roll[i] * command : 0) + pitch[i] * ofPitch;
    }
    return tilt;
  };
}
