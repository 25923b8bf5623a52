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

/**
 * A plan as columns, evenly spaced from time 0. A cyclic one goes from its last sample on to its first: the
 * closing sample is not repeated.
 */
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

/* Kept between ticks, and from `lean` on what is handed in, worked with and handed out at each. */
const C = {
  gathered: 0,
  command: 1,
  rate: 2,
  tiltGathered: 3,
  time: 4,
  lean: 5,
  leanRate: 6,
  momentum: 7,
  tiltMin: 8,
  tiltMax: 9,
  dt: 10,
  output: 11,
  leanFactor: 12,
  rateFactor: 13,
  tiltFactor: 14,
  place: 15,
  read: 16,
} as const;

/** Where a caller that must make no garbage leaves its numbers for `tickController` and finds the command. */
export const CONTROLLER_PORT = {
  lean: C.lean,
  leanRate: C.leanRate,
  momentum: C.momentum,
  tiltMin: C.tiltMin,
  tiltMax: C.tiltMax,
  dt: C.dt,
  output: C.output,
} as const;

export interface ControllerWork {
  readonly state: Float64Array;
}

export function createControllerWork(): ControllerWork {
  return { state: new Float64Array(17) };
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
 * O(1).
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
  s[C.lean] = lean;
  s[C.leanRate] = leanRate;
  s[C.momentum] = momentum;
  s[C.tiltMin] = tiltMin;
  s[C.tiltMax] = tiltMax;
  s[C.dt] = dt;
  tickController(c, work);
  return s[C.output]!;
}

/** The same with everything in and out at CONTROLLER_PORT of `work.state`. Allocates nothing. */
export function tickController(c: Controller, work: ControllerWork): void {
  const s = work.state;
  switch (c.kind) {
    case 'pidTilt':
    case 'pidTiltRate':
      stepPid(c, s);
      return;
    case 'feedback':
      s[C.leanFactor] = 1;
      s[C.rateFactor] = 1;
      s[C.tiltFactor] = 1;
      stepFeedback(c, s);
      return;
    case 'planned':
      stepPlanned(c, s);
      return;
    case 'passive':
      s[C.output] = s[C.command]!;
      return;
    case 'reactionWheel':
      s[C.output] = c.lean * s[C.lean]! + c.leanRate * s[C.leanRate]! + c.speed * s[C.momentum]!;
  }
}

function stepPid(c: Extract<Controller, { kind: 'pidTilt' | 'pidTiltRate' }>, s: Float64Array): void {
  const lean = s[C.lean]!;
  const dt = s[C.dt]!;
  const before = s[C.gathered]!;
  s[C.gathered] = before + lean * dt;
  let asked = c.kp * lean + c.ki * s[C.gathered]! + c.kd * s[C.leanRate]!;
  if (c.kind === 'pidTiltRate') {
    s[C.rate] = asked;
    asked = s[C.command]! + asked * dt;
  }
  const command = Math.min(Math.max(asked, s[C.tiltMin]!), s[C.tiltMax]!);
  /* Stop gathering while it would push further past the limit. */
  if ((asked - command) * c.ki * lean > 0) s[C.gathered] = before;
  s[C.command] = command;
  s[C.output] = command;
}

function stepFeedback(g: FeedbackGains, s: Float64Array): void {
  const dt = s[C.dt]!;
  const rate =
    s[C.leanFactor]! * g.lean * s[C.lean]! +
    s[C.rateFactor]! * g.leanRate * s[C.leanRate]! +
    s[C.tiltFactor]! * (g.tilt * s[C.command]! + g.trim * s[C.tiltGathered]!) +
    g.tiltRate * s[C.rate]!;
  s[C.rate] = rate;
  const asked = s[C.command]! + rate * dt;
  const held = Math.min(Math.max(asked, s[C.tiltMin]!), s[C.tiltMax]!);
  s[C.command] = held;
  if (held === asked) s[C.tiltGathered]! += held * dt;
  else s[C.rate] = 0;
  s[C.output] = held;
}

/* The column at s[place] samples, left in s[read]: straight between samples. */
function readColumn(column: Float64Array, isCyclic: boolean, s: Float64Array): void {
  const n = column.length;
  const place = s[C.place]!;
  const low = Math.floor(place);
  const part = place - low;
  if (isCyclic) {
    const i = ((low % n) + n) % n;
    s[C.read] = column[i]! + part * (column[i + 1 === n ? 0 : i + 1]! - column[i]!);
  } else if (low < 0) s[C.read] = column[0]!;
  else if (low >= n - 1) s[C.read] = column[n - 1]!;
  else s[C.read] = column[low]! + part * (column[low + 1]! - column[low]!);
}

function stepPlanned(c: Extract<Controller, { kind: 'planned' }>, s: Float64Array): void {
  const plan = c.plan;
  s[C.leanFactor] = 1;
  s[C.rateFactor] = 1;
  s[C.tiltFactor] = 1;
  if (c.schedule !== undefined) {
    const rows = c.schedule.factors.length / 3;
    const at = Math.floor(s[C.time]! / c.schedule.step + 1e-9);
    const row = plan.isCyclic ? at % rows : Math.min(at, rows - 1);
    s[C.leanFactor] = c.schedule.factors[3 * row]!;
    s[C.rateFactor] = c.schedule.factors[3 * row + 1]!;
    s[C.tiltFactor] = c.schedule.factors[3 * row + 2]!;
  }
  s[C.place] = s[C.time]! / plan.step;
  s[C.time]! += s[C.dt]!;
  readColumn(plan.lean, plan.isCyclic, s);
  s[C.lean]! -= s[C.read]!;
  readColumn(plan.leanRate, plan.isCyclic, s);
  s[C.leanRate]! -= s[C.read]!;
  readColumn(plan.tilt, plan.isCyclic, s);
  const planned = s[C.read]!;
  /* The feedback's own tilt is what it adds to the plan, so re-centring means returning to the plan. */
  s[C.tiltMin]! -= planned;
  s[C.tiltMax]! -= planned;
  stepFeedback(c.gains, s);
  s[C.output]! += planned;
}
