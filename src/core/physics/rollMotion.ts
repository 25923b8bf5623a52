import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';

export const ROLL_FORMULAS: FormulaNotes<
  | 'period'
  | 'codePeriod'
  | 'rollBack'
  | 'decrement'
  | 'reduction'
  | 'addedInertia'
  | 'linearDamping'
  | 'quadraticDamping'
  | 'equivalentDamping'
> = {
  period: { formula: 'T = 2π √((I + I_a) / (m g GM)) = 2π k / √(g GM)', source: 'linear roll theory' },
  codePeriod: {
    formula: 'T = 2 C B / √GM, C = 0.373 + 0.023 B/d − 0.043 L/100',
    source: 'IMO 2008 IS Code, Res. MSC.267(85), Part A 2.3; meant for ships of 24 m and more',
  },
  rollBack: {
    formula: 'φ_1 = 109 k X_1 X_2 √(r s), r = 0.73 + 0.6 OG/d',
    source: 'IMO 2008 IS Code, Part A 2.3.4 (tables from memory)',
  },
  decrement: { formula: 'δ = ln(φ_1/φ_2) = 2π ζ / √(1 − ζ²)', source: 'any vibration text' },
  reduction: {
    formula: 'RR = 1 − σ_with / σ_without, of roll angle',
    source: 'Perez, Ship Motion Control (2005)',
  },
  addedInertia: { formula: 'I_a = 0.2 I (0.1 to 0.3)', source: 'common practice, from memory' },
  linearDamping: {
    formula: 'b = 2 ζ √((I + I_a) m g GM); ζ = 0.03 round bilge, 0.05 hard chine',
    source: 'common practice, from memory; a roll-decay test replaces it',
  },
  quadraticDamping: {
    formula: 'b_2 = 3π/(8 ω φ) b at φ = 10°, plus ½ ρ C_D L (r_2⁴ − r_1⁴)/4 of a fin, C_D = 1.2',
    source: 'equivalent linear damping; strip theory of a flat plate; from memory',
  },
  equivalentDamping: {
    formula: 'b_e = b + 8/(3π) ω φ b_2',
    source: 'energy per cycle; Lloyd, Seakeeping (1989)',
  },
};

/** Roll period, s, of a radius of gyration k (added inertia in it), m. Source: linear roll theory. */
export const rollPeriod = (
  radiusOfGyration: number,
  GM: number,
  gravity: number = STANDARD_GRAVITY,
): number => (2 * Math.PI * radiusOfGyration) / Math.sqrt(gravity * GM);

/** Roll period, s, from inertia (dry and added), kg*m^2, mass, kg, and GM, m; NaN when GM is not positive. */
export const rollPeriodOf = (inertia: number, mass: number, GM: number): number =>
  2 * Math.PI * Math.sqrt(inertia / (mass * STANDARD_GRAVITY * GM));

/**
 * Roll period by the stability code's rule, s, and its coefficient C. For ships of 24 m and more; a bracket
 * only for a small craft.
 *
 * @param beam, draught, length, GM  m, at the waterline
 *
 * Source: IMO 2008 IS Code, Part A 2.3.
 */
export function codeRollPeriod(
  beam: number,
  draught: number,
  length: number,
  GM: number,
): { readonly coefficient: number; readonly period: number } {
  const coefficient = 0.373 + 0.023 * (beam / draught) - 0.043 * (length / 100);
  return { coefficient, period: (2 * coefficient * beam) / Math.sqrt(GM) };
}

type Table = readonly (readonly [number, number])[];

/** IMO 2008 IS Code Part A, tables 2.3.4-1 to -4, from memory. */
const X1_BY_BEAM: Table = [
  [2.4, 1],
  [2.5, 0.98],
  [2.6, 0.96],
  [2.7, 0.95],
  [2.8, 0.93],
  [2.9, 0.91],
  [3, 0.9],
  [3.1, 0.88],
  [3.2, 0.86],
  [3.4, 0.82],
  [3.5, 0.8],
];
const X2_BY_BLOCK: Table = [
  [0.45, 0.75],
  [0.5, 0.82],
  [0.55, 0.89],
  [0.6, 0.95],
  [0.65, 0.97],
  [0.7, 1],
];
const K_BY_BILGE_KEEL: Table = [
  [0, 1],
  [1, 0.98],
  [1.5, 0.95],
  [2, 0.88],
  [2.5, 0.79],
  [3, 0.74],
  [3.5, 0.72],
  [4, 0.7],
];
const S_BY_PERIOD: Table = [
  [6, 0.1],
  [7, 0.098],
  [8, 0.093],
  [12, 0.065],
  [14, 0.053],
  [16, 0.044],
  [18, 0.038],
  [20, 0.035],
];

/** Straight between rows, held at the ends. */
function lookUp(table: Table, x: number): number {
  if (x <= table[0]![0]) return table[0]![1];
  for (let i = 1; i < table.length; i++) {
    const [x1, y1] = table[i]!;
    if (x > x1) continue;
    const [x0, y0] = table[i - 1]!;
    return y0 + ((x - x0) / (x1 - x0)) * (y1 - y0);
  }
  return table[table.length - 1]![1];
}

export interface RollBackInputs {
  readonly beamOverDraught: number;
  readonly blockCoefficient: number;
  /** Percent: area of bilge keels and bar keel over length times beam, times 100; a sharp bilge counts as 4. */
  readonly bilgeKeelShare: number;
  /** m, centre of mass above the waterline (negative below). */
  readonly centreAboveWater: number;
  readonly draught: number;
  /** s. */
  readonly period: number;
}

export interface RollBack {
  readonly k: number;
  readonly X1: number;
  readonly X2: number;
  readonly r: number;
  readonly s: number;
  /** rad. */
  readonly angle: number;
}

/** Angle to which beam waves roll a craft to windward, by the weather criterion. Source: IMO 2008 IS Code. */
export function rollBackAngle(of: RollBackInputs): RollBack {
  const k = lookUp(K_BY_BILGE_KEEL, of.bilgeKeelShare);
  const X1 = lookUp(X1_BY_BEAM, of.beamOverDraught);
  const X2 = lookUp(X2_BY_BLOCK, of.blockCoefficient);
  const r = 0.73 + (0.6 * of.centreAboveWater) / of.draught;
  const s = lookUp(S_BY_PERIOD, of.period);
  return { k, X1, X2, r, s, angle: (109 * k * X1 * X2 * Math.sqrt(r * s) * Math.PI) / 180 };
}

/** Logarithmic decrement of one full cycle at a damping ratio below 1. Source: any vibration text. */
export const logarithmicDecrement = (dampingRatio: number): number =>
  (2 * Math.PI * dampingRatio) / Math.sqrt(1 - dampingRatio * dampingRatio);

/** Damping ratio from two peaks some full cycles apart. Source: any vibration text. */
export function dampingFromPeaks(first: number, later: number, cycles = 1): number {
  const decrement = Math.log(first / later) / cycles;
  return decrement / Math.sqrt(4 * Math.PI * Math.PI + decrement * decrement);
}

/** Share by which roll is reduced, from root-mean-square roll angles. Source: Perez (2005). */
export const rollReduction = (rmsWith: number, rmsWithout: number): number => 1 - rmsWith / rmsWithout;

/** Linear damping with the same loss per cycle at an amplitude, rad, and a frequency, rad/s. Source: Lloyd. */
export const equivalentLinearDamping = (
  linear: number,
  quadratic: number,
  frequency: number,
  amplitude: number,
): number => linear + (8 / (3 * Math.PI)) * frequency * amplitude * quadratic;

export interface RollStartInputs {
  readonly sectionKind: 'deadrise' | 'bilge';
  /** kg*m^2, of the whole rig about its centre of mass, in air. */
  readonly dryInertia: number;
  /** kg. */
  readonly mass: number;
  /** m; a rig of negative GM gets the damping of the same GM upright. */
  readonly GM: number;
  readonly waterDensity: number;
  /** m, fin: its length and the distances of its root and tip from the roll axis; undefined without. */
  readonly fin: { readonly length: number; readonly root: number; readonly tip: number } | undefined;
}

/** Starting values of what only a roll-decay test can tell. */
export interface RollStart {
  /** kg*m^2. */
  readonly addedInertia: number;
  /** N*m*s/rad. */
  readonly linearDamping: number;
  /** N*m*s^2/rad^2. */
  readonly quadraticDamping: number;
}

const USUAL_ADDED_INERTIA = 0.2;
const USUAL_DAMPING = { bilge: 0.03, deadrise: 0.05 } as const;
const USUAL_AMPLITUDE = (10 * Math.PI) / 180;
const PLATE_DRAG = 1.2;

/** Usual starting values of added inertia and roll damping. Source: common practice, from memory. */
export function usualRollStart(of: RollStartInputs): RollStart {
  const addedInertia = USUAL_ADDED_INERTIA * of.dryInertia;
  const inertia = of.dryInertia + addedInertia;
  const stiffness = of.mass * STANDARD_GRAVITY * Math.abs(of.GM);
  const linearDamping = 2 * USUAL_DAMPING[of.sectionKind] * Math.sqrt(inertia * stiffness);
  const frequency = Math.sqrt(stiffness / inertia);
  const hull = frequency > 0 ? ((3 * Math.PI) / (8 * frequency * USUAL_AMPLITUDE)) * linearDamping : 0;
  const fin = of.fin
    ? (0.5 * of.waterDensity * PLATE_DRAG * of.fin.length * (of.fin.tip ** 4 - of.fin.root ** 4)) / 4
    : 0;
  return { addedInertia, linearDamping, quadraticDamping: hull + fin };
}
