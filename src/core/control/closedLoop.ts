import { CONTROLLER_PORT, resetController, tickController } from './controllers';
import { ESTIMATE, resetEstimator, updateEstimator } from './estimators';
import { drawUniform, seedRandom } from './randomness';
import { type ActuatorWork, advanceActuator, BODY, type RollActuator, resetActuator } from './rollActuators';
import {
  NOW,
  PEAK,
  RECORD,
  RECORD_WIDTH,
  type RollBody,
  type RollDisturbance,
  type RollLoopModel,
  type RollLoopWork,
  type RollOutcome,
  type RollRecord,
  type RollRunStart,
} from './rollLoopModel';
import { READING, resetSensor, takeReading } from './sensorModel';
import { queueCommand, SERVO_INPUT } from './servoModel';

/**
 * Runs the closed loop: nonlinear body and gimbals, servos, sensors, estimator and controller, ticking at the
 * loop rate with `substeps` plant steps between ticks.
 *
 * @param record rows are written as far as they fit; undefined for none
 * @returns work.outcome, overwritten by the next run
 *
 * The array's exchange of momentum with the body is exact in every step, whatever the servo does. Allocates
 * nothing: numbers pass between its parts in typed arrays. About 0.6 microseconds for each tick of a pair.
 */
export function runRollLoop(
  model: RollLoopModel,
  work: RollLoopWork,
  disturbance: RollDisturbance,
  start: RollRunStart,
  record: RollRecord | undefined,
): RollOutcome {
  begin(model, work, start);
  const out = work.outcome;
  const now = work.now;
  const tick = model.sensor.sampleTime;
  const ticks = Math.round(start.duration / tick);
  let done = 0;
  while (done < ticks && !out.hasFallen) {
    now[NOW.time] = done * tick;
    decide(model, work);
    if (record !== undefined && done % record.every === 0) write(record, out.rows++, work, model);
    for (let i = 0; i < model.substeps; i++) {
      now[NOW.stepStart] = done * tick + i * work.body[BODY.dt]!;
      push(model, work, disturbance);
      advanceActuator(model.actuator, work.actuator, work.body);
    }
    note(model, work);
    done++;
  }
  conclude(model, work, done);
  return out;
}

function begin(model: RollLoopModel, work: RollLoopWork, start: RollRunStart): void {
  const b = work.body;
  b[BODY.roll] = start.roll;
  b[BODY.rate] = start.rollRate;
  b[BODY.inertia] = model.body.inertia;
  b[BODY.damping] = model.body.damping;
  b[BODY.dt] = model.sensor.sampleTime / model.substeps;
  resetActuator(model.actuator, work.actuator, start.tilt);
  seedRandom(work.sensor.random, start.seed, start.run, 1);
  seedRandom(work.jitter, start.seed, start.run, 2);
  resetSensor(model.sensor, work.sensor);
  resetEstimator(model.estimator, work.estimator, start.roll + start.estimateError);
  resetController(work.controller, start.tilt);
  const port = work.controller.state;
  port[CONTROLLER_PORT.dt] = model.sensor.sampleTime;
  work.now.fill(0);
  work.now[NOW.lastRate] = start.rollRate;
  findYaw(model.actuator, work.actuator, true, work.now);
  work.now[NOW.yawAtRest] = work.now[NOW.yaw]!;
  work.peaks.fill(0);
  work.peaks[PEAK.roll] = Math.abs(start.roll);
  work.peaks[PEAK.tilt] = Math.abs(start.tilt);
  work.outcome.hasFallen = false;
  work.outcome.rows = 0;
}

/* One tick of the firmware: read, estimate, decide, send. */
function decide(model: RollLoopModel, work: RollLoopWork): void {
  const b = work.body;
  const now = work.now;
  const roll = b[BODY.roll]!;
  const rate = b[BODY.rate]!;
  const sensor = work.sensor;
  sensor.input[0] = roll;
  sensor.input[1] = rate;
  /* The accelerometer's own filter averages over the sample; a shove in between is felt as what it did. */
  sensor.input[2] = (rate - now[NOW.lastRate]!) / model.sensor.sampleTime;
  sensor.input[3] = now[NOW.time]!;
  now[NOW.lastRate] = rate;
  takeReading(model.sensor, sensor);

  const estimator = work.estimator;
  estimator.input[0] = sensor.reading[READING.gyro]!;
  estimator.input[1] = sensor.reading[READING.accelRoll]!;
  estimator.input[2] = roll;
  estimator.input[3] = rate;
  updateEstimator(model.estimator, estimator);

  const port = work.controller.state;
  port[CONTROLLER_PORT.lean] = estimator.estimate[ESTIMATE.roll]!;
  port[CONTROLLER_PORT.leanRate] = estimator.estimate[ESTIMATE.rate]!;
  port[CONTROLLER_PORT.momentum] = work.actuator.wheel[0]!;
  port[CONTROLLER_PORT.tiltMin] = model.tiltMin;
  port[CONTROLLER_PORT.tiltMax] = model.tiltMax;
  tickController(model.controller, work.controller);

  let late = model.loopDelay;
  if (model.loopJitter > 0) late += model.loopJitter * (2 * drawUniform(work.jitter) - 1);
  now[NOW.late] = Math.max(late, 0);
  send(model, work);
}

function send(model: RollLoopModel, work: RollLoopWork): void {
  const actuator = model.actuator;
  const command = work.controller.state[CONTROLLER_PORT.output]!;
  const late = work.now[NOW.late]!;
  if (actuator.kind === 'servo') {
    for (let i = 0; i < actuator.gimbals.length; i++) {
      const g = actuator.gimbals[i]!;
      const servo = work.actuator.servos[i]!;
      servo.state[SERVO_INPUT.command] = g.follow * command;
      servo.state[SERVO_INPUT.extra] = late;
      queueCommand(g.servo, servo);
    }
  } else if (actuator.kind === 'wheel') {
    const line = work.actuator.servos[0]!;
    line.state[SERVO_INPUT.command] = command;
    line.state[SERVO_INPUT.extra] = late;
    queueCommand(actuator.line, line);
  }
}

/* Shoves that fall in this plant step, and the moment at its middle. */
function push(model: RollLoopModel, work: RollLoopWork, d: RollDisturbance): void {
  const b = work.body;
  const now = work.now;
  const dt = b[BODY.dt]!;
  const end = now[NOW.stepStart]! + dt;
  let shove = now[NOW.shove]!;
  while (2 * shove < d.shoves.length && d.shoves[2 * shove]! < end) {
    b[BODY.rate]! += d.shoves[2 * shove + 1]! / b[BODY.inertia]!;
    shove++;
  }
  now[NOW.shove] = shove;
  b[BODY.moment] = 0;
  if (d.moment.length > 0) addMoment(d, now[NOW.stepStart]! + 0.5 * dt, b);
  addBodyMoment(model.body, b);
}

/* Gravity or water at the middle of the step; linear damping is left to the actuator's step, which is implicit. */
function addBodyMoment(body: RollBody, b: Float64Array): void {
  const rate = b[BODY.rate]!;
  const roll = b[BODY.roll]! + 0.5 * b[BODY.dt]! * rate;
  let moment = -body.quadraticDamping * rate * Math.abs(rate);
  if (body.curve !== undefined && body.curveReach !== undefined) {
    const n = body.curve.length - 1;
    const place = Math.min(Math.max(((roll + body.curveReach) / (2 * body.curveReach)) * n, 0), n);
    const low = place < n ? Math.floor(place) : n - 1;
    moment += body.curve[low]! + (place - low) * (body.curve[low + 1]! - body.curve[low]!);
  } else moment += body.stiffness * Math.sin(roll);
  b[BODY.moment]! += moment;
}

function addMoment(d: RollDisturbance, time: number, b: Float64Array): void {
  const n = d.moment.length;
  let place = time / d.step;
  if (d.isCyclic) place -= n * Math.floor(place / n);
  else if (place < 0 || place > n - 1) return;
  const low = Math.min(Math.floor(place), n - 1);
  const next = low + 1 < n ? low + 1 : d.isCyclic ? 0 : low;
  b[BODY.moment]! += d.moment[low]! + (place - low) * (d.moment[next]! - d.moment[low]!);
}

function note(model: RollLoopModel, work: RollLoopWork): void {
  const a = work.actuator;
  const peaks = work.peaks;
  const roll = Math.abs(work.body[BODY.roll]!);
  peaks[PEAK.rollSquares]! += roll * roll;
  if (roll > peaks[PEAK.roll]!) peaks[PEAK.roll] = roll;
  if (!(roll < model.body.fallenAt)) work.outcome.hasFallen = true;
  for (let i = 0; i < a.tilt.length; i++) {
    const tilt = Math.abs(a.tilt[i]!);
    if (tilt > peaks[PEAK.tilt]!) peaks[PEAK.tilt] = tilt;
    const torque = Math.abs(a.torque[i]!);
    if (torque > peaks[PEAK.torque]!) peaks[PEAK.torque] = torque;
  }
  findYaw(model.actuator, a, false, work.now);
  const leak = Math.abs(work.now[NOW.yaw]! - work.now[NOW.yawAtRest]!);
  if (leak > peaks[PEAK.yaw]!) peaks[PEAK.yaw] = leak;
}

function findYaw(actuator: RollActuator, a: ActuatorWork, atRest: boolean, now: Float64Array): void {
  let sum = 0;
  if (actuator.kind === 'free') sum = actuator.yawMomentum * (atRest ? 1 : Math.cos(a.tilt[0]!));
  else if (actuator.kind === 'servo') {
    for (let i = 0; i < actuator.gimbals.length; i++) {
      sum += actuator.gimbals[i]!.yawMomentum * (atRest ? 1 : Math.cos(a.tilt[i]!));
    }
  }
  now[NOW.yaw] = sum;
}

function conclude(model: RollLoopModel, work: RollLoopWork, ticks: number): void {
  const out = work.outcome;
  const peaks = work.peaks;
  const isDriven = model.actuator.kind !== 'free';
  let heat = 0;
  let limited = 0;
  for (let i = 0; i < work.actuator.heat.length; i++) {
    heat = Math.max(heat, work.actuator.heat[i]!);
    limited = Math.max(limited, work.actuator.limited[i]!);
  }
  out.duration = ticks * model.sensor.sampleTime;
  out.peakRoll = peaks[PEAK.roll]!;
  out.meanRoll = ticks > 0 ? Math.sqrt(peaks[PEAK.rollSquares]! / ticks) : 0;
  out.peakTilt = peaks[PEAK.tilt]!;
  out.peakTorque = peaks[PEAK.torque]!;
  out.meanTorque = isDriven && ticks > 0 ? Math.sqrt(heat / out.duration) : 0;
  out.saturatedTime = isDriven ? limited : 0;
  out.peakYawMomentum = peaks[PEAK.yaw]!;
  out.finalRoll = work.body[BODY.roll]!;
  out.finalTilt = work.actuator.tilt[0]!;
}

function write(record: RollRecord, row: number, work: RollLoopWork, model: RollLoopModel): void {
  const at = row * RECORD_WIDTH;
  const r = record.rows;
  if (at + RECORD_WIDTH > r.length) return;
  r[at + RECORD.time] = work.now[NOW.time]!;
  r[at + RECORD.roll] = work.body[BODY.roll]!;
  r[at + RECORD.rollRate] = work.body[BODY.rate]!;
  r[at + RECORD.estimate] = work.estimator.estimate[ESTIMATE.roll]!;
  r[at + RECORD.command] = work.controller.state[CONTROLLER_PORT.output]!;
  r[at + RECORD.tilt] = work.actuator.tilt[0]!;
  r[at + RECORD.tiltRate] = work.actuator.rate[0]!;
  r[at + RECORD.servoTorque] = work.actuator.torque[0]!;
  findYaw(model.actuator, work.actuator, false, work.now);
  r[at + RECORD.yawMomentum] = work.now[NOW.yaw]!;
}
