/** What an array can do about one axis of the body. */
export interface AxisArray {
  /**
   * 'gimballed': a single wheel or a scissored pair, momentum e = momentum sin(tilt).
   * 'reaction': a wheel along the axis whose speed changes, e = J dOmega.
   */
  readonly kind: 'gimballed' | 'reaction';
  /** N m s: at a tilt of 90 degrees (h for a single wheel, 2 h for a pair); J dOmega for a reaction wheel */
  readonly momentum: number;
  /** rad, negative, more than -pi/2; not read for a reaction wheel */
  readonly tiltMin: number;
  /** rad, positive, less than pi/2; not read for a reaction wheel */
  readonly tiltMax: number;
  /** rad/s; not read for a reaction wheel */
  readonly tiltRate: number;
  /** N m, largest torque on the body; Infinity when nothing but the tilt rate bounds a gimballed array */
  readonly torque: number;
  readonly servo: ServoLimit | null;
}

/**
 * What turns the gimbals: torque asked of it is inertia * tilt'' - wheelMomentum * body rate * cos(tilt). The
 * minus is that of the energy given to the body: momentum + h sin(tilt) pushes it with -h cos(tilt) tilt'.
 */
export interface ServoLimit {
  /** N m, of one servo at its output */
  readonly torque: number;
  /** kg m^2 of one gimbal about its own axis, wheel included */
  readonly gimbalInertia: number;
  /** N m s of one wheel */
  readonly wheelMomentum: number;
  /** gimbals one servo turns: 1, or 2 for a geared pair */
  readonly gimbals: number;
}

/** Feet flat on the ground: the centre of pressure moves inside an interval. */
export interface FirmSupport {
  readonly kind: 'firm';
  /** N m at each node, about the support reference: what array and support must give together */
  readonly ask: Float64Array;
  /** N at each node, not negative */
  readonly verticalForce: Float64Array;
  /** m over each interval, margin already taken off */
  readonly pressureMin: Float64Array;
  readonly pressureMax: Float64Array;
}

/** A body that leans on an edge, point, rocker or float: I phi'' = k phi - d phi' + demand + array torque. */
export interface LeanSupport {
  readonly kind: 'lean';
  /** kg m^2 */
  readonly inertia: number;
  /** N m/rad: positive topples, negative rights */
  readonly stiffness: number;
  /** N m s/rad */
  readonly damping: number;
  /** N m at each node: moment that pushes the body towards positive lean */
  readonly demand: Float64Array;
  /** N, weight carried: turns a moment that cannot be trimmed into a shift of the centre of mass */
  readonly weight: number;
  /** rad */
  readonly leanMin: number;
  readonly leanMax: number;
}

export interface AxisPlan {
  readonly array: AxisArray;
  readonly support: FirmSupport | LeanSupport;
  /** rad/s at each node about this axis, apart from lean: loads the servo gyroscopically; null for none */
  readonly bodyRate: Float64Array | null;
}

/** Where an axis is at one end of a sequence. Lean figures are not read on firm footing. */
export interface AxisEnd {
  /** N m s */
  readonly momentum: number;
  /** rad and rad/s */
  readonly lean: number;
  readonly leanRate: number;
}

export type PlanEnds =
  /** the plan closes on itself: node N is node 0 */
  | { readonly kind: 'cyclic' }
  /** per axis; null leaves that axis's end free */
  | { readonly kind: 'given'; readonly start: readonly AxisEnd[]; readonly end: readonly (AxisEnd | null)[] };

/** Weights of the mean squares that make one plan better than another; each term is a share of its limit. */
export interface PlanWeights {
  /** centre of pressure from the middle of its interval, over half of the widest interval */
  readonly pressure: number;
  /** lean over its limit */
  readonly lean: number;
  /** momentum over what the array can store */
  readonly momentum: number;
  /** torque over what the array can give */
  readonly torque: number;
  /** change of torque in a tenth of a second over what the array can give */
  readonly change: number;
}

export const defaultPlanWeights: PlanWeights = Object.freeze({
  pressure: 1,
  lean: 1,
  momentum: 0.2,
  torque: 0.05,
  change: 0.001,
});

/**
 * A plan to be made: N intervals of `step` seconds, one or two axes. Arrays 'at each node' have N entries
 * when cyclic and N + 1 with given ends; arrays 'over each interval' have N.
 *
 * Between nodes momentum runs straight, so the torque is constant over an interval; ask, vertical force,
 * demand and body rate run straight too, and a support interval holds over its whole interval.
 */
export interface MomentumPlanProblem {
  /** N */
  readonly intervals: number;
  /** s */
  readonly step: number;
  readonly ends: PlanEnds;
  /** roll, or roll and pitch */
  readonly axes: readonly AxisPlan[];
  readonly weights: PlanWeights;
}

export const limitNames = [
  'momentum',
  'tilt rate',
  'torque',
  'servo torque',
  'centre of pressure',
  'lean',
  'mean moment',
] as const;
export type LimitName = (typeof limitNames)[number];

const requireThat = (holds: boolean, sentence: string): void => {
  if (!holds) throw new RangeError(sentence);
};

function requireLength(name: string, values: Float64Array, length: number): void {
  requireThat(values.length === length, `${name} has ${values.length} entries; it needs ${length}`);
  requireThat(values.every(Number.isFinite), `${name} holds something that is not a finite number`);
}

function requireAxis(axis: AxisPlan, nodes: number, intervals: number): void {
  const { array, support } = axis;
  requireThat(
    array.momentum > 0 && array.momentum < Infinity,
    `momentum is ${array.momentum} N m s; it must be positive`,
  );
  requireThat(array.torque > 0, `torque is ${array.torque} N m; it must be positive`);
  if (array.kind === 'gimballed') {
    requireThat(
      array.tiltMin > -Math.PI / 2 &&
        array.tiltMin <= 0 &&
        array.tiltMax >= 0 &&
        array.tiltMax < Math.PI / 2 &&
        array.tiltMin < array.tiltMax,
      `tilt limits are ${array.tiltMin} and ${array.tiltMax} rad; they must enclose zero within a right angle`,
    );
    requireThat(
      array.tiltRate > 0 && array.tiltRate < Infinity,
      `tilt rate is ${array.tiltRate} rad/s; it must be positive`,
    );
  } else {
    requireThat(array.torque < Infinity, 'a reaction wheel needs a finite torque');
  }
  if (axis.bodyRate) requireLength('body rate', axis.bodyRate, nodes);
  if (support.kind === 'firm') {
    requireLength('ask', support.ask, nodes);
    requireLength('vertical force', support.verticalForce, nodes);
    requireLength('least centre of pressure', support.pressureMin, intervals);
    requireLength('greatest centre of pressure', support.pressureMax, intervals);
    requireThat(
      support.verticalForce.every((v) => v >= 0),
      'vertical force must not be negative',
    );
  } else {
    requireLength('demand', support.demand, nodes);
    requireThat(support.inertia > 0, `inertia is ${support.inertia} kg m^2; it must be positive`);
    requireThat(
      support.leanMin < support.leanMax,
      `lean limits are ${support.leanMin} and ${support.leanMax} rad; the first must be the smaller`,
    );
  }
}

/** Throws a sentence when the numbers are no problem at all; a problem without a plan is not a mistake. */
export function requirePlanProblem(problem: MomentumPlanProblem): void {
  const { intervals, step, axes, ends } = problem;
  requireThat(
    Number.isInteger(intervals) && intervals >= 2,
    `intervals is ${intervals}; it must be 2 or more`,
  );
  requireThat(step > 0 && step < Infinity, `step is ${step} s; it must be positive`);
  requireThat(axes.length === 1 || axes.length === 2, `there are ${axes.length} axes; there must be 1 or 2`);
  const nodes = ends.kind === 'cyclic' ? intervals : intervals + 1;
  for (const axis of axes) requireAxis(axis, nodes, intervals);
  if (ends.kind === 'given') {
    requireThat(
      ends.start.length === axes.length && ends.end.length === axes.length,
      'each axis needs a start and an end',
    );
  }
}
