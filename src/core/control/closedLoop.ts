import {
  type Controller,
  type ControllerWork,
  createControllerWork,
  resetController,
  stepController,
} from './controllers';
import {
  createEstimatorWork,
  ESTIMATE,
  type EstimatorModel,
  type EstimatorWork,
  resetEstimator,
  stepEstimator,
} from './estimators';
import { createRandom, drawUniform, type RandomState, seedRandom } from './randomness';
import {
  type ActuatorWork,
  advanceActuator,
  BODY,
  createActuatorWork,
  type RollActuator,
  resetActuator,
} from './rollActuators';
import {
  createSensorWork,
  READING,
  readSensors,
  resetSensor,
  type SensorModel,
  type SensorWork,
} from './sensorModel';
import { sendCommand } from './servoModel';

/** The body about its roll line, nonlinear. */
export interface RollBody {
  /** kg*m^2 */
  readonly inertia: number;
  /** N*m/rad at upright; the moment is stiffness * sin(roll) unless a curve is given. Positive topples */
  readonly stiffness: number;
  /** N*m at evenly spaced rolls from -curveReach to +curveReach, instead of the sine */
  readonly curve?: Float64Array;
  /** rad */
  readonly curveReach?: number;
  /** N*m*s/rad */
  readonly damping: number;
  /** N*m*s^2/rad^2 */
  readonly quadraticDamping: number;
  /** rad, beyond which the body counts as fallen and the run ends */
  readonly fallenAt: number;
}

/** Moments from outside about the roll line. */
export interface RollDisturbance {
  /** s between samples of `moment`, linear between them, zero outside (or again from the start) */
  readonly step: number;
  readonly isCyclic: boolean;
  /** N*m */
  readonly moment: Float64Array;
  /** pairs of time (s) and angular impulse (N*m*s), in order of time */
  readonly shoves: Float64Array;
}

export const NO_DISTURBANCE: RollDisturbance = {
  step: 1,
  isCyclic: false,
  moment: new Float64Array(0),
  shoves: new Float64Array(0),
};

export interface RollLoopModel {
  readonly body: RollBody;
  readonly actuator: RollActuator;
  readonly sensor: SensorModel;
  readonly estimator: EstimatorModel;
  readonly controller: Controller;
  /** s from taking a sample to sending the command */
  readonly loopDelay: number;
  /** s, the send time varies evenly by this much either way */
  readonly loopJitter: number;
  readonly tiltMin: number;
  readonly tiltMax: number;
  /** plant steps for each tick of the loop */
  readonly substeps: number;
}

/** Columns of a record, in order. */
export const RECORD = {
  time: 0,
  roll: 1,
  rollRate: 2,
  estimate: 3,
  command: 4,
  tilt: 5,
  tiltRate: 6,
  servoTorque: 7,
  yawMomentum: 8,
} as const;

const RECORD_WIDTH = 9;

export interface RollRecord {
  /** rows x 9, see RECORD */
  readonly rows: Float64Array;
  /** ticks between rows */
  readonly every: number;
}

export const createRollRecord = (rows: number, every: number): RollRecord => ({
  rows: new Float64Array(rows * RECORD_WIDTH).fill(Number.NaN),
  every,
});

/** What a run came to. */
export interface RollOutcome {
  hasFallen: boolean;
  /** s simulated */
  duration: number;
  /** rad */
  peakRoll: number;
  /** rad, root mean square */
  meanRoll: number;
  /** rad */
  peakTilt: number;
  /** N*m, root mean square over the hardest-worked servo (or reaction wheel motor) */
  meanTorque: number;
  peakTorque: number;
  /** s that servos spent at the end of their speed-torque line or current limit */
  saturatedTime: number;
  /** N*m*s, largest departure of the array's yaw momentum from that at rest */
  peakYawMomentum: number;
  /** rad, at the end */
  finalRoll: number;
  finalTilt: number;
  rows: number;
}

export interface RollLoopWork {
  /** see BODY */
  readonly body: Float64Array;
  readonly actuator: ActuatorWork;
  readonly sensor: SensorWork;
  readonly estimator: EstimatorWork;
  readonly controller: ControllerWork;
  readonly jitter: RandomState;
  readonly outcome: RollOutcome;
}

/** The only allocation; the work space serves any number of runs of this model, or of one of the same shape. */
export function createRollLoopWork(model: RollLoopModel): RollLoopWork {
  return {
    body: new Float64Array(2),
    actuator: createActuatorWork(
      model.actuator,
      1 / model.sensor.sampleTime,
      model.loopDelay + model.loopJitter,
    ),
    sensor: createSensorWork(model.sensor, createRandom(0)),
    estimator: createEstimatorWork(model.estimator),
    controller: createControllerWork(),
    jitter: createRandom(0),
    outcome: {
      hasFallen: false,
      duration: 0,
      peakRoll: 0,
      meanRoll: 0,
      peakTilt: 0,
      meanTorque: 0,
      peakTorque: 0,
      saturatedTime: 0,
      peakYawMomentum: 0,
      finalRoll: 0,
      finalTilt: 0,
      rows: 0,
    },
  };
}

export interface RollRunStart {
  readonly roll: number;
  readonly rollRate: number;
  readonly tilt: number;
  /** rad, first estimate less true roll */
  readonly estimateError: number;
  readonly duration: number;
  readonly seed: number;
  readonly run: number;
}

/**
 * Runs the closed loop: nonlinear body and gimbals, servos, sensors, estimator and controller, ticking at the
 * loop rate with `substeps` plant steps between ticks.
 *
 * @param record rows are written as far as they fit; undefined for none
 * @returns work.outcome, overwritten by the next run
 *
 * The array's exchange of momentum with the body is exact in every step, whatever the servo does. Allocates
 * nothing. About 0.3 microseconds for each plant step of one servo.
 */
export function runRollLoop(
  model: RollLoopModel,
  work: RollLoopWork,
  disturbance: RollDisturbance,
  start: RollRunStart,
  record: RollRecord | undefined,
): RollOutcome {
  begin(model, work, start);
  const b = work.body;
  const out = work.outcome;
  const tick = model.sensor.sampleTime;
  const dt = tick / model.substeps;
  const ticks = Math.round(start.duration / tick);
  const estimate = work.estimator.estimate;
  const reading = work.sensor.reading;
  const isServo = model.actuator.kind === 'servo';
  const yawAtRest = yawMomentum(model.actuator, work.actuator, true);
  let lastRate = start.rollRate;
  let shove = 0;
  let sum = 0;
  let done = 0;
  for (let k = 0; k < ticks; k++) {
    const time = k * tick;
    /* The accelerometer's own filter averages over the sample; a shove in between is felt as what it did. */
    const acceleration = (b[BODY.rate]! - lastRate) / tick;
    lastRate = b[BODY.rate]!;
    readSensors(model.sensor, work.sensor, b[BODY.roll]!, b[BODY.rate]!, acceleration, time);
    stepEstimator(
      model.estimator,
      work.estimator,
      reading[READING.gyro]!,
      reading[READING.accelRoll]!,
      b[BODY.roll]!,
      b[BODY.rate]!,
    );
    const command = stepController(
      model.controller,
      work.controller,
      estimate[ESTIMATE.roll]!,
      estimate[ESTIMATE.rate]!,
      work.actuator.wheel[0]!,
      model.tiltMin,
      model.tiltMax,
      tick,
    );
    let late = model.loopDelay;
    if (model.loopJitter > 0) late += model.loopJitter * (2 * drawUniform(work.jitter) - 1);
    send(model, work.actuator, command, Math.max(late, 0), isServo);
    if (record !== undefined && k % record.every === 0) write(record, out.rows++, time, work, model, command);

    for (let i = 0; i < model.substeps; i++) {
      const now = time + i * dt;
      while (2 * shove < disturbance.shoves.length && disturbance.shoves[2 * shove]! < now + dt) {
        b[BODY.rate]! += disturbance.shoves[2 * shove + 1]! / model.body.inertia;
        shove++;
      }
      const moment =
        bodyMoment(model.body, b[BODY.roll]! + 0.5 * dt * b[BODY.rate]!, b[BODY.rate]!) +
        readMoment(disturbance, now + 0.5 * dt);
      advanceActuator(model.actuator, work.actuator, b, model.body.inertia, model.body.damping, moment, dt);
    }
    done = k + 1;
    const roll = Math.abs(b[BODY.roll]!);
    sum += roll * roll;
    if (roll > out.peakRoll) out.peakRoll = roll;
    note(model, work, yawAtRest);
    if (!(roll < model.body.fallenAt)) {
      out.hasFallen = true;
      break;
    }
  }
  out.duration = done * tick;
  out.meanRoll = done > 0 ? Math.sqrt(sum / done) : 0;
  out.meanTorque = out.duration > 0 ? Math.sqrt(heat(model, work) / out.duration) : 0;
  out.saturatedTime = saturated(model, work);
  out.finalRoll = b[BODY.roll]!;
  out.finalTilt = work.actuator.tilt[0]!;
  return out;
}

function begin(model: RollLoopModel, work: RollLoopWork, start: RollRunStart): void {
  const b = work.body;
  b[BODY.roll] = start.roll;
  b[BODY.rate] = start.rollRate;
  resetActuator(model.actuator, work.actuator, start.tilt);
  seedRandom(work.sensor.random, start.seed, start.run, 1);
  seedRandom(work.jitter, start.seed, start.run, 2);
  resetSensor(model.sensor, work.sensor);
  resetEstimator(model.estimator, work.estimator, start.roll + start.estimateError);
  resetController(work.controller, start.tilt);
  const out = work.outcome;
  out.hasFallen = false;
  out.peakRoll = Math.abs(start.roll);
  out.peakTilt = Math.abs(start.tilt);
  out.peakTorque = 0;
  out.peakYawMomentum = 0;
  out.rows = 0;
}

/* Linear damping is left to the actuator's step, which takes it implicitly. */
function bodyMoment(body: RollBody, roll: number, rate: number): number {
  let moment: number;
  if (body.curve !== undefined && body.curveReach !== undefined) {
    const n = body.curve.length - 1;
    const place = Math.min(Math.max(((roll + body.curveReach) / (2 * body.curveReach)) * n, 0), n);
    const low = place < n ? Math.floor(place) : n - 1;
    moment = body.curve[low]! + (place - low) * (body.curve[low + 1]! - body.curve[low]!);
  } else moment = body.stiffness * Math.sin(roll);
  return moment - body.quadraticDamping * rate * Math.abs(rate);
}

function readMoment(d: RollDisturbance, time: number): number {
  const n = d.moment.length;
  if (n === 0) return 0;
  let place = time / d.step;
  if (d.isCyclic) {
    place -= n * Math.floor(place / n);
    const low = Math.floor(place) % n;
    return d.moment[low]! + (place - low) * (d.moment[low + 1 === n ? 0 : low + 1]! - d.moment[low]!);
  }
  if (place < 0 || place > n - 1) return 0;
  const low = place < n - 1 ? Math.floor(place) : n - 2;
  return n === 1 ? d.moment[0]! : d.moment[low]! + (place - low) * (d.moment[low + 1]! - d.moment[low]!);
}

function send(model: RollLoopModel, a: ActuatorWork, command: number, late: number, isServo: boolean): void {
  const actuator = model.actuator;
  if (isServo && actuator.kind === 'servo') {
    for (let i = 0; i < actuator.gimbals.length; i++) {
      const g = actuator.gimbals[i]!;
      sendCommand(g.servo, a.servos[i]!, g.follow * command, late);
    }
  } else if (actuator.kind === 'wheel') sendCommand(actuator.line, a.servos[0]!, command, late);
}

function note(model: RollLoopModel, work: RollLoopWork, yawAtRest: number): void {
  const out = work.outcome;
  const a = work.actuator;
  for (let i = 0; i < a.tilt.length; i++) {
    const tilt = Math.abs(a.tilt[i]!);
    if (tilt > out.peakTilt) out.peakTilt = tilt;
    const torque = Math.abs(a.torque[i]!);
    if (torque > out.peakTorque) out.peakTorque = torque;
  }
  const leak = Math.abs(yawMomentum(model.actuator, a, false) - yawAtRest);
  if (leak > out.peakYawMomentum) out.peakYawMomentum = leak;
}

function yawMomentum(actuator: RollActuator, a: ActuatorWork, atRest: boolean): number {
  if (actuator.kind === 'wheel') return 0;
  if (actuator.kind === 'free') return actuator.yawMomentum * (atRest ? 1 : Math.cos(a.tilt[0]!));
  let sum = 0;
  for (let i = 0; i < actuator.gimbals.length; i++) {
    sum += actuator.gimbals[i]!.yawMomentum * (atRest ? 1 : Math.cos(a.tilt[i]!));
  }
  return sum;
}

function heat(model: RollLoopModel, work: RollLoopWork): number {
  let most = 0;
  for (let i = 0; i < work.actuator.heat.length; i++) most = Math.max(most, work.actuator.heat[i]!);
  return model.actuator.kind === 'free' ? 0 : most;
}

function saturated(model: RollLoopModel, work: RollLoopWork): number {
  let most = 0;
  for (let i = 0; i < work.actuator.limited.length; i++) most = Math.max(most, work.actuator.limited[i]!);
  return model.actuator.kind === 'free' ? 0 : most;
}

function write(
  record: RollRecord,
  row: number,
  time: number,
  work: RollLoopWork,
  model: RollLoopModel,
  command: number,
): void {
  const at = row * RECORD_WIDTH;
  const r = record.rows;
  if (at + RECORD_WIDTH > r.length) return;
  r[at + RECORD.time] = time;
  r[at + RECORD.roll] = work.body[BODY.roll]!;
  r[at + RECORD.rollRate] = work.body[BODY.rate]!;
  r[at + RECORD.estimate] = work.estimator.estimate[ESTIMATE.roll]!;
  r[at + RECORD.command] = command;
  r[at + RECORD.tilt] = work.actuator.tilt[0]!;
  r[at + RECORD.tiltRate] = work.actuator.rate[0]!;
  r[at + RECORD.servoTorque] = work.actuator.torque[0]!;
  r[at + RECORD.yawMomentum] = yawMomentum(model.actuator, work.actuator, false);
}
