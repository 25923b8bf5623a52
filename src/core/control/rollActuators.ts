import {
  createServoWork,
  readCommand,
  resetServo,
  SERVO_INPUT,
  SERVO_STATE,
  SERVO_TARGET,
  type ServoModel,
  type ServoWork,
} from './servoModel';
import { advanceServo } from './servoMotion';

/** One servo-driven gimbal, or a geared pair taken as one. */
export interface ServoGimbal {
  readonly servo: ServoModel;
  /** N*m*s, roll momentum per unit of sin(tilt), at the wheel's set speed */
  readonly momentum: number;
  /** N*m*s, momentum about the vertical at rest, with its sign: equal and opposite over a matched pair */
  readonly yawMomentum: number;
  /** share of the command this gimbal is told to follow, normally 1 */
  readonly follow: number;
  readonly spin: SpinHold;
}

/** What the wheel's speed does while the gimbal moves. */
export type SpinHold =
  /** as if the wheel's momentum never changed: a speed held softly, or friction-free coasting */
  | { readonly kind: 'constant' }
  /**
   * momentum = inertia (speed + roll rate sin(tilt)); the motor pushes the speed back by gain times its error,
   * no harder than its limit; drag takes drag * speed. Zero limit: the wheel coasts down.
   */
  | {
      readonly kind: 'governed';
      /** kg*m^2 about the spin axis (of both wheels of a geared pair) */
      readonly inertia: number;
      /** N*m*s/rad */ readonly gain: number;
      /** N*m */ readonly limit: number;
      /** N*m*s/rad */ readonly drag: number;
    };

export type RollActuator =
  | { readonly kind: 'servo'; readonly gimbals: readonly ServoGimbal[] }
  | {
      /** J tilt'' = gimbalStiffness sin(tilt) - gimbalDamping tilt' + h cos(tilt) roll' */
      readonly kind: 'free';
      readonly momentum: number;
      readonly yawMomentum: number;
      readonly gimbalInertia: number;
      readonly gimbalStiffness: number;
      readonly gimbalDamping: number;
      /** rad, inelastic stops */
      readonly tiltMin: number;
      readonly tiltMax: number;
    }
  | {
      /** a reaction wheel on the roll axis; `line` carries its delay and update rate (torque commands, N*m) */
      readonly kind: 'wheel';
      readonly line: ServoModel;
      /** s, first-order lag of the torque */
      readonly lag: number;
      /** N*m at rest */
      readonly stallTorque: number;
      /** N*m that the controller lets through */
      readonly torqueLimit: number;
      /** N*m*s, momentum at the motor's no-load speed */
      readonly noLoadMomentum: number;
    };

/** Where the body's quantities stand: its motion, then what a plant step is given, then scratch. */
export const BODY = {
  roll: 0,
  rate: 1,
  /** kg*m^2 */ inertia: 2,
  /** N*m*s/rad, taken implicitly */ damping: 3,
  /** N*m at the middle of the step, damping left out */ moment: 4,
  /** s */ dt: 5,
  /** N*m*s given to the body in the step */ impulse: 6,
} as const;

export const BODY_LENGTH = 7;

export interface ActuatorWork {
  readonly servos: readonly ServoWork[];
  /** per gimbal */
  readonly tilt: Float64Array;
  readonly rate: Float64Array;
  /** N*m */
  readonly torque: Float64Array;
  /** N*m*s */
  readonly momentum: Float64Array;
  /** (N*m)^2 s */
  readonly heat: Float64Array;
  /** s at a limit */
  readonly limited: Float64Array;
  /** reaction wheel: momentum, torque now */
  readonly wheel: Float64Array;
}

/** The only allocation. */
export function createActuatorWork(
  actuator: RollActuator,
  commandRate: number,
  extraDelay: number,
): ActuatorWork {
  const n = actuator.kind === 'servo' ? actuator.gimbals.length : 1;
  const lines =
    actuator.kind === 'servo'
      ? actuator.gimbals.map((g) => g.servo)
      : actuator.kind === 'wheel'
        ? [actuator.line]
        : [];
  return {
    servos: lines.map((line) => createServoWork(line, commandRate, extraDelay)),
    tilt: new Float64Array(n),
    rate: new Float64Array(n),
    torque: new Float64Array(n),
    momentum: new Float64Array(n),
    heat: new Float64Array(n),
    limited: new Float64Array(n),
    wheel: new Float64Array(2),
  };
}

export function resetActuator(actuator: RollActuator, w: ActuatorWork, tilt: number): void {
  w.tilt.fill(actuator.kind === 'wheel' ? 0 : tilt);
  w.rate.fill(0);
  w.torque.fill(0);
  w.heat.fill(0);
  w.limited.fill(0);
  w.wheel.fill(0);
  for (let i = 0; i < w.servos.length; i++) resetServo(w.servos[i]!, actuator.kind === 'servo' ? tilt : 0);
  if (actuator.kind === 'servo') {
    for (let i = 0; i < actuator.gimbals.length; i++) w.momentum[i] = actuator.gimbals[i]!.momentum;
  }
}

/**
 * One plant step: gimbals or wheel and the body's roll together.
 *
 * @param body see BODY; roll and rate are changed in place, the rest is read
 *
 * Momentum passes between array and body exactly: the body gets minus the change of h sin(tilt). Allocates
 * nothing: all numbers travel in typed arrays.
 */
export function advanceActuator(actuator: RollActuator, w: ActuatorWork, body: Float64Array): void {
  if (actuator.kind === 'servo') advanceServos(actuator.gimbals, w, body);
  else if (actuator.kind === 'free') advanceFree(actuator, w, body);
  else advanceWheel(actuator, w, body);
}

function moveBody(body: Float64Array): void {
  const dt = body[BODY.dt]!;
  const before = body[BODY.rate]!;
  const half = 0.5 * dt * body[BODY.damping]!;
  const inertia = body[BODY.inertia]!;
  const after = ((inertia - half) * before + body[BODY.impulse]!) / (inertia + half);
  body[BODY.rate] = after;
  body[BODY.roll]! += 0.5 * dt * (before + after);
}

function advanceServos(gimbals: readonly ServoGimbal[], w: ActuatorWork, body: Float64Array): void {
  const rate = body[BODY.rate]!;
  const dt = body[BODY.dt]!;
  let given = 0;
  for (let i = 0; i < gimbals.length; i++) {
    const g = gimbals[i]!;
    const servo = w.servos[i]!;
    const s = servo.state;
    const before = w.tilt[i]!;
    const held = w.momentum[i]!;
    s[SERVO_INPUT.load] = held * Math.cos(before) * rate;
    s[SERVO_INPUT.dt] = dt;
    advanceServo(g.servo, servo);
    const after = s[SERVO_STATE.tilt]!;
    const sine = Math.sin(after);
    let momentum = held;
    if (g.spin.kind === 'governed') {
      const speed = held / g.spin.inertia - rate * sine;
      const set = g.momentum / g.spin.inertia;
      let push = g.spin.gain * (set - speed) + g.spin.drag * set;
      push = Math.min(Math.max(push, -g.spin.limit), g.spin.limit);
      momentum = held + dt * (push - g.spin.drag * speed);
      w.momentum[i] = momentum;
    }
    given += momentum * sine - held * Math.sin(before);
    w.tilt[i] = after;
    w.rate[i] = s[SERVO_STATE.rate]!;
    w.torque[i] = s[SERVO_STATE.torque]!;
    w.heat[i] = s[SERVO_STATE.heat]!;
    w.limited[i] = s[SERVO_STATE.saturatedTime]!;
  }
  body[BODY.impulse] = dt * body[BODY.moment]! - given;
  moveBody(body);
}

/* Gyroscopic coupling by the implicit midpoint rule: it turns momentum to and fro without adding energy. */
function advanceFree(a: Extract<RollActuator, { kind: 'free' }>, w: ActuatorWork, body: Float64Array): void {
  const inertia = body[BODY.inertia]!;
  const damping = body[BODY.damping]!;
  const moment = body[BODY.moment]!;
  const dt = body[BODY.dt]!;
  const p = body[BODY.rate]!;
  const q = w.rate[0]!;
  const middle = w.tilt[0]! + 0.5 * dt * q;
  const beta = 0.5 * dt * a.momentum * Math.cos(middle);
  const hp = 0.5 * dt * damping;
  const hq = 0.5 * dt * a.gimbalDamping;
  const rhsP = (inertia - hp) * p + dt * moment - beta * q;
  const rhsQ = (a.gimbalInertia - hq) * q + dt * a.gimbalStiffness * Math.sin(middle) + beta * p;
  const mp = inertia + hp;
  const mq = a.gimbalInertia + hq;
  const det = mp * mq + beta * beta;
  const nextP = (mq * rhsP - beta * rhsQ) / det;
  let nextQ = (mp * rhsQ + beta * rhsP) / det;
  let tilt = w.tilt[0]! + 0.5 * dt * (q + nextQ);
  let nextRate = nextP;
  if (tilt > a.tiltMax || tilt < a.tiltMin) {
    /* At a stop the gimbal is locked for this step and gives the body no torque. */
    tilt = Math.min(Math.max(tilt, a.tiltMin), a.tiltMax);
    const given = a.momentum * (Math.sin(tilt) - Math.sin(w.tilt[0]!));
    nextQ = 0;
    nextRate = ((inertia - hp) * p + dt * moment - given) / mp;
  }
  w.tilt[0] = tilt;
  w.rate[0] = nextQ;
  body[BODY.rate] = nextRate;
  body[BODY.roll]! += 0.5 * dt * (p + nextRate);
}

/* Torque within controller limit and motor line; the wheel stores what the body is given, with opposite sign. */
function advanceWheel(
  a: Extract<RollActuator, { kind: 'wheel' }>,
  w: ActuatorWork,
  body: Float64Array,
): void {
  const dt = body[BODY.dt]!;
  const line = w.servos[0]!;
  line.state[SERVO_INPUT.dt] = dt;
  readCommand(a.line, line);
  const asked = line.state[SERVO_TARGET]!;
  line.state[SERVO_STATE.time]! += dt;
  const share = a.lag > 0 ? -Math.expm1(-dt / a.lag) : 1;
  const before = w.wheel[1]!;
  /* The lag's exact mean over the step, not its end, or the loop would gain half a step of lead. */
  const mean = a.lag > 0 ? asked + ((before - asked) * a.lag * share) / dt : asked;
  const speed = w.wheel[0]! / a.noLoadMomentum;
  const high = Math.min(a.torqueLimit, a.stallTorque * (1 - speed));
  const low = Math.max(-a.torqueLimit, -a.stallTorque * (1 + speed));
  const torque = Math.min(Math.max(mean, low), high);
  if (torque !== mean) w.limited[0]! += dt;
  w.wheel[1] = Math.min(Math.max(before + share * (asked - before), low), high);
  w.wheel[0]! += dt * torque;
  w.torque[0] = torque;
  w.heat[0]! += torque * torque * dt;
  body[BODY.impulse] = dt * (body[BODY.moment]! - torque);
  moveBody(body);
}

/**
 * Plant steps per tick that resolve the array's nutation, the quick exchange between a light gimbal and the body
 * at h / sqrt(I J): none of it moves more than half a radian in a step.
 */
export function chooseSubsteps(actuator: RollActuator, inertia: number, sampleTime: number): number {
  if (actuator.kind === 'wheel') return 1;
  let fastest = 0;
  if (actuator.kind === 'free')
    fastest = Math.abs(actuator.momentum) / Math.sqrt(inertia * actuator.gimbalInertia);
  else {
    for (const g of actuator.gimbals) {
      const carried = g.servo.gimbalInertia + (g.servo.backlash > 0 ? 0 : g.servo.rotorInertia);
      fastest = Math.max(fastest, Math.abs(g.momentum) / Math.sqrt(inertia * carried));
    }
  }
  return Math.max(1, Math.ceil((fastest * sampleTime) / 0.5));
}
