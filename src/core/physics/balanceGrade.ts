import type { FormulaNotes } from './formula';

/** ISO 21940-11 grades in common use, mm/s, and what they are asked of. */
export const BALANCE_GRADES = [
  { grade: 0.4, use: 'gyroscopes, precision spindles' },
  { grade: 1, use: 'grinding drives, small armatures' },
  { grade: 2.5, use: 'turbines, machine-tool drives' },
  { grade: 6.3, use: 'flywheels, fans, pumps, general machines' },
  { grade: 16, use: 'drive shafts, crushers' },
  { grade: 40, use: 'car wheels, crank drives' },
] as const;

export const BALANCE_FORMULAS: FormulaNotes<
  'eccentricity' | 'unbalance' | 'planes' | 'force' | 'bearingForce' | 'vibration' | 'alias'
> = {
  eccentricity: { formula: 'e_per = G / ω', source: 'ISO 21940-11:2016' },
  unbalance: { formula: 'U_per = m e_per', source: 'ISO 21940-11:2016' },
  planes: {
    formula: 'U_left = U b / (a + b), U_right = U a / (a + b)',
    source: 'ISO 21940-11:2016, allocation to the bearing planes',
  },
  force: { formula: 'F = U ω²', source: 'definition; Den Hartog, Mechanical Vibrations' },
  bearingForce: { formula: 'F_left = F b / (a + b), F_right = F a / (a + b)', source: 'statics' },
  vibration: {
    formula: 'a = F/M + (I⁻¹ (l × F)) × s, v = a/ω, x = a/ω², rate = I⁻¹ (l × F) / ω',
    source: 'free rigid body above its mounting resonance; Den Hartog',
  },
  alias: { formula: 'f_a = |f − f_s round(f / f_s)|', source: 'sampling theorem' },
};

/**
 * Permissible distance of the centre of mass from the spin axis, m.
 *
 * @param grade  mm/s, the G number
 * @param speed  rad/s, more than 0
 *
 * Source: ISO 21940-11:2016 (was ISO 1940-1).
 */
export const permissibleEccentricity = (grade: number, speed: number): number => (grade * 1e-3) / speed;

/** Permissible residual unbalance, kg*m; mass kg, speed rad/s. Source: ISO 21940-11:2016. */
export const permissibleUnbalance = (grade: number, speed: number, mass: number): number =>
  mass * permissibleEccentricity(grade, speed);

/** The same by the rule of the shop floor, 9549 G m / n, kg*m; mass kg, speed rpm. Source: ISO 21940-11. */
export const permissibleUnbalanceByRule = (grade: number, rpm: number, mass: number): number =>
  (9549 * grade * mass * 1e-6) / rpm;

/** Rotating force of an unbalance, N; kg*m and rad/s. Source: Den Hartog. */
export const unbalanceForce = (unbalance: number, speed: number): number => unbalance * speed * speed;

/** Shares of a load that lies `toLeft` from the left bearing and `toRight` from the right one, m. */
export const shareBetweenBearings = (
  load: number,
  toLeft: number,
  toRight: number,
): readonly [left: number, right: number] => {
  const span = toLeft + toRight;
  return [(load * toRight) / span, (load * toLeft) / span];
};

export interface VibrationInputs {
  /** kg*m, residual unbalance. */
  readonly unbalance: number;
  /** rad/s. */
  readonly speed: number;
  /** kg, of everything that shakes together. */
  readonly bodyMass: number;
  /** kg*m^2, of the body about the axis it rocks round, through its centre of mass. */
  readonly bodyInertia: number;
  /** m, from the body's centre of mass to the wheel, across that axis. */
  readonly wheelLever: number;
  /** m, the same to the sensor; positive on the wheel's side. */
  readonly sensorLever: number;
}

export interface Vibration {
  /** N, rotating with the wheel. */
  readonly force: number;
  /** m/s^2, amplitude at the sensor. */
  readonly acceleration: number;
  /** m/s. */
  readonly velocity: number;
  /** m. */
  readonly displacement: number;
  /** rad/s, amplitude that a rate gyro at the sensor sees. */
  readonly rate: number;
}

/**
 * How an unbalance shakes the sensor of a body that is free to move.
 *
 * @param of  see fields
 *
 * Holds above the mounting's own resonance and below the body's first bending one; at a resonance it is many
 * times more. O(1). Source: Newton; Den Hartog, Mechanical Vibrations.
 */
export function unbalanceVibration(of: VibrationInputs): Vibration {
  const force = unbalanceForce(of.unbalance, of.speed);
  const angular = (force * of.wheelLever) / of.bodyInertia;
  const acceleration = Math.abs(force / of.bodyMass + angular * of.sensorLever);
  return {
    force,
    acceleration,
    velocity: acceleration / of.speed,
    displacement: acceleration / (of.speed * of.speed),
    rate: Math.abs(angular) / of.speed,
  };
}

/** Frequency at which a vibration shows up in samples taken at a rate, Hz: at most half the rate. */
export const aliasFrequency = (frequency: number, sampleRate: number): number =>
  Math.abs(frequency - sampleRate * Math.round(frequency / sampleRate));
