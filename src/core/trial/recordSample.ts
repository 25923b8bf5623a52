import { arrayMomentum } from '../physics';
import { type AxisSchedule, type FirmPlanSetting, type LeanPlanSetting, pivotHeight } from '../planning';
import type { Motion } from './motion';
import type { PreviewRun } from './previewRun';

const momentumNow = new Float64Array(3);

/** Writes one sample of a preview run into its motion. O(gyros + legs). */
export function recordSample(
  run: PreviewRun,
  schedules: readonly AxisSchedule[],
  motion: Motion,
  sample: number,
): void {
  const { model, state, setting, place } = run;
  const time = motion.time[sample];
  place.moveTo(time);
  const n = model.gimbals;
  for (let i = 0; i < n; i++) {
    motion.tilt[sample * n + i] = state[model.tiltAt + i];
    motion.tiltRate[sample * n + i] = state[model.rateAt + i];
  }
  writePlannedTilt(run, schedules, motion, sample);
  arrayMomentum(model.array, run.tilt, run.momentum, momentumNow);
  for (let axis = 0; axis < 3; axis++) {
    motion.momentum[3 * sample + axis] = momentumNow[axis];
    motion.torque[3 * sample + axis] = run.meanTorque[axis];
  }
  if (setting.kind === 'firm') recordWalk(run, setting, motion, sample);
  else recordLean(run, setting, motion, sample);
}

function recordWalk(run: PreviewRun, setting: FirmPlanSetting, motion: Motion, sample: number): void {
  const { place } = run;
  const { gait, demand, course } = setting;
  const turn: Turn = {
    angle: run.state[0],
    y: run.side === 0 ? 0 : run.edge,
    z: 0,
    forward: gait.velocity[0] * motion.time[sample],
  };
  motion.demand[sample] = place.heldValueOf(run.leftOver);
  const along = (values: Float64Array, axis: number): number => place.valueOf(values, 3, axis);
  writePose(motion, sample, turn, along(course.body, 0), along(course.body, 1), along(course.body, 2));
  const centre = demand.centreOfMass;
  writeTurned(motion.centreOfMass, 3 * sample, turn, along(centre, 0), along(centre, 1), along(centre, 2));
  recordFeet(run, motion, sample, turn);
  const pressure = -(place.valueOf(demand.roll) + run.meanTorque[0]) / place.valueOf(demand.verticalForce);
  motion.centreOfPressure[2 * sample] = turn.forward + place.valueOf(demand.bareAlong);
  motion.centreOfPressure[2 * sample + 1] = run.side === 0 ? pressure : run.edge;
}

function recordLean(run: PreviewRun, setting: LeanPlanSetting, motion: Motion, sample: number): void {
  const { place } = run;
  const { whole, rig, floating } = setting.compiled;
  const { footing } = rig;
  const turn: Turn = {
    angle: run.state[0],
    y: footing.kind === 'edge' ? footing.offset : footing.kind === 'point' ? footing.position[1] : 0,
    z: pivotHeight(setting.compiled),
    forward: 0,
  };
  motion.demand[sample] = -place.valueOf(setting.outside);
  writePose(motion, sample, turn, 0, 0, 0);
  writeTurned(motion.centreOfMass, 3 * sample, turn, whole.com[0], whole.com[1], whole.com[2]);
  recordFeet(run, motion, sample, turn);
  if (footing.kind === 'rocker') rollAlong(motion, sample, footing.radius, turn.angle);
  if (!setting.waves) return;
  motion.water[sample] = place.valueOf(setting.waves.level) + (floating?.flotation.waterline ?? 0);
  motion.waterSlope[sample] = place.valueOf(setting.waves.slope);
}

function recordFeet(run: PreviewRun, motion: Motion, sample: number, turn: Turn): void {
  const { place } = run;
  const { course } = run.setting;
  const stride = 3 * motion.legs;
  for (let leg = 0; leg < motion.legs; leg++) {
    const at = sample * motion.legs + leg;
    const coordinate = (axis: number): number => place.valueOf(course.feet, stride, 3 * leg + axis);
    writeTurned(motion.feet, 3 * at, turn, coordinate(0), coordinate(1), coordinate(2));
    motion.isFootDown[at] = place.heldValueOf(course.isFootDown, motion.legs, leg);
  }
}

/** A round bottom that rolls without slipping: turned about the contact of old, it is moved to its centre's path. */
function rollAlong(motion: Motion, sample: number, radius: number, angle: number): void {
  const across = radius * (Math.sin(angle) - angle);
  const up = radius * (1 - Math.cos(angle));
  const shift = (column: Float64Array, stride: number): void => {
    column[stride * sample + 1] += across;
    column[stride * sample + 2] += up;
  };
  shift(motion.pose, 7);
  shift(motion.centreOfMass, 3);
}

function writePlannedTilt(
  run: PreviewRun,
  schedules: readonly AxisSchedule[],
  motion: Motion,
  sample: number,
): void {
  const { setting, model } = run;
  const n = model.gimbals;
  const shared = run.steering?.planned;
  if (shared) {
    run.place.moveTo(motion.time[sample]);
    for (let i = 0; i < n; i++) motion.plannedTilt[sample * n + i] = run.place.valueOf(shared, n, i);
    return;
  }
  setting.axes.forEach((axis, a) => {
    const schedule = schedules[a];
    if (!schedule || axis.array.kind !== 'gimballed') return;
    const last = schedule.tilt.length - 1;
    const at = motion.time[sample] / setting.problem.step;
    const within = setting.course.isCyclic ? at % last : Math.min(at, last);
    const k = Math.min(last - 1, Math.floor(within));
    const tilt = schedule.tilt[k] + (within - k) * (schedule.tilt[k + 1] - schedule.tilt[k]);
    for (const { gyro, sign } of axis.followers) motion.plannedTilt[sample * n + gyro] = sign * tilt;
  });
}

/** A roll by an angle about a line that runs forward through y, z, and the way walked so far. */
interface Turn {
  readonly angle: number;
  readonly y: number;
  readonly z: number;
  readonly forward: number;
}

function writeTurned(out: Float64Array, at: number, turn: Turn, x: number, y: number, z: number): void {
  const c = Math.cos(turn.angle);
  const s = Math.sin(turn.angle);
  out[at] = x + turn.forward;
  out[at + 1] = turn.y + c * (y - turn.y) - s * (z - turn.z);
  out[at + 2] = turn.z + s * (y - turn.y) + c * (z - turn.z);
}

function writePose(motion: Motion, sample: number, turn: Turn, x: number, y: number, z: number): void {
  const at = 7 * sample;
  writeTurned(motion.pose, at, turn, x, y, z);
  motion.pose[at + 3] = Math.cos(turn.angle / 2);
  motion.pose[at + 4] = Math.sin(turn.angle / 2);
}
