/** What one preview run holds, and how its gimbals are moved and read. */
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
  type StarModel,
  type StarWork,
  starDerivative,
} from '../physics';
import { type AxisSchedule, type GimbalGroup, gimbalGroups, type PlanSetting } from '../planning';
import type { Switches } from './evaluation';
import { MOVING_BASE, movingBaseCourse } from './movingBase';
import { PlanPlace } from './planPlace';
import { type PreviewLaw, previewLaw } from './previewLaw';

/** How the rig on the bench is taken to differ from the drawing. Usual for careful work, common practice. */
export interface Doubt {
  /** m, centre of mass to the left of where it is drawn. */
  readonly centreAcross: number;
  /** Wheel speed over the one asked for. */
  readonly wheelSpeed: number;
}

export const USUAL_DOUBT: Doubt = { centreAcross: 0.004, wheelSpeed: 0.97 };

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

/** Makes a run ready at time 0, gimbals where the law has them. */
export function prepareRun(
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

export function moveServos(run: PreviewRun, leanRate: number, dt: number): void {
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
export function readGimbals(run: PreviewRun, dt: number): void {
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

export function writeGimbals(run: PreviewRun): void {
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
export function findTorque(run: PreviewRun): void {
  noRate[0] = run.state[run.model.baseSpeedAt];
  arrayTorque(run.model.array, run.tilt, run.rate, run.momentum, noRate, run.torque);
  for (let i = 0; i < run.model.gimbals; i++) {
    if (run.motorSigns[i] !== 0) run.torque[0] -= run.motorSigns[i] * run.effort[run.model.gimbals + i];
  }
}
