/**
 * Units stand at the edges only: everything inside is SI. A unit is a factor from itself to SI;
 * the first unit of a dimension is the one shown unless the user has chosen another.
 * Factors: SI Brochure 9th ed.; inch, pound and kilogram-force are exact by definition.
 */
export interface Unit {
  readonly symbol: string;
  readonly toSI: number;
}

const INCH = 0.0254;
const POUND = 0.453_592_37;
const STANDARD_GRAVITY = 9.806_65;
const DEGREE = Math.PI / 180;
const TURN_PER_MINUTE = (2 * Math.PI) / 60;

const unit = (symbol: string, toSI: number): Unit => ({ symbol, toSI });

export const DIMENSIONS = {
  ratio: [unit('', 1), unit('%', 0.01)],
  count: [unit('', 1)],
  length: [unit('mm', 1e-3), unit('m', 1), unit('cm', 1e-2), unit('in', INCH), unit('µm', 1e-6)],
  area: [unit('mm²', 1e-6), unit('m²', 1)],
  volume: [unit('cm³', 1e-6), unit('m³', 1), unit('L', 1e-3)],
  mass: [unit('kg', 1), unit('g', 1e-3), unit('lb', POUND), unit('t', 1000)],
  time: [unit('s', 1), unit('ms', 1e-3), unit('min', 60), unit('h', 3600)],
  frequency: [unit('Hz', 1), unit('kHz', 1000)],
  angle: [unit('°', DEGREE), unit('rad', 1), unit('deg', DEGREE)],
  angularRate: [unit('°/s', DEGREE), unit('rad/s', 1), unit('rpm', TURN_PER_MINUTE)],
  spinRate: [unit('rpm', TURN_PER_MINUTE), unit('rad/s', 1), unit('Hz', 2 * Math.PI)],
  angularAcceleration: [unit('rad/s²', 1), unit('°/s²', DEGREE)],
  speed: [unit('m/s', 1), unit('km/h', 1 / 3.6), unit('kn', 1852 / 3600)],
  acceleration: [unit('m/s²', 1), unit('g₀', STANDARD_GRAVITY)],
  force: [
    unit('N', 1),
    unit('kN', 1000),
    unit('kgf', STANDARD_GRAVITY),
    unit('lbf', POUND * STANDARD_GRAVITY),
  ],
  torque: [
    unit('N·m', 1),
    unit('mN·m', 1e-3),
    unit('kgf·cm', STANDARD_GRAVITY * 0.01),
    unit('lbf·in', POUND * STANDARD_GRAVITY * INCH),
  ],
  stiffness: [unit('N·m/rad', 1)],
  damping: [unit('N·m·s/rad', 1)],
  quadraticDamping: [unit('N·m·s²/rad²', 1)],
  impulse: [unit('N·s', 1)],
  angularMomentum: [unit('N·m·s', 1), unit('mN·m·s', 1e-3)],
  inertia: [unit('kg·m²', 1), unit('g·m²', 1e-3), unit('kg·cm²', 1e-4), unit('kg·mm²', 1e-6)],
  density: [unit('kg/m³', 1), unit('g/cm³', 1000)],
  stress: [
    unit('MPa', 1e6),
    unit('Pa', 1),
    unit('GPa', 1e9),
    unit('ksi', (1000 * POUND * STANDARD_GRAVITY) / INCH ** 2),
  ],
  pressure: [unit('kPa', 1000), unit('Pa', 1), unit('mbar', 100)],
  unbalance: [unit('g·mm', 1e-6), unit('kg·m', 1)],
  energy: [unit('J', 1), unit('kJ', 1000), unit('W·h', 3600)],
  power: [unit('W', 1), unit('kW', 1000), unit('mW', 1e-3)],
  voltage: [unit('V', 1), unit('mV', 1e-3)],
  current: [unit('A', 1), unit('mA', 1e-3)],
  charge: [unit('A·h', 3600), unit('mA·h', 3.6), unit('C', 1)],
  resistance: [unit('mΩ', 1e-3), unit('Ω', 1)],
  motorVelocity: [unit('rpm/V', TURN_PER_MINUTE), unit('rad/(s·V)', 1)],
  torqueConstant: [unit('mN·m/A', 1e-3), unit('N·m/A', 1)],
  temperature: [unit('K', 1)],
  rateNoise: [unit('°/s/√Hz', DEGREE), unit('rad/s/√Hz', 1)],
  accelerationNoise: [unit('m/s²/√Hz', 1), unit('mg₀/√Hz', STANDARD_GRAVITY * 1e-3)],
} as const satisfies Record<string, readonly Unit[]>;

export type Dimension = keyof typeof DIMENSIONS;

/** The units a dimension can be shown in, the usual one first. */
export const unitsOf = (dimension: Dimension): readonly Unit[] => DIMENSIONS[dimension];

/** Finds a unit of a dimension by its symbol; undefined when the dimension has no such unit. */
export const findUnit = (dimension: Dimension, symbol: string): Unit | undefined =>
  unitsOf(dimension).find((u) => u.symbol === symbol);

/** The usual unit, or the one named; throws on a symbol the dimension does not have (a programmer's mistake). */
export function unitFor(dimension: Dimension, symbol?: string): Unit {
  if (symbol === undefined) return unitsOf(dimension)[0] as Unit;
  const found = findUnit(dimension, symbol);
  if (!found) throw new Error(`${dimension} has no unit "${symbol}"`);
  return found;
}

export const toSI = (value: number, dimension: Dimension, symbol?: string): number =>
  value * unitFor(dimension, symbol).toSI;

export const fromSI = (value: number, dimension: Dimension, symbol?: string): number =>
  value / unitFor(dimension, symbol).toSI;
