/** What one run holds, and how its gimbals are moved and read. */
import {
  readCommand,
  resetServo,
  SERVO_INPUT,
  SERVO_STATE,
  SERVO_TARGET,
  sendCommand,
  stepServo,
} from '../control';
import {
  arrayTorque,
  createRk4Work,
  createStarWork,
  type Derivative,
  type Rk4Work,
  restState,
  STANDARD_GRAVITY,
  type StarModel,
  type StarWork,
  starDerivative,
} from '../physics';
import { type AxisSchedule, type PlanSetting, rollLeftOver } from '../planning';
import { type Build, builtFall } from './build';
import type { Switches } from './evaluation';
import { type FirmOutside, firmOutside } from './firmOutside';
import { MOVING_BASE, movingBaseCourse } from './movingBase';
import { PlanPlace } from './planPlace';
import { type PreviewLaw, previewLaw } from './previewLaw';
import {
  type Actuator,
  listJumps,
  type MotorLine,
  mountActuators,
  mountMotorLine,
  type RunChoice,
  type RunJump,
  rollStar,
} from './runMount';
import { createRunSteering, type RunSteering } from './runSteering';
import type { Sense } from './sensing';

/** Everything one run holds. */
export interface PreviewRun {
  readonly setting: PlanSetting;
  readonly build: Build;
  readonly sense: Sense;
  readonly law: PreviewLaw;
  readonly model: StarModel;
  readonly work: StarWork;
  readonly state: Float64Array;
  readonly effort: Float64Array;
  readonly derivative: Derivative;
  readonly rk4: Rk4Work;
  readonly actuators: readonly Actuator[];
  /** How servos share the law's command; undefined where each follows it with its sign. */
  readonly steering: RunSteering | undefined;
  /** Carries the torque of reaction wheels through the delay of the loop. */
  readonly motorLine: MotorLine;
  /** Signs of reaction wheels along the roll axis; 0 for any other gyro. */
  readonly motorSigns: Float64Array;
  /** n, N*m*s: each wheel's momentum as it turns. */
  readonly momentum: Float64Array;
  readonly startMomentum: Float64Array;
  /** kg*m^2 that a blow meets, about the line a leaning body turns about, as built. */
  readonly leanInertia: number;
  /** N*m per unit of sin(roll): weight raised above where a float's righting curve has it. */
  readonly heel: number;
  /** Base while the legs walk; undefined where nothing but the gimbals moves on the body. */
  readonly base: Float64Array | undefined;
  readonly baseNow: Float64Array;
  /** Firm: moment left over about the middle of the support, N*m at each node; empty for the rest. */
  readonly leftOver: Float64Array;
  readonly planted: Float64Array;
  readonly place: PlanPlace;
  /** Disturbances on feet, which the plan of a gait does not know; undefined for a body that leans. */
  readonly outside: FirmOutside | undefined;
  /** What hits the body at once, in order of time: N*m*s about the line it leans about. */
  readonly jumps: readonly RunJump[];
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
  choice: RunChoice,
): PreviewRun {
  const { compiled } = setting;
  const { build } = choice;
  const model = rollStar(compiled, build, !switches.isArrayOn);
  const state = restState(model);
  const n = model.gimbals;
  const momentum = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const speed = compiled.speeds[i] * build.wheelSpeed;
    state[model.wheelSpeedAt + i] = speed;
    momentum[i] = speed * (compiled.wheels[i]?.spinInertia ?? 0);
  }
  const roll = setting.axes.find(({ axis }) => axis === 'roll');
  const isReaction = roll?.array.kind === 'reaction';
  const signOf = (gyro: number): number =>
    roll?.followers.find((follower) => follower.gyro === gyro)?.sign ?? 0;
  const law = previewLaw(setting, schedules, switches, choice.controller);
  const steering = switches.isArrayOn
    ? createRunSteering(setting, switches.isPlanOn ? schedules : [])
    : undefined;
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const outside = setting.kind === 'firm' ? firmOutside(setting, choice.length) : undefined;
  const run: PreviewRun = {
    setting,
    build,
    sense: choice.sense,
    law,
    model,
    work,
    state,
    effort,
    derivative: (_time, at, out) => starDerivative(model, work, at, effort, out),
    rk4: createRk4Work(model.stateSize),
    steering,
    actuators: mountActuators(setting, model, law, choice, (gyro) => (isReaction ? 0 : signOf(gyro))),
    motorLine: mountMotorLine(compiled, choice.commandRate),
    motorSigns: Float64Array.from({ length: n }, (_, i) => (isReaction ? signOf(i) : 0)),
    momentum,
    startMomentum: momentum.slice(),
    leanInertia: setting.kind === 'lean' ? builtFall(setting, build).inertia : 0,
    heel: compiled.floating ? STANDARD_GRAVITY * compiled.whole.mass * build.centreUp : 0,
    base: setting.kind === 'firm' ? movingBaseCourse(compiled.rig, setting.course) : undefined,
    baseNow: new Float64Array(MOVING_BASE),
    leftOver: setting.kind === 'firm' ? rollLeftOver(setting.demand) : new Float64Array(0),
    planted: new Float64Array(9),
    place: new PlanPlace(setting),
    outside,
    jumps: listJumps(setting, outside, choice),
    tilt: new Float64Array(n),
    rate: new Float64Array(n),
    torque: new Float64Array(3),
    meanTorque: new Float64Array(3),
    side: 0,
    edge: 0,
  };
  if (steering) startSteered(run, steering);
  readGimbals(run, 0);
  writeGimbals(run);
  findTorque(run);
  run.meanTorque.set(run.torque);
  return run;
}

/** Puts servos that share a command where the law begins. */
function startSteered(run: PreviewRun, steering: RunSteering): void {
  run.place.moveTo(0);
  const tilts = steering.tiltsFor(run.law.startTilt, run.place);
  run.actuators.forEach(({ work }, i) => {
    resetServo(work, tilts[i]);
  });
}

/** Sends the law's commands; they are in force `late` seconds on, servo delay apart. */
export function sendCommands(run: PreviewRun, late: number): void {
  const steered = run.steering?.tiltsFor(run.law.command(), run.place);
  for (let i = 0; i < run.actuators.length; i++) {
    const { sign, servo, work } = run.actuators[i];
    sendCommand(servo, work, steered ? steered[i] : sign * run.law.command(), late);
  }
  sendCommand(run.motorLine.servo, run.motorLine.work, run.law.bodyTorque(), late);
}

export function moveServos(run: PreviewRun, leanRate: number, dt: number): void {
  for (const { group, servo, work } of run.actuators) {
    const tilt = work.state[SERVO_STATE.tilt];
    // The roll rate turns the wheels; the group's servo feels the change of its roll momentum with tilt.
    const slope = group.sine[0] * Math.cos(tilt) - group.cosine[0] * Math.sin(tilt);
    stepServo(servo, work, run.build.wheelSpeed * slope * leanRate, dt);
  }
}

/** Torques on reaction wheels over the coming step: what the loop asked, unless a wheel runs at its motor's top speed. */
export function driveWheels(run: PreviewRun, dt: number): void {
  const { model, state, effort, motorLine, setting } = run;
  const { rig } = setting.compiled;
  const s = motorLine.work.state;
  s[SERVO_INPUT.dt] = dt;
  readCommand(motorLine.servo, motorLine.work);
  s[SERVO_STATE.time] += dt;
  const asked = s[SERVO_TARGET];
  const wheels = run.motorSigns.reduce((sum, sign) => sum + Math.abs(sign), 0);
  for (let i = 0; i < model.gimbals; i++) {
    const motor = rig.array.gyros[i]?.motor;
    const torque = wheels > 0 ? (-run.motorSigns[i] * asked) / wheels : 0;
    const top = (motor?.velocityConstant ?? 0) * rig.power.cells * rig.power.cellVoltage;
    const speed = state[model.wheelSpeedAt + i];
    effort[model.gimbals + i] = Math.abs(speed) >= top && torque * speed > 0 ? 0 : torque;
  }
}

/** N*m*s about roll that reaction wheels have taken up since the start. */
export function gainedMomentum(run: PreviewRun): number {
  let sum = 0;
  for (let i = 0; i < run.motorSigns.length; i++) {
    if (run.motorSigns[i] !== 0) sum += run.motorSigns[i] * (run.momentum[i] - run.startMomentum[i]);
  }
  return sum;
}

/**
 * Tilts of every gimbal from its servo, and what the star is to take over the step: a start rate and an acceleration
 * that end at just those tilts. Servos with play jump in rate within a step, so rates come from the change of tilt:
 * only so does the body get all the momentum that the array gives up, and no more.
 */
export function readGimbals(run: PreviewRun, dt: number): void {
  for (const { group, work } of run.actuators) {
    const tilt = work.state[SERVO_STATE.tilt];
    for (const { index, ratio } of group.members) {
      if (dt > 0) {
        const rate = (ratio * tilt - run.tilt[index]) / dt;
        run.effort[index] = (rate - run.rate[index]) / dt;
        run.state[run.model.rateAt + index] = 0.5 * (rate + run.rate[index]);
        run.rate[index] = rate;
      }
      run.tilt[index] = ratio * tilt;
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
