import type { Servo } from '../rig';

/**
 * A position servo that turns one gimbal (or one geared pair): command delay, its own update rate,
 * resolution, dead band, first-order lag, speed-torque line, current limit and backlash.
 *
 * The gimbal obeys  J d2(tilt)/dt2 = servo torque + load,  where the gyroscopic load is + h cos(tilt) (roll
 * rate) for an array whose roll momentum is h sin(tilt). The motor law is the straight line
 * torque = stall (drive - rate / noLoad) with drive in [-1, 1]; it is taken implicitly, so a light gimbal on
 * a stiff motor (J noLoad / stall far below the step) stays stable at any step.
 */
export interface ServoModel {
  /** N*m at rest, at full drive */
  readonly stallTorque: number;
  /** rad/s, unloaded, at full drive */
  readonly noLoadSpeed: number;
  /** N*m that the current limit lets through; at most the stall torque */
  readonly torqueLimit: number;
  /** s, from command to its effect */
  readonly delay: number;
  /** s, first-order lag of the position loop; 0 asks for the position within one step */
  readonly lag: number;
  /** rad, whole play between motor and gimbal */
  readonly backlash: number;
  /** rad, half width of the band of error the servo ignores */
  readonly deadBand: number;
  /** rad, smallest step of the command; 0 for none */
  readonly resolution: number;
  /** Hz at which the servo reads its command; 0 for continuously */
  readonly updateRate: number;
  /** kg*m^2 of the gimbal about its axis */
  readonly gimbalInertia: number;
  /** kg*m^2 of motor and gear train as felt at the output */
  readonly rotorInertia: number;
  /** rad, hard stops */
  readonly tiltMin: number;
  readonly tiltMax: number;
}

/** Where each quantity stands in `ServoWork.state`. */
export const SERVO_STATE = {
  /** rad, gimbal */
  tilt: 0,
  /** rad/s, gimbal */
  rate: 1,
  /** rad, motor output */
  motor: 2,
  /** rad/s, motor output */
  motorRate: 3,
  /** rad, command the servo is working to */
  held: 4,
  /** s until the servo next reads its command */
  untilRead: 5,
  /** N*m of the last step, on the gimbal */
  torque: 6,
  /** (N*m)^2 s, integral of motor torque squared, for the heat */
  heat: 7,
  /** s simulated */
  time: 8,
  /** 1 while the motor was at the end of its line or current limit in the last step */
  saturated: 9,
  /** s spent so */
  saturatedTime: 10,
} as const;

const STATE_LENGTH = 11;

export interface ServoWork {
  readonly state: Float64Array;
  /** rad, commands not yet in force */
  readonly queue: Float64Array;
  /** s, when each comes into force */
  readonly release: Float64Array;
  /** [oldest, count] */
  readonly cursor: Int32Array;
}

/** The only allocation: room for every command that can be under way at the given command rate. */
export function createServoWork(model: ServoModel, commandRate: number, extraDelay = 0): ServoWork {
  const frame = model.updateRate > 0 ? 1 / model.updateRate : 0;
  const waiting = Math.ceil((model.delay + extraDelay + frame) * commandRate) + 4;
  const work = {
    state: new Float64Array(STATE_LENGTH),
    queue: new Float64Array(waiting),
    release: new Float64Array(waiting),
    cursor: new Int32Array(2),
  };
  resetServo(work, 0);
  return work;
}

/** Puts the servo at rest at a tilt, with that tilt as its command. */
export function resetServo(work: ServoWork, tilt: number): void {
  work.state.fill(0);
  work.state[SERVO_STATE.tilt] = tilt;
  work.state[SERVO_STATE.motor] = tilt;
  work.state[SERVO_STATE.held] = tilt;
  work.cursor[0] = 0;
  work.cursor[1] = 0;
}

/**
 * Sends a command, to come into force after the servo's delay plus `extra` seconds (bus, computation, jitter).
 * A later command never overtakes an earlier one.
 */
export function sendCommand(model: ServoModel, work: ServoWork, command: number, extra: number): void {
  const size = work.queue.length;
  const count = work.cursor[1]!;
  const oldest = work.cursor[0]!;
  let due = work.state[SERVO_STATE.time]! + model.delay + extra;
  if (count > 0) due = Math.max(due, work.release[(oldest + count - 1) % size]!);
  if (count === size) {
    work.queue[(oldest + count - 1) % size] = command;
    return;
  }
  const slot = (oldest + count) % size;
  work.queue[slot] = command;
  work.release[slot] = due;
  work.cursor[1] = count + 1;
}

/**
 * Mean over the coming step of the command in force, delay and update rate seen to; the clock is moved on by the
 * caller. A servo that reads continuously sees fractions of a step exactly.
 */
export function readCommand(model: ServoModel, work: ServoWork, dt: number): number {
  const s = work.state;
  const size = work.queue.length;
  const start = s[SERVO_STATE.time]!;
  const end = start + dt;
  const reads = model.updateRate > 0;
  let held = s[SERVO_STATE.held]!;
  let mean = 0;
  let from = start;
  let readAt = reads ? start + s[SERVO_STATE.untilRead]! : end;
  if (reads) {
    /* The servo looks at its input only at its own frames; what arrives between waits. */
    while (readAt < end - 1e-9) {
      mean += held * (readAt - from);
      from = readAt;
      while (work.cursor[1]! > 0 && work.release[work.cursor[0]!]! <= readAt + 1e-9) {
        held = work.queue[work.cursor[0]!]!;
        work.cursor[0] = (work.cursor[0]! + 1) % size;
        work.cursor[1]! -= 1;
      }
      readAt += 1 / model.updateRate;
    }
    s[SERVO_STATE.untilRead] = readAt - end;
  } else {
    while (work.cursor[1]! > 0 && work.release[work.cursor[0]!]! < end - 1e-9) {
      const due = Math.max(work.release[work.cursor[0]!]!, from);
      mean += held * (due - from);
      from = due;
      held = work.queue[work.cursor[0]!]!;
      work.cursor[0] = (work.cursor[0]! + 1) % size;
      work.cursor[1]! -= 1;
    }
  }
  mean += held * (end - from);
  s[SERVO_STATE.held] = held;
  return mean / dt;
}

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
  const s = work.state;
  let target = readCommand(model, work, dt);
  if (model.resolution > 0) target = Math.round(target / model.resolution) * model.resolution;
  target = Math.min(Math.max(target, model.tiltMin), model.tiltMax);

  const error = target - s[SERVO_STATE.motor]!;
  const ignores = model.deadBand > 0 && Math.abs(error) < model.deadBand;
  /* Exact for a held target: the position error decays by exp(-dt / lag) over the step. */
  const wanted = ignores ? 0 : (error * (model.lag > 0 ? -Math.expm1(-dt / model.lag) : 1)) / dt;

  if (model.backlash > 0) stepWithPlay(model, s, gimbalLoad, wanted, dt);
  else {
    moveMotor(model, s, model.gimbalInertia + model.rotorInertia, gimbalLoad, wanted, dt);
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
function moveMotor(
  model: ServoModel,
  s: Float64Array,
  inertia: number,
  load: number,
  wanted: number,
  dt: number,
): void {
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
function stepWithPlay(model: ServoModel, s: Float64Array, load: number, wanted: number, dt: number): void {
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
    moveMotor(model, s, joint, load, wanted, dt);
    s[SERVO_STATE.rate] = s[SERVO_STATE.motorRate]!;
    s[SERVO_STATE.tilt] = s[SERVO_STATE.motor]! + (atHigh ? half : -half);
    return;
  }
  moveMotor(model, s, model.rotorInertia, 0, wanted, dt);
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
