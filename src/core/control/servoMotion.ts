import type { Servo } from '../rig';
import { readCommand, SERVO_PASS, SERVO_STATE, type ServoModel, type ServoWork } from './servoModel';

/**
 * Advances the servo and its gimbal by one step.
 *
 * @param model the servo
 * @param work  its state, changed in place
 * @param gimbalLoad N*m on the gimbal from outside the servo (gyroscopic, springs, friction), held over the step
 * @param dt    s
 *
 * After it, `work.state` holds tilt, rate and torque. O(1), allocates nothing. Commands arrive by `sendCommand`.
 * Source: DC motor's linear speed-torque line (textbook); the semi-implicit limits are our own.
 */
export function stepServo(model: ServoModel, work: ServoWork, gimbalLoad: number, dt: number): void {
  work.state[SERVO_PASS.load] = gimbalLoad;
  work.state[SERVO_PASS.dt] = dt;
  advanceServo(model, work);
}

/** The same with load and step already in `work.state` at SERVO_INPUT. */
export function advanceServo(model: ServoModel, work: ServoWork): void {
  const s = work.state;
  const dt = s[SERVO_PASS.dt]!;
  readCommand(model, work);
  let target = s[SERVO_PASS.target]!;
  if (model.resolution > 0) target = Math.round(target / model.resolution) * model.resolution;
  target = Math.min(Math.max(target, model.tiltMin), model.tiltMax);

  const error = target - s[SERVO_STATE.motor]!;
  const ignores = model.deadBand > 0 && Math.abs(error) < model.deadBand;
  /* Exact for a held target: the position error decays by exp(-dt / lag) over the step. */
  s[SERVO_PASS.wanted] = ignores ? 0 : (error * (model.lag > 0 ? -Math.expm1(-dt / model.lag) : 1)) / dt;

  if (model.backlash > 0) stepWithPlay(model, s);
  else {
    s[SERVO_PASS.inertia] = model.gimbalInertia + model.rotorInertia;
    s[SERVO_PASS.push] = s[SERVO_PASS.load]!;
    moveMotor(model, s);
    s[SERVO_STATE.tilt] = s[SERVO_STATE.motor]!;
    s[SERVO_STATE.rate] = s[SERVO_STATE.motorRate]!;
  }
  holdAtStop(model, s);
  const torque = s[SERVO_STATE.torque]!;
  s[SERVO_STATE.heat]! += torque * torque * dt;
  s[SERVO_STATE.time]! += dt;
  s[SERVO_STATE.saturatedTime]! += s[SERVO_STATE.saturated]! * dt;
}

/* Motor rate towards `wanted`, as far as line and current limit allow; then position. */
function moveMotor(model: ServoModel, s: Float64Array): void {
  const inertia = s[SERVO_PASS.inertia]!;
  const load = s[SERVO_PASS.push]!;
  const wanted = s[SERVO_PASS.wanted]!;
  const dt = s[SERVO_PASS.dt]!;
  const rate = s[SERVO_STATE.motorRate]!;
  const stall = model.stallTorque;
  const slope = stall / model.noLoadSpeed;
  const momentum = inertia * rate;
  const limit = model.torqueLimit;
  /* Rates reached at full drive either way (implicit line), and at the current limit. */
  const mass = inertia + dt * slope;
  let highest = (momentum + dt * (stall + load)) / mass;
  let lowest = (momentum + dt * (load - stall)) / mass;
  if (inertia > 0) {
    const up = (momentum + dt * (limit + load)) / inertia;
    const down = (momentum + dt * (load - limit)) / inertia;
    /* The current limit bounds torque in both senses: it can neither push nor brake harder. */
    if (up < highest) highest = up;
    if (down > lowest) lowest = down;
    if (highest < lowest) {
      const nearest = lowest > up ? up : down;
      highest = nearest;
      lowest = nearest;
    }
  }
  let next = wanted;
  let saturated = 0;
  if (next > highest) {
    next = highest;
    saturated = 1;
  } else if (next < lowest) {
    next = lowest;
    saturated = 1;
  }
  s[SERVO_STATE.motorRate] = next;
  s[SERVO_STATE.motor]! += next * dt;
  s[SERVO_STATE.torque] = (inertia * (next - rate)) / dt - load;
  s[SERVO_STATE.saturated] = saturated;
}

/* Play: the gimbal flies free inside the gap and is carried, without bounce, at either end of it. */
function stepWithPlay(model: ServoModel, s: Float64Array): void {
  const load = s[SERVO_PASS.load]!;
  const wanted = s[SERVO_PASS.wanted]!;
  const dt = s[SERVO_PASS.dt]!;
  const half = 0.5 * model.backlash;
  const gap = s[SERVO_STATE.tilt]! - s[SERVO_STATE.motor]!;
  const freeRate = s[SERVO_STATE.rate]! + (load / model.gimbalInertia) * dt;
  const atLow = gap <= -half + 1e-12;
  const atHigh = gap >= half - 1e-12;
  /* Carried if, left free, it would be pressed against the side it already touches. */
  const carried = (atHigh && freeRate >= wanted) || (atLow && freeRate <= wanted);
  if (carried) {
    const joint = model.gimbalInertia + model.rotorInertia;
    const common =
      (model.gimbalInertia * s[SERVO_STATE.rate]! + model.rotorInertia * s[SERVO_STATE.motorRate]!) / joint;
    s[SERVO_STATE.motorRate] = common;
    s[SERVO_PASS.inertia] = joint;
    s[SERVO_PASS.push] = load;
    moveMotor(model, s);
    s[SERVO_STATE.rate] = s[SERVO_STATE.motorRate]!;
    s[SERVO_STATE.tilt] = s[SERVO_STATE.motor]! + (atHigh ? half : -half);
    return;
  }
  s[SERVO_PASS.inertia] = model.rotorInertia;
  s[SERVO_PASS.push] = 0;
  moveMotor(model, s);
  s[SERVO_STATE.rate] = freeRate;
  s[SERVO_STATE.tilt]! += freeRate * dt;
  const high = s[SERVO_STATE.motor]! + half;
  const low = s[SERVO_STATE.motor]! - half;
  const tilt = s[SERVO_STATE.tilt]!;
  if (tilt <= high && tilt >= low) return;
  /* They meet and go on together, without bounce. */
  s[SERVO_STATE.tilt] = tilt > high ? high : low;
  const common =
    (model.gimbalInertia * freeRate + model.rotorInertia * s[SERVO_STATE.motorRate]!) /
    (model.gimbalInertia + model.rotorInertia);
  s[SERVO_STATE.rate] = common;
  s[SERVO_STATE.motorRate] = common;
}

/* Hard stops take any load; the motor does not pay for it. */
function holdAtStop(model: ServoModel, s: Float64Array): void {
  const tilt = s[SERVO_STATE.tilt]!;
  if (tilt <= model.tiltMax && tilt >= model.tiltMin) return;
  const side = tilt > model.tiltMax ? 1 : -1;
  const past = tilt - (side > 0 ? model.tiltMax : model.tiltMin);
  const gap = tilt - s[SERVO_STATE.motor]!;
  s[SERVO_STATE.tilt] = tilt - past;
  if (side * s[SERVO_STATE.rate]! > 0) s[SERVO_STATE.rate] = 0;
  /* A motor in touch with the gimbal stops with it, on the same side of the play. */
  if (Math.abs(gap) < 0.5 * model.backlash - 1e-9) return;
  s[SERVO_STATE.motor]! -= past;
  if (side * s[SERVO_STATE.motorRate]! > 0) s[SERVO_STATE.motorRate] = 0;
}

/** N*m, root mean square of the servo's torque so far: what its windings must carry away as heat. */
export function meanServoTorque(work: ServoWork): number {
  const time = work.state[SERVO_STATE.time]!;
  return time > 0 ? Math.sqrt(work.state[SERVO_STATE.heat]! / time) : 0;
}

/**
 * s of delay and s of lag by which a linear loop feels this servo: its delay, plus half the time between
 * two of its own frames (a frame waits from 0 to 1/rate; the mean is half).
 */
export function summariseServo(servo: Pick<Servo, 'delay' | 'lag' | 'updateRate'>): {
  readonly delay: number;
  readonly lag: number;
} {
  return { delay: servo.delay + (servo.updateRate > 0 ? 0.5 / servo.updateRate : 0), lag: servo.lag };
}

/** What a servo's data sheet leaves out. */
export interface ServoMounting {
  /** kg*m^2 of everything the servo turns, about the gimbal axis */
  readonly gimbalInertia: number;
  /** kg*m^2 of motor and gears at the output */
  readonly rotorInertia?: number;
  readonly tiltMin: number;
  readonly tiltMax: number;
  /** N*m; the stall torque when left out */
  readonly torqueLimit?: number;
}

/** A rig's servo on its gimbal. */
export function mountServo(servo: Servo, mounting: ServoMounting): ServoModel {
  return {
    stallTorque: servo.stallTorque,
    noLoadSpeed: servo.noLoadSpeed,
    torqueLimit: Math.min(mounting.torqueLimit ?? servo.stallTorque, servo.stallTorque),
    delay: servo.delay,
    lag: servo.lag,
    backlash: servo.backlash,
    deadBand: servo.deadBand,
    resolution: servo.resolution,
    updateRate: servo.updateRate,
    gimbalInertia: mounting.gimbalInertia,
    rotorInertia: mounting.rotorInertia ?? 0,
    tiltMin: mounting.tiltMin,
    tiltMax: mounting.tiltMax,
  };
}
