import { Matrix } from 'ml-matrix';
import { holdInput } from './linear/exponential';

/**
 * A body that rolls about one line and carries an array whose roll momentum is momentum * sin(tilt):
 *
 *   I d2(roll)/dt2 = k roll - d d(roll)/dt - h d(tilt)/dt + disturbance   (small angles)
 *
 * The tilt follows its command through a delay and a first-order lag.
 */
export interface RollTiltPlant {
  /** tilt: the command is a tilt angle. wheelTorque: a reaction wheel, the command is the torque on its wheel */
  readonly actuator: 'tilt' | 'wheelTorque';
  /** kg*m^2 about the roll line, gimbals and wheels carried along (added water included) */
  readonly inertia: number;
  /** N*m/rad, positive when the body topples (m g l), negative when it rights itself (a float) */
  readonly stiffness: number;
  /** N*m*s/rad */
  readonly damping: number;
  /** N*m*s, roll momentum of the whole array per unit of sin(tilt); unused for a reaction wheel */
  readonly momentum: number;
  /** s, first-order lag of the servo; 0 for a tilt that follows its command at once */
  readonly servoLag: number;
  /** s, from taking a sample to the servo's first motion upon it */
  readonly delay: number;
  /** s between two samples */
  readonly sampleTime: number;
  /** m, accelerometer above the roll line */
  readonly sensorHeight: number;
  /** m/s^2 */
  readonly gravity: number;
}

/** dx/dt = A x + B u, y = C x + D u with u the command, the delay left out; y is roll, roll rate and store. */
export interface StateSpace {
  readonly A: Matrix;
  readonly B: Matrix;
  readonly C: Matrix;
  readonly D: Matrix;
}

/** Rows of the sampled plant's output. */
export const PLANT_OUTPUT = {
  /** rad */
  roll: 0,
  /** rad/s */
  rollRate: 1,
  /**
   * rad, roll as an accelerometer at the sensor's height shows it: roll - height / gravity * roll acceleration,
   * the acceleration averaged over the last sample, as the filter inside such a sensor does
   */
  apparentRoll: 2,
  /** rad of tilt, or N*m*s of reaction wheel momentum */
  store: 3,
} as const;

/**
 * The plant without its delay. State: roll, (momentum of body and array)/I, and the tilt if the servo lags.
 *
 * Body plus array momentum is taken as the state, not roll rate: with a lag of zero the tilt steps, roll rate
 * steps with it, and the sum does not.
 */
export function buildPlant(plant: RollTiltPlant): StateSpace {
  const a = plant.stiffness / plant.inertia;
  const d = plant.damping / plant.inertia;
  const g = plant.momentum / plant.inertia;
  if (plant.actuator === 'wheelTorque') return buildWheelPlant(plant, a, d);
  if (plant.servoLag > 0) {
    const w = 1 / plant.servoLag;
    return {
      A: new Matrix([
        [0, 1, -g],
        [a, -d, d * g],
        [0, 0, -w],
      ]),
      B: new Matrix([[0], [0], [w]]),
      C: new Matrix([
        [1, 0, 0],
        [0, 1, -g],
        [0, 0, 1],
      ]),
      D: Matrix.zeros(3, 1),
    };
  }
  return {
    A: new Matrix([
      [0, 1],
      [a, -d],
    ]),
    B: new Matrix([[-g], [d * g]]),
    C: new Matrix([
      [1, 0],
      [0, 1],
      [0, 0],
    ]),
    D: new Matrix([[0], [-g], [1]]),
  };
}

/* Roll, roll rate, wheel momentum, and the motor's torque if it lags. */
function buildWheelPlant(plant: RollTiltPlant, a: number, d: number): StateSpace {
  const per = 1 / plant.inertia;
  if (plant.servoLag > 0) {
    const w = 1 / plant.servoLag;
    return {
      A: new Matrix([
        [0, 1, 0, 0],
        [a, -d, 0, -per],
        [0, 0, 0, 1],
        [0, 0, 0, -w],
      ]),
      B: new Matrix([[0], [0], [0], [w]]),
      C: new Matrix([
        [1, 0, 0, 0],
        [0, 1, 0, 0],
        [0, 0, 1, 0],
      ]),
      D: Matrix.zeros(3, 1),
    };
  }
  return {
    A: new Matrix([
      [0, 1, 0],
      [a, -d, 0],
      [0, 0, 0],
    ]),
    B: new Matrix([[0], [-per], [1]]),
    C: new Matrix([
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ]),
    D: Matrix.zeros(3, 1),
  };
}

/** x+ = A x + B u over one sample, y = C x just before the new command can act. */
export interface SampledPlant {
  readonly A: Matrix;
  readonly B: Matrix;
  readonly C: Matrix;
  /** states of the plant proper; then past commands, newest first; then, with a sensor off the roll line, the last roll rate */
  readonly plantStates: number;
  readonly pastCommands: number;
  readonly sampleTime: number;
  /** rad of apparent roll for each rad/s that the roll rate changed over the last sample */
  readonly perRate: number;
  /** the pieces, for frequency response: transition, effect of the older and of the newer command of a sample */
  readonly transition: Matrix;
  readonly olderInput: Matrix;
  readonly newerInput: Matrix;
  readonly C0: Matrix;
  readonly D0: Matrix;
}

/**
 * Exact sampling of the plant with its delay, whole samples and fraction alike; past commands become states.
 *
 * Source: Astrom and Wittenmark, Computer-Controlled Systems, 3rd ed., section 3.2 (from memory).
 */
export function samplePlant(plant: RollTiltPlant): SampledPlant {
  const { A, B, C, D } = buildPlant(plant);
  const dt = plant.sampleTime;
  /* A delay within rounding of a whole number of samples is that number. */
  const samples = plant.delay / dt;
  const nearest = Math.round(samples);
  const whole = Math.abs(samples - nearest) < 1e-9 ? nearest : Math.floor(samples);
  const late = Math.max(0, plant.delay - whole * dt);
  const full = holdInput(A, B, dt);
  const rest = holdInput(A, B, dt - late);
  const early = holdInput(A, B, late);
  const olderInput = rest.transition.mmul(early.input);
  const n = A.rows;
  const past = whole + 1;
  const isHigh = plant.sensorHeight !== 0;
  const size = n + past + (isHigh ? 1 : 0);
  const a = Matrix.zeros(size, size);
  const b = Matrix.zeros(size, 1);
  a.setSubMatrix(full.transition, 0, 0);
  a.setSubMatrix(olderInput, 0, n + past - 1);
  if (whole === 0) b.setSubMatrix(rest.input, 0, 0);
  else a.setSubMatrix(rest.input, 0, n + whole - 1);
  b.set(n, 0, 1);
  for (let i = 1; i < past; i++) a.set(n + i, n + i - 1, 1);
  const c = Matrix.zeros(4, size);
  const rows = [PLANT_OUTPUT.roll, PLANT_OUTPUT.rollRate, PLANT_OUTPUT.store];
  rows.forEach((row, i) => {
    for (let j = 0; j < n; j++) c.set(row, j, C.get(i, j));
    c.set(row, n + past - 1, D.get(i, 0));
  });
  const perRate = plant.gravity > 0 ? plant.sensorHeight / (plant.gravity * dt) : 0;
  for (let j = 0; j < size; j++) {
    c.set(
      PLANT_OUTPUT.apparentRoll,
      j,
      c.get(PLANT_OUTPUT.roll, j) - perRate * c.get(PLANT_OUTPUT.rollRate, j),
    );
    if (isHigh) a.set(size - 1, j, c.get(PLANT_OUTPUT.rollRate, j));
  }
  if (isHigh) c.set(PLANT_OUTPUT.apparentRoll, size - 1, perRate);
  return {
    A: a,
    B: b,
    C: c,
    plantStates: n,
    pastCommands: past,
    sampleTime: dt,
    perRate,
    transition: full.transition,
    olderInput,
    newerInput: rest.input,
    C0: C,
    D0: D,
  };
}

/** A body on one line with one free gimbal on it: I p'' = k p - d p' - h q',  J q'' = k2 q - d2 q' + h p'. */
export interface FreeGimbalPlant {
  readonly inertia: number;
  readonly stiffness: number;
  readonly damping: number;
  readonly momentum: number;
  readonly gimbalInertia: number;
  readonly gimbalStiffness: number;
  readonly gimbalDamping: number;
}

/** State matrix of the free gimbal: roll, roll rate, tilt, tilt rate. */
export function buildFreeGimbal(p: FreeGimbalPlant): Matrix {
  return new Matrix([
    [0, 1, 0, 0],
    [p.stiffness / p.inertia, -p.damping / p.inertia, 0, -p.momentum / p.inertia],
    [0, 0, 0, 1],
    [
      0,
      p.momentum / p.gimbalInertia,
      p.gimbalStiffness / p.gimbalInertia,
      -p.gimbalDamping / p.gimbalInertia,
    ],
  ]);
}

export type FreeGimbalVerdict =
  /** holds (without friction); `least` N*m*s is the momentum it needs, 0 when it holds with the wheel at rest */
  | { readonly kind: 'holds'; readonly least: number }
  | { readonly kind: 'too-little-momentum'; readonly least: number }
  /** one of body and gimbal topples by itself and the other does not: a growing root at any momentum */
  | { readonly kind: 'impossible'; readonly reason: 'gimbal-bottom-heavy' | 'gimbal-top-heavy' };

/**
 * Whether a passive gimbal without friction holds the body up. Either both are stable by themselves, or both
 * are unstable and h > sqrt(I k2) + sqrt(J k); one of each never works, since the last coefficient of the
 * quartic is k k2. Damping is left out: it makes the toppling case drift away slowly at any momentum.
 *
 * Source: Routh's conditions on the quartic; the monorail, e.g. Spry and Girard, Multibody Syst. Dyn. 20
 * (2008) (from memory).
 */
export function judgeFreeGimbal(p: FreeGimbalPlant): FreeGimbalVerdict {
  if (p.stiffness > 0 && p.gimbalStiffness < 0) return { kind: 'impossible', reason: 'gimbal-bottom-heavy' };
  if (p.stiffness < 0 && p.gimbalStiffness > 0) return { kind: 'impossible', reason: 'gimbal-top-heavy' };
  if (p.stiffness <= 0 && p.gimbalStiffness <= 0) return { kind: 'holds', least: 0 };
  const least = Math.sqrt(p.inertia * p.gimbalStiffness) + Math.sqrt(p.gimbalInertia * p.stiffness);
  return p.momentum > least ? { kind: 'holds', least } : { kind: 'too-little-momentum', least };
}
