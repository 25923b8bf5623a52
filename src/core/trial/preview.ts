/**
 * The closed loop as it is shown while the rig is being built: exact roll dynamics of the star, the planned
 * tilt sent to the servos, feedback on the lean, and a rig that differs a little from the drawing. Sensors are
 * taken as perfect here; noise, drift and jitter belong to the trial proper.
 *
 * Feet flat on the ground do not turn: the centre of pressure takes up what the array leaves. Once it would
 * pass an edge of the support the body tips about that edge, as an edge-footed star whose line moves with the
 * gait, until it comes back flat and lands without a bounce.
 */
import {
  createServoWork,
  mountServo,
  resetServo,
  SERVO_STATE,
  type ServoModel,
  type ServoWork,
  sendCommand,
  stepServo,
} from '../control';
import {
  arrayTorque,
  compileStar,
  createRk4Work,
  createStarWork,
  type Derivative,
  type Rk4Work,
  restState,
  STANDARD_GRAVITY,
  type StarModel,
  type StarWork,
  setMovingBase,
  setPlanted,
  starDerivative,
  stepRk4,
} from '../physics';
import { type AxisSchedule, extentOf, type GimbalGroup, gimbalGroups, type PlanSetting } from '../planning';
import type { Switches } from './evaluation';
import type { Motion } from './motion';
import { createMotion } from './motionRecorder';
import { MOVING_BASE, movingBaseCourse } from './movingBase';
import { PlanPlace } from './planPlace';
import { type PreviewLaw, previewLaw } from './previewLaw';
import { recordSample } from './recordSample';

/** How the rig on the bench is taken to differ from the drawing. Usual for careful work, common practice. */
export interface Doubt {
  /** m, centre of mass to the left of where it is drawn. */
  readonly centreAcross: number;
  /** Wheel speed over the one asked for. */
  readonly wheelSpeed: number;
}

export const USUAL_DOUBT: Doubt = { centreAcross: 0.004, wheelSpeed: 0.97 };

/** Lean past which the motion is stopped where it is, rad. */
const GONE = 1.2;
/** Lean counted as going over, rad: feet no longer where the gait wants them, or water over the side. */
const LOST: Readonly<Record<PlanSetting['kind'], number>> = { firm: 0.3, lean: 0.9 };
const LONGEST_STEP = 0.005;
const SAMPLES_PER_SECOND = 100;

export interface PreviewResult {
  readonly motion: Motion;
  readonly outcome: { readonly kind: 'holds' } | { readonly kind: 'falls'; readonly at: number };
}

interface Actuator {
  readonly group: GimbalGroup;
  /** Sign with which the group's leader follows the planned tilt; 0 for a group that does not work in roll. */
  readonly sign: number;
  readonly servo: ServoModel;
  readonly work: ServoWork;
}

/** Everything one preview run holds. */
export interface PreviewRun {
  readonly setting: PlanSetting;
  readonly doubt: Doubt;
  readonly law: PreviewLaw;
  readonly model: StarModel;
  readonly work: StarWork;
  readonly state: Float64Array;
  readonly effort: Float64Array;
  readonly derivative: Derivative;
  readonly rk4: Rk4Work;
  readonly actuators: readonly Actuator[];
  /** Signs of reaction wheels along the roll axis; 0 for any other gyro. */
  readonly motorSigns: Float64Array;
  /** n, N*m*s: each wheel's momentum as it turns. */
  readonly momentum: Float64Array;
  /** Base while the legs walk; undefined where nothing but the gimbals moves on the body. */
  readonly base: Float64Array | undefined;
  readonly baseNow: Float64Array;
  readonly planted: Float64Array;
  readonly place: PlanPlace;
  readonly tilt: Float64Array;
  readonly rate: Float64Array;
  /** 3, N*m, body frame: now, and the mean since the last sample (servos move in frames, so one instant misleads). */
  readonly torque: Float64Array;
  readonly meanTorque: Float64Array;
  /** Firm: +1 tipped to the right, about a right edge (positive roll), -1 to the left, 0 flat. */
  side: -1 | 0 | 1;
  /** m, edge it pivots on, to the left in the walking frame. */
  edge: number;
}

const noRate = new Float64Array(3);

/**
 * Runs a preview.
 *
 * @param setting    what was planned, or would have been
 * @param schedules  the plan's axes; empty when there is none
 * @param seconds    length; a gait is run for the nearest whole number of cycles
 */
export function runPreview(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
  seconds: number,
  doubt: Doubt = USUAL_DOUBT,
): PreviewResult {
  const { gait, course, compiled } = setting;
  const length = course.isCyclic ? Math.max(1, Math.round(seconds / gait.period)) * gait.period : seconds;
  const intervals = Math.max(2, Math.round(length * SAMPLES_PER_SECOND));
  const longest = Math.min(LONGEST_STEP, 1 / compiled.rig.sensing.loopRate);
  const perSample = Math.max(1, Math.ceil(length / intervals / longest - 1e-9));
  const dt = length / intervals / perSample;
  const run = prepareRun(setting, schedules, switches, doubt, 1 / dt);
  const motion = createMotion(setting, intervals + 1, length / intervals);
  let fallenAt: number | undefined;
  for (let sample = 0; sample <= intervals; sample++) {
    recordSample(run, schedules, motion, sample);
    if (sample === intervals) break;
    run.meanTorque.fill(0);
    for (let k = 0; k < perSample; k++) {
      const time = (sample * perSample + k) * dt;
      if (Math.abs(run.state[0]) < GONE) stepRun(run, time, dt);
      for (let axis = 0; axis < 3; axis++) run.meanTorque[axis] += run.torque[axis] / perSample;
      if (fallenAt === undefined && Math.abs(run.state[0]) > LOST[setting.kind]) fallenAt = time;
    }
  }
  return { motion, outcome: fallenAt === undefined ? { kind: 'holds' } : { kind: 'falls', at: fallenAt } };
}

function prepareRun(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  switches: Switches,
  doubt: Doubt,
  commandRate: number,
): PreviewRun {
  const { compiled } = setting;
  const { rig } = compiled;
  // Roll alone is previewed: feet tip, and a point pivots, about a line that runs forward.
  const { footing } = rig;
  const model =
    footing.kind === 'firm' || footing.kind === 'point'
      ? compileStar({
          ...compiled.star,
          footing: {
            kind: 'edge',
            point: footing.kind === 'point' ? footing.position : [0, 0, 0],
            axis: [1, 0, 0],
          },
        })
      : compiled.model;
  const state = restState(model);
  const n = model.gimbals;
  const momentum = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const speed = compiled.speeds[i] * doubt.wheelSpeed;
    state[model.wheelSpeedAt + i] = speed;
    momentum[i] = speed * (compiled.wheels[i]?.spinInertia ?? 0);
  }
  const roll = setting.axes.find(({ axis }) => axis === 'roll');
  const signOf = (gyro: number): number =>
    roll?.followers.find((follower) => follower.gyro === gyro)?.sign ?? 0;
  const isReaction = roll?.array.kind === 'reaction';
  const law = previewLaw(setting, schedules, switches);
  const actuators = gimbalGroups(compiled).map((group): Actuator => {
    const { min, max } = rig.array.gyros[group.leader]?.tilt ?? { min: 0, max: 0 };
    const inertia = group.members.reduce((sum, { index }) => sum + model.hingeInertia[index], 0);
    const servo = mountServo(group.servo, { gimbalInertia: inertia, tiltMin: min, tiltMax: max });
    const work = createServoWork(servo, commandRate, rig.sensing.loopDelay);
    const sign = isReaction ? 0 : signOf(group.leader);
    resetServo(work, sign * law.startTilt);
    return { group, sign, servo, work };
  });
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const run: PreviewRun = {
    setting,
    doubt,
    law,
    model,
    work,
    state,
    effort,
    derivative: (_time, at, out) => starDerivative(model, work, at, effort, out),
    rk4: createRk4Work(model.stateSize),
    actuators,
    motorSigns: Float64Array.from({ length: n }, (_, i) => (isReaction ? signOf(i) : 0)),
    momentum,
    base: setting.kind === 'firm' ? movingBaseCourse(rig, setting.course) : undefined,
    baseNow: new Float64Array(MOVING_BASE),
    planted: new Float64Array(9),
    place: new PlanPlace(setting),
    tilt: new Float64Array(n),
    rate: new Float64Array(n),
    torque: new Float64Array(3),
    meanTorque: new Float64Array(3),
    side: 0,
    edge: 0,
  };
  readGimbals(run, 0);
  writeGimbals(run);
  findTorque(run);
  run.meanTorque.set(run.torque);
  return run;
}

function stepRun(run: PreviewRun, time: number, dt: number): void {
  run.place.moveTo(time);
  const { model, state, effort, law } = run;
  const n = model.gimbals;
  const isFlat = run.setting.kind === 'firm' && run.side === 0;
  const leanRate = state[model.baseSpeedAt];
  law.tick(time, state[0], leanRate, isFlat, dt);
  effort.fill(0);
  if (law.isArrayOn) moveServos(run, leanRate, dt);
  readGimbals(run, dt);
  for (let i = 0; i < n; i++) effort[n + i] = -run.motorSigns[i] * law.bodyTorque();
  if (run.setting.kind === 'firm') stepFirm(run, run.setting, time, dt);
  else stepLeaning(run, run.setting, time, dt);
  writeGimbals(run);
  findTorque(run);
}

function moveServos(run: PreviewRun, leanRate: number, dt: number): void {
  const { loopDelay } = run.setting.compiled.rig.sensing;
  for (const { group, sign, servo, work } of run.actuators) {
    const tilt = work.state[SERVO_STATE.tilt];
    sendCommand(servo, work, sign * run.law.command(), loopDelay);
    // The roll rate turns the wheels; the group's servo feels the change of its roll momentum with tilt.
    const slope = group.sine[0] * Math.cos(tilt) - group.cosine[0] * Math.sin(tilt);
    stepServo(servo, work, run.doubt.wheelSpeed * slope * leanRate, dt);
  }
}

/** Tilts and rates of every gimbal from its servo, and the tilt accelerations that the star is to take. */
function readGimbals(run: PreviewRun, dt: number): void {
  for (const { group, work } of run.actuators) {
    const tilt = work.state[SERVO_STATE.tilt];
    const rate = work.state[SERVO_STATE.rate];
    for (const { index, ratio } of group.members) {
      if (dt > 0) run.effort[index] = (ratio * rate - run.rate[index]) / dt;
      run.tilt[index] = ratio * tilt;
      run.rate[index] = ratio * rate;
    }
  }
}

function writeGimbals(run: PreviewRun): void {
  const { model, state } = run;
  for (const { group } of run.actuators) {
    for (const { index } of group.members) {
      state[model.tiltAt + index] = run.tilt[index];
      state[model.rateAt + index] = run.rate[index];
    }
  }
  for (let i = 0; i < model.gimbals; i++) {
    run.tilt[i] = state[model.tiltAt + i];
    run.rate[i] = state[model.rateAt + i];
    if (run.motorSigns[i] !== 0) {
      run.momentum[i] = state[model.wheelSpeedAt + i] * (run.setting.compiled.wheels[i]?.spinInertia ?? 0);
    }
  }
}

/** Torque of the array on the body now, by the array law; motors of reaction wheels included. */
function findTorque(run: PreviewRun): void {
  noRate[0] = run.state[run.model.baseSpeedAt];
  arrayTorque(run.model.array, run.tilt, run.rate, run.momentum, noRate, run.torque);
  for (let i = 0; i < run.model.gimbals; i++) {
    if (run.motorSigns[i] !== 0) run.torque[0] -= run.motorSigns[i] * run.effort[run.model.gimbals + i];
  }
}

/** Any footing that leans freely: disturbances, and weight that the footing's own law does not know of. */
function stepLeaning(
  run: PreviewRun,
  setting: Extract<PlanSetting, { kind: 'lean' }>,
  time: number,
  dt: number,
): void {
  const { compiled, disturbances } = setting;
  const { model, state, effort, doubt, place } = run;
  const weight = compiled.whole.mass * STANDARD_GRAVITY;
  const cos = Math.cos(state[0]);
  const trim = compiled.floating?.trimMoment ?? 0;
  const outside = place.valueOf(setting.outside) - (trim + weight * doubt.centreAcross) * cos;
  effort[2 * model.gimbals] += outside;
  for (const jump of disturbances.jumps) {
    if (jump.time >= time && jump.time < time + dt) state[model.baseSpeedAt] += jump.roll / setting.inertia;
  }
  stepRk4(run.derivative, time, state, dt, run.rk4);
}

/** Feet on the ground: flat, or tipping about an edge of the support that the gait moves along. */
function stepFirm(
  run: PreviewRun,
  setting: Extract<PlanSetting, { kind: 'firm' }>,
  time: number,
  dt: number,
): void {
  const { demand, compiled } = setting;
  const { place, doubt, state, model } = run;
  if (run.side === 0) {
    const force = place.valueOf(demand.verticalForce);
    const weight = compiled.whole.mass * STANDARD_GRAVITY;
    const moment = place.valueOf(demand.roll) - weight * doubt.centreAcross + run.torque[0];
    const pressure = -moment / force;
    const [right, left] = supportAt(setting, time);
    if (pressure >= right && pressure <= left) {
      for (let i = 0; i < model.gimbals; i++) {
        if (run.motorSigns[i] === 0) continue;
        const inertia = compiled.wheels[i]?.spinInertia ?? 1;
        state[model.wheelSpeedAt + i] += (run.effort[model.gimbals + i] / inertia) * dt;
      }
      return;
    }
    run.side = pressure < right ? 1 : -1;
    run.edge = run.side > 0 ? right : left;
  }
  moveEdge(run, setting, time);
  placeWalkingBody(run, setting);
  stepRk4(run.derivative, time, state, dt, run.rk4);
  if (run.side * state[0] <= 0) {
    state[0] = 0;
    state[model.baseSpeedAt] = 0;
    run.side = 0;
  }
}

/** Right and left edge of the ground under the feet now, m, walking frame, no margin kept. */
function supportAt(setting: Extract<PlanSetting, { kind: 'firm' }>, time: number): readonly [number, number] {
  const { demand, course, problem } = setting;
  const at = Math.floor(time / problem.step + 1e-9);
  const node = course.isCyclic ? at % demand.nodes : Math.min(demand.nodes - 1, at);
  const polygon = demand.support[node];
  return (polygon ? extentOf(polygon, 1) : undefined) ?? [0, 0];
}

/**
 * Moves the pivot to the support's edge of now. When a foot comes down further out, the turning about the old
 * edge becomes turning about the new one with its angular momentum kept, as when a wheel meets a kerb.
 */
function moveEdge(run: PreviewRun, setting: Extract<PlanSetting, { kind: 'firm' }>, time: number): void {
  const [right, left] = supportAt(setting, time);
  const edge = run.side > 0 ? right : left;
  if (Math.abs(edge - run.edge) < 1e-6) return;
  const { whole } = setting.compiled;
  const y = run.place.valueOf(setting.demand.centreOfMass, 3, 1);
  const z = run.place.valueOf(setting.demand.centreOfMass, 3, 2);
  const own = whole.inertia[0];
  const kept = own + whole.mass * ((y - run.edge) * (y - edge) + z * z);
  const about = own + whole.mass * ((y - edge) ** 2 + z * z);
  run.state[run.model.baseSpeedAt] *= kept / about;
  run.edge = edge;
}

/** Gives the star the base as its legs stand now and the pivot as the body moves over it. */
function placeWalkingBody(run: PreviewRun, setting: Extract<PlanSetting, { kind: 'firm' }>): void {
  const { place, baseNow, planted, doubt } = run;
  const { course, compiled } = setting;
  if (run.base) for (let j = 0; j < MOVING_BASE; j++) baseNow[j] = place.valueOf(run.base, MOVING_BASE, j);
  baseNow[2] += compiled.whole.mass * doubt.centreAcross;
  setMovingBase(run.model, run.work, baseNow);
  planted.fill(0);
  planted[1] = run.edge - place.valueOf(course.body, 3, 1);
  planted[2] = -place.valueOf(course.body, 3, 2);
  planted[4] = -place.valueOf(course.bodyVelocity, 3, 1);
  planted[7] = -place.valueOf(course.bodyAcceleration, 3, 1);
  setPlanted(run.work, planted);
}
