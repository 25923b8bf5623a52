import { shareBetweenBearings } from './balanceGrade';
import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';

export const BEARING_FORMULAS: FormulaNotes<
  | 'gyroscopicLoad'
  | 'radialLoad'
  | 'dynamicLoad'
  | 'staticLoad'
  | 'life'
  | 'lifeHours'
  | 'meanLoad'
  | 'simpleDrag'
  | 'lubricantDrag'
> = {
  gyroscopicLoad: { formula: 'F = h θ̇ / L on each bearing', source: 'statics of the couple h × ω' },
  radialLoad: { formula: 'F_r = share of m g + share of U ω² + h θ̇ / L', source: 'statics, all in line' },
  dynamicLoad: {
    formula: 'P = F_r when F_a/F_r ≤ e, else 0.56 F_r + Y F_a; e and Y by f_0 F_a / C_0',
    source: 'ISO 281:2007, deep-groove ball, normal clearance (table from memory)',
  },
  staticLoad: {
    formula: 'P_0 = max(F_r, 0.6 F_r + 0.5 F_a), s_0 = C_0 / P_0',
    source: 'ISO 76:2006, deep-groove ball',
  },
  life: { formula: 'L_10 = (C/P)³ 10⁶ turns (roller: 10/3)', source: 'ISO 281:2007' },
  lifeHours: { formula: 'hours = L_10 / (60 n)', source: 'ISO 281:2007' },
  meanLoad: { formula: 'P_m = (Σ q P³)^(1/3)', source: 'ISO 281:2007, Palmgren-Miner' },
  simpleDrag: { formula: 'M = μ P d / 2', source: 'maker handbooks: deep-groove μ 0.0010 to 0.0015' },
  lubricantDrag: {
    formula: 'M = 10⁻⁷ f (ν n)^(2/3) d_m³ (N·mm, mm²/s, rpm, mm); below ν n = 2000: 160·10⁻⁷ f d_m³',
    source: 'Palmgren; Harris, Rolling Bearing Analysis (from memory)',
  },
};

export interface WheelLoads {
  /** kg, wheel with its shaft. */
  readonly mass: number;
  /** kg*m^2/s, spin momentum. */
  readonly momentum: number;
  /** kg*m, residual unbalance. */
  readonly unbalance: number;
  /** rad/s. */
  readonly speed: number;
  /** rad/s, greatest rate at which gimbal and body turn the spin axis. */
  readonly gimbalRate: number;
  /** m, from each bearing to the wheel's centre; their sum is the span. */
  readonly toLeft: number;
  readonly toRight: number;
  /** N, axial preload. */
  readonly preload: number;
  /** Weight counted as g; raise it for a craft that slams. */
  readonly loadFactor: number;
}

export interface BearingLoad {
  /** N, from weight, when the spin axis lies level. */
  readonly weight: number;
  readonly unbalance: number;
  /** N, from turning the spin axis; it usually rules. */
  readonly gyroscopic: number;
  /** N, all of them in line: the worst instant of a turn. */
  readonly radial: number;
  /** N, preload, and the weight when the spin axis stands upright. */
  readonly axial: number;
}

/**
 * Loads of the two bearings of a wheel.
 *
 * @param of  see fields; SI
 * @returns   left and right bearing; worst case, as weight, unbalance and couple line up once a turn
 *
 * O(1). Source: statics; couple h x rate.
 */
export function bearingLoads(of: WheelLoads): readonly [left: BearingLoad, right: BearingLoad] {
  const weight = of.mass * STANDARD_GRAVITY * of.loadFactor;
  const weights = shareBetweenBearings(weight, of.toLeft, of.toRight);
  const unbalances = shareBetweenBearings(of.unbalance * of.speed ** 2, of.toLeft, of.toRight);
  const gyroscopic = gyroscopicLoad(of.momentum, of.gimbalRate, of.toLeft + of.toRight);
  const one = (i: 0 | 1): BearingLoad => ({
    weight: weights[i],
    unbalance: unbalances[i],
    gyroscopic,
    radial: weights[i] + unbalances[i] + gyroscopic,
    axial: of.preload + weight,
  });
  return [one(0), one(1)];
}

/** Load on each of two bearings from turning the spin axis, N. Source: statics of the couple. */
export const gyroscopicLoad = (momentum: number, rate: number, span: number): number =>
  Math.abs((momentum * rate) / span);

/** f0 Fa/C0 -> e, Y of deep-groove ball bearings, normal clearance. ISO 281:2007 table 3 (from memory). */
const AXIAL_TABLE = [
  [0.172, 0.19, 2.3],
  [0.345, 0.22, 1.99],
  [0.689, 0.26, 1.71],
  [1.03, 0.28, 1.55],
  [1.38, 0.3, 1.45],
  [2.07, 0.34, 1.31],
  [3.45, 0.38, 1.15],
  [5.17, 0.42, 1.04],
  [6.89, 0.44, 1.0],
] as const;

/** e and Y by linear interpolation, held at the table's ends. */
export function axialFactors(ratio: number): { readonly e: number; readonly Y: number } {
  const first = AXIAL_TABLE[0];
  if (ratio <= first[0]) return { e: first[1], Y: first[2] };
  for (let i = 1; i < AXIAL_TABLE.length; i++) {
    const [x1, e1, y1] = AXIAL_TABLE[i]!;
    if (ratio > x1) continue;
    const [x0, e0, y0] = AXIAL_TABLE[i - 1]!;
    const t = (ratio - x0) / (x1 - x0);
    return { e: e0 + t * (e1 - e0), Y: y0 + t * (y1 - y0) };
  }
  const last = AXIAL_TABLE[AXIAL_TABLE.length - 1]!;
  return { e: last[1], Y: last[2] };
}

/**
 * Equivalent dynamic load of a deep-groove ball bearing, N.
 *
 * @param radial        N, at least 0
 * @param axial         N, at least 0
 * @param staticRating  N, C0
 * @param f0            maker's factor, about 12 to 16; 14 is a fair start
 *
 * O(1). Source: ISO 281:2007.
 */
export function equivalentDynamicLoad(radial: number, axial: number, staticRating: number, f0 = 14): number {
  const { e, Y } = axialFactors((f0 * axial) / staticRating);
  return axial <= e * radial ? radial : Math.max(radial, 0.56 * radial + Y * axial);
}

/** Equivalent static load of a deep-groove ball bearing, N. Source: ISO 76:2006. */
export const equivalentStaticLoad = (radial: number, axial: number): number =>
  Math.max(radial, 0.6 * radial + 0.5 * axial);

/** C0 over the equivalent static load; below 1 the balls dent the races. Source: ISO 76:2006. */
export const staticSafety = (radial: number, axial: number, staticRating: number): number =>
  staticRating / equivalentStaticLoad(radial, axial);

export const BALL_LIFE_EXPONENT = 3;
export const ROLLER_LIFE_EXPONENT = 10 / 3;

/** Turns that nine of ten bearings outlive. Source: ISO 281:2007. */
export const lifeTurns = (
  dynamicRating: number,
  load: number,
  exponent: number = BALL_LIFE_EXPONENT,
): number => (dynamicRating / load) ** exponent * 1e6;

/** The same in seconds at a speed, rad/s. Source: ISO 281:2007. */
export const lifeSeconds = (
  dynamicRating: number,
  load: number,
  speed: number,
  exponent: number = BALL_LIFE_EXPONENT,
): number => (lifeTurns(dynamicRating, load, exponent) * 2 * Math.PI) / speed;

/**
 * Steady load that wears as much as a varying one, N.
 *
 * @param loads   n, N
 * @param shares  n, fractions of all turns; they need not add to 1
 *
 * O(n). Source: ISO 281:2007 (Palmgren-Miner).
 */
export function meanLoad(
  loads: ArrayLike<number>,
  shares: ArrayLike<number>,
  exponent: number = BALL_LIFE_EXPONENT,
): number {
  let sum = 0;
  let whole = 0;
  for (let i = 0; i < loads.length; i++) {
    sum += shares[i]! * loads[i]! ** exponent;
    whole += shares[i]!;
  }
  return (sum / whole) ** (1 / exponent);
}

/**
 * Mean load of a bearing whose gyroscopic part swings as a sine while the rest is steady, N: the gimbal of a
 * walking or rolling body goes to and fro.
 *
 * @param steady   N, weight and unbalance
 * @param swing    N, greatest gyroscopic load
 *
 * Cost: 64 samples. Source: as `meanLoad`.
 */
export function swingingMeanLoad(steady: number, swing: number): number {
  const n = 64;
  let sum = 0;
  for (let i = 0; i < n; i++) {
    sum += (steady + Math.abs(swing * Math.sin((Math.PI * (i + 0.5)) / n))) ** BALL_LIFE_EXPONENT;
  }
  return (sum / n) ** (1 / BALL_LIFE_EXPONENT);
}

/** Friction torque of one bearing, N*m; load N, bore m. Good to a factor of 2. Source: maker handbooks. */
export const bearingDrag = (friction: number, load: number, bore: number): number =>
  0.5 * friction * load * bore;

/**
 * Lubricant's share of the friction torque of one bearing, N*m: on top of `bearingDrag`, and the larger one
 * for a fast, lightly loaded wheel.
 *
 * @param speed         rad/s
 * @param meanDiameter  m, half the sum of bore and outer diameter
 * @param viscosity     m^2/s, of oil, or of the base oil of a grease, at running temperature
 * @param factor        f0: about 1 for oil mist, 1.5 to 2 for grease or oil bath in deep-groove bearings
 *
 * O(1). Source: Palmgren; Harris, Rolling Bearing Analysis (from memory).
 */
export function lubricantDrag(speed: number, meanDiameter: number, viscosity: number, factor = 1.5): number {
  const rpm = (Math.abs(speed) * 60) / (2 * Math.PI);
  const product = viscosity * 1e6 * rpm;
  const cube = (meanDiameter * 1e3) ** 3;
  const torque = product >= 2000 ? product ** (2 / 3) : 160;
  return 1e-7 * factor * torque * cube * 1e-3;
}
