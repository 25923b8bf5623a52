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

/*
 * Numbers handed on between the steps of one advance stand in the state too, since an engine boxes a number that
 * crosses a call it does not inline, and a million boxes a second are garbage.
 */
export const SERVO_PASS = {
  load: 11,
  dt: 12,
  command: 13,
  extra: 14,
  target: 15,
  wanted: 16,
  inertia: 17,
  push: 18,
} as const;

const STATE_LENGTH = 19;

/** Where a caller that must make no garbage leaves its numbers for `queueCommand` and `advanceServo`. */
export const SERVO_INPUT = {
  load: SERVO_PASS.load,
  dt: SERVO_PASS.dt,
  command: SERVO_PASS.command,
  extra: SERVO_PASS.extra,
} as const;

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
  work.state[SERVO_PASS.command] = command;
  work.state[SERVO_PASS.extra] = extra;
  queueCommand(model, work);
}

/** The same with command and delay already in `work.state` at SERVO_INPUT. */
export function queueCommand(model: ServoModel, work: ServoWork): void {
  const command = work.state[SERVO_PASS.command]!;
  const extra = work.state[SERVO_PASS.extra]!;
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

/** Where `readCommand` leaves the mean command. */
export const SERVO_TARGET = SERVO_PASS.target;

/**
 * Mean over the coming step (SERVO_INPUT.dt) of the command in force, delay and update rate seen to, left at
 * SERVO_TARGET; the clock is moved on by the caller. A servo that reads continuously sees fractions of a step
 * exactly.
 */
export function readCommand(model: ServoModel, work: ServoWork): void {
  const s = work.state;
  const dt = s[SERVO_PASS.dt]!;
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
  s[SERVO_PASS.target] = mean / dt;
}
