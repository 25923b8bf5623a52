/**
 * The laws a builder can put in firmware. Each is data; one step function serves them all.
 *
 * Lean is the estimated roll (rad), lean rate its rate (rad/s). Tilt is the command of the tilt (rad), which
 * the firmware knows without a sensor. Signs: positive gains of lean and lean rate hold a body whose array's
 * roll momentum is + h sin(tilt).
 */
export interface PidGains {
  readonly kp: number;
  readonly ki: number;
  readonly kd: number;
}

export interface FeedbackGains {
  /** rad/s of tilt rate per rad of lean: 1/s */
  readonly lean: number;
  /** rad/s of tilt rate per rad/s of lean rate */
  readonly leanRate: number;
  /** rad/s of tilt rate per rad of tilt: 1/s. Positive for a toppling body, negative for a float */
  readonly tilt: number;
  /** share of the last tilt rate that is kept, below 1: smooths the command */
  readonly tiltRate: number;
  /** rad/s of tilt rate per rad*s of tilt gathered: 1/s^2. Finds the balance point by itself; 0 for none */
  readonly trim: number;
}

/** A plan as columns, evenly spaced from time 0. */
export interface PlanColumns {
  /** s between two samples */
  readonly step: number;
  readonly isCyclic: boolean;
  /** rad */ readonly tilt: Float64Array;
  /** rad, what the body is meant to do */ readonly lean: Float64Array;
  /** rad/s */ readonly leanRate: Float64Array;
}

/** Gains that change along the plan: one row for each of `rows` evenly spaced instants, held between. */
export interface GainSchedule {
  /** s between two rows */
  readonly step: number;
  /** rows x 3: factors on lean, lean rate and tilt gains */
  readonly factors: Float64Array;
}

export type Controller =
  /** tilt = kp lean + ki (lean gathered) + kd (lean rate) */
  | ({ readonly kind: 'pidTilt' } & PidGains)
  /** tilt rate = kp lean + ki (lean gathered) + kd (lean rate) */
  | ({ readonly kind: 'pidTiltRate' } & PidGains)
  | ({ readonly kind: 'feedback' } & FeedbackGains)
  /** tilt = planned tilt + feedback on what differs from the plan; zero gains give the plan alone */
  | {
      readonly kind: 'planned';
      readonly plan: PlanColumns;
      readonly gains: FeedbackGains;
      readonly schedule?: GainSchedule;
    }
  /** the gimbal is free: spring, damper and pendulous mass do the work */
  | { readonly kind: 'passive' }
  /** gimbal held; torque (N*m) on the wheel = lean gain * lean + lean rate gain * lean rate + speed gain * momentum */
  | {
      readonly kind: 'reactionWheel';
      /** N*m/rad */ readonly lean: number;
      /** N*m*s/rad */ readonly leanRate: number;
      /** 1/s, N*m per N*m*s of wheel momentum */ readonly speed: number;
    };

const C = { gathered: 0, command: 1, rate: 2, tiltGathered: 3, time: 4 } as const;

export interface ControllerWork {
  readonly state: Float64Array;
}

export function createControllerWork(): ControllerWork {
  return { state: new Float64Array(5) };
}

/** Starts afresh with the gimbal at a tilt. */
export function resetController(work: ControllerWork, tilt: number): void {
  work.state.fill(0);
  work.state[C.command] = tilt;
}

/**
 * One tick: estimate in, command out (rad of tilt; N*m on the wheel for a reaction wheel; the tilt as it is
 * for a passive gimbal).
 *
 * @param lean,leanRate estimate, rad and rad/s
 * @param momentum N*m*s of a reaction wheel, else unused
 * @param tiltMin,tiltMax rad; the command stops there and nothing winds up behind it
 * @param dt s, nominal time between ticks
 *
 * O(1), allocates nothing.
 */
export function stepController(
  c: Controller,
  work: ControllerWork,
  lean: number,
  leanRate: number,
  momentum: number,
  tiltMin: number,
  tiltMax: number,
  dt: number,
): number {
  const s = work.state;
  switch (c.kind) {
    case 'pidTilt': {
      const before = s[C.gathered]!;
      s[C.gathered] = before + lean * dt;
      const asked = c.kp * lean + c.ki * s[C.gathered]! + c.kd * leanRate;
      const command = Math.min(Math.max(asked, tiltMin), tiltMax);
      /* Stop gathering while it would push further past the limit. */
      if ((asked - command) * c.ki * lean > 0) s[C.gathered] = before;
      s[C.command] = command;
      return command;
    }
    case 'pidTiltRate': {
      const before = s[C.gathered]!;
      s[C.gathered] = before + lean * dt;
      s[C.rate] = c.kp * lean + c.ki * s[C.gathered]! + c.kd * leanRate;
      const asked = s[C.command]! + s[C.rate]! * dt;
      const command = Math.min(Math.max(asked, tiltMin), tiltMax);
      if ((asked - command) * c.ki * lean > 0) s[C.gathered] = before;
      s[C.command] = command;
      return command;
    }
    case 'feedback':
      return stepFeedback(c, s, lean, leanRate, 1, 1, 1, tiltMin, tiltMax, dt);
    case 'planned':
      return stepPlanned(c, s, lean, leanRate, tiltMin, tiltMax, dt);
    case 'passive':
      return s[C.command]!;
    case 'reactionWheel':
      return c.lean * lean + c.leanRate * leanRate + c.speed * momentum;
  }
}

function stepFeedback(
  g: FeedbackGains,
  s: Float64Array,
  lean: number,
  leanRate: number,
  leanFactor: number,
  rateFactor: number,
  tiltFactor: number,
  tiltMin: number,
  tiltMax: number,
  dt: number,
): number {
  const rate =
    leanFactor * g.lean * lean +
    rateFactor * g.leanRate * leanRate +
    tiltFactor * (g.tilt * s[C.command]! + g.trim * s[C.tiltGathered]!) +
    g.tiltRate * s[C.rate]!;
  s[C.rate] = rate;
  const command = s[C.command]! + rate * dt;
  const held = Math.min(Math.max(command, tiltMin), tiltMax);
  s[C.command] = held;
  if (held === command) s[C.tiltGathered]! += held * dt;
  else s[C.rate] = 0;
  return held;
}

function readColumn(column: Float64Array, place: number, isCyclic: boolean): number {
  const n = column.length;
  const low = Math.floor(place);
  const part = place - low;
  if (isCyclic) {
    const i = ((low % n) + n) % n;
    return column[i]! + part * (column[(i + 1) % n]! - column[i]!);
  }
  if (low < 0) return column[0]!;
  if (low >= n - 1) return column[n - 1]!;
  return column[low]! + part * (column[low + 1]! - column[low]!);
}

function stepPlanned(
  c: Extract<Controller, { kind: 'planned' }>,
  s: Float64Array,
  lean: number,
  leanRate: number,
  tiltMin: number,
  tiltMax: number,
  dt: number,
): number {
  const plan = c.plan;
  const place = s[C.time]! / plan.step;
  s[C.time]! += dt;
  const planned = readColumn(plan.tilt, place, plan.isCyclic);
  let leanFactor = 1;
  let rateFactor = 1;
  let tiltFactor = 1;
  if (c.schedule !== undefined) {
    const rows = c.schedule.factors.length / 3;
    const at = Math.floor(s[C.time]! / c.schedule.step);
    const row = plan.isCyclic ? at % rows : Math.min(at, rows - 1);
    leanFactor = c.schedule.factors[3 * row]!;
    rateFactor = c.schedule.factors[3 * row + 1]!;
    tiltFactor = c.schedule.factors[3 * row + 2]!;
  }
  const awry = lean - readColumn(plan.lean, place, plan.isCyclic);
  const awryRate = leanRate - readColumn(plan.leanRate, place, plan.isCyclic);
  /* The feedback's own tilt is what it adds to the plan, so re-centring means returning to the plan. */
  const added = stepFeedback(
    c.gains,
    s,
    awry,
    awryRate,
    leanFactor,
    rateFactor,
    tiltFactor,
    tiltMin - planned,
    tiltMax - planned,
    dt,
  );
  return planned + added;
}
