import type { FormulaNotes } from './formula';
import { discFlow } from './rotatingDiscFlow';

/** The gas a wheel spins in. */
export interface Gas {
  /** Pa. */
  readonly pressure: number;
  /** kg/m^3. */
  readonly density: number;
  /** Pa*s. */
  readonly viscosity: number;
  /** m/s, mean speed of its molecules. */
  readonly molecularSpeed: number;
}

/** What stands around the wheel: nothing, or walls at a gap (m) from its faces and rim. */
export type Surround = { readonly kind: 'open' } | { readonly kind: 'walled'; readonly gap: number };

export type FlowRegime = 'laminar' | 'turbulent' | 'I' | 'II' | 'III' | 'IV';

export interface Windage {
  /** N*m. */
  readonly torque: number;
  /** W. */
  readonly power: number;
  /** N*m, of both faces and of the rim's outer surface. */
  readonly faces: number;
  readonly rim: number;
  readonly reynolds: number;
  readonly regime: FlowRegime;
  /** Mean free path over the gap (radius in the open); past 0.1 the gas no longer behaves as a fluid. */
  readonly knudsen: number;
}

export const WINDAGE_FORMULAS: FormulaNotes<
  | 'reynolds'
  | 'moment'
  | 'freeDisc'
  | 'enclosedDisc'
  | 'openRim'
  | 'enclosedRim'
  | 'rarefied'
  | 'gas'
  | 'power'
> = {
  reynolds: { formula: 'Re = ρ ω R² / μ', source: 'definition' },
  moment: { formula: 'T = C_M ρ ω² R⁵ / 2, both faces', source: 'definition' },
  freeDisc: {
    formula:
      'laminar C_M = 2π|G′(0)| / √Re = 3.870/√Re; turbulent 0.146/Re^0.2; past Re = 3·10⁵ laminar inside, turbulent outside',
    source:
      'von Kármán 1921; Cochran 1934; Schlichting, Boundary-Layer Theory; Theodorsen & Regier, NACA Report 793 (1944)',
  },
  enclosedDisc: {
    formula:
      'greatest of I 2π/(G Re), II 3.70 G^0.1/Re^0.5, III 0.080/(G^(1/6) Re^0.25), IV 0.102 G^0.1/Re^0.2; G = gap/R',
    source: 'Daily & Nece, ASME J. Basic Eng. 82 (1960) 217-232',
  },
  openRim: {
    formula: 'T = C_f ρ (ωR)²/2 · 2π R² w; laminar C_f = 4/Re, turbulent 1/√C_f = −0.6 + 4.07 lg(Re √C_f)',
    source: 'Theodorsen & Regier, NACA Report 793 (1944), from memory',
  },
  enclosedRim: {
    formula: 'T = C π ρ ω² R⁴ w / 2; C = 10, 2, 1.03, 0.065 (g/R)^0.3 Re_g^(−1, −0.6, −0.5, −0.2)',
    source: 'Bilgen & Boulos, ASME J. Fluids Eng. 95 (1973), from memory',
  },
  rarefied: {
    formula: '1/T = 1/T_fluid + 1/T_molecular; T_molecular = ρ c ω (π R⁴/4 + π R³ w/2), c = √(8 R_g T / π)',
    source: 'kinetic theory, diffuse walls; exact slip correction for plane Couette flow',
  },
  gas: {
    formula: 'ρ = p / (R_g T); μ = 1.458·10⁻⁶ T^1.5/(T + 110.4)',
    source: 'ideal gas; Sutherland, U.S. Standard Atmosphere 1976',
  },
  power: { formula: 'P = T ω', source: 'definition' },
};

export const STANDARD_PRESSURE = 101_325;
const AIR_CONSTANT = 287.053;

/** Dry air at a pressure (Pa) and a temperature (K). Source: ideal gas; Sutherland. */
export function airAt(pressure: number = STANDARD_PRESSURE, temperature = 293.15): Gas {
  return {
    pressure,
    density: pressure / (AIR_CONSTANT * temperature),
    viscosity: (1.458e-6 * temperature ** 1.5) / (temperature + 110.4),
    molecularSpeed: Math.sqrt((8 * AIR_CONSTANT * temperature) / Math.PI),
  };
}

/** m. Source: kinetic theory, mu = rho c lambda / 2. */
export const meanFreePath = (gas: Gas): number => (2 * gas.viscosity) / (gas.density * gas.molecularSpeed);

export const reynoldsNumber = (
  gas: Pick<Gas, 'density' | 'viscosity'>,
  speed: number,
  radius: number,
): number => (gas.density * speed * radius * radius) / gas.viscosity;

/** Moment coefficient of both faces of a free disc, laminar. Source: von Karman; Cochran. */
export const laminarDiscMoment = (reynolds: number): number => discFlow().momentFactor / Math.sqrt(reynolds);

/** The same, turbulent from the centre out. Source: von Karman; Schlichting. */
export const turbulentDiscMoment = (reynolds: number): number => 0.146 / reynolds ** 0.2;

/** Reynolds number at which the flow over a free disc turns turbulent. Source: Theodorsen & Regier. */
export const TRANSITION_REYNOLDS = 3e5;

/**
 * Moment coefficient of both faces of a free disc at any speed: laminar inside the radius where the local
 * Reynolds number is 3e5, turbulent outside it; continuous. O(1). Source: Schlichting, Boundary-Layer Theory.
 */
export function freeDiscMoment(reynolds: number): number {
  if (reynolds <= TRANSITION_REYNOLDS) return laminarDiscMoment(reynolds);
  const inside = Math.sqrt(TRANSITION_REYNOLDS / reynolds);
  const core = laminarDiscMoment(TRANSITION_REYNOLDS) - turbulentDiscMoment(TRANSITION_REYNOLDS);
  return turbulentDiscMoment(reynolds) + core * inside ** 5;
}

/** Moment coefficients of both faces of an enclosed disc in the four regimes, I to IV. Source: Daily & Nece. */
export const enclosedDiscMoments = (
  gapRatio: number,
  reynolds: number,
): readonly [I: number, II: number, III: number, IV: number] => [
  (2 * Math.PI) / (gapRatio * reynolds),
  (3.7 * gapRatio ** 0.1) / Math.sqrt(reynolds),
  0.08 / (gapRatio ** (1 / 6) * reynolds ** 0.25),
  (0.102 * gapRatio ** 0.1) / reynolds ** 0.2,
];

const REGIMES = ['I', 'II', 'III', 'IV'] as const;

function discMoment(
  surround: Surround,
  radius: number,
  reynolds: number,
): { moment: number; regime: FlowRegime } {
  if (surround.kind === 'open') {
    const regime = reynolds <= TRANSITION_REYNOLDS ? 'laminar' : 'turbulent';
    return { moment: freeDiscMoment(reynolds), regime };
  }
  const moments = enclosedDiscMoments(surround.gap / radius, reynolds);
  const moment = Math.max(...moments);
  return { moment, regime: REGIMES[moments.indexOf(moment)]! };
}

/** Skin friction of the outside of a drum in the open. Source: Theodorsen & Regier (from memory). */
export function openRimFriction(reynolds: number): number {
  const laminar = 4 / reynolds;
  let root = 0.06;
  for (let i = 0; i < 30; i++) {
    const x = -0.6 + 4.07 * Math.log10(reynolds * root);
    if (!(x > 1)) return laminar;
    root = 1 / x;
  }
  return Math.max(laminar, root * root);
}

/** Moment coefficient of a drum inside a sleeve. Source: Bilgen & Boulos (from memory). */
export function enclosedRimMoment(gapRatio: number, gapReynolds: number): number {
  const narrow = gapRatio ** 0.3;
  // The four laws cross near 64, 500 and 10^4; the greatest is the one that holds.
  return (
    narrow *
    Math.max(10 / gapReynolds, 2 / gapReynolds ** 0.6, 1.03 / gapReynolds ** 0.5, 0.065 / gapReynolds ** 0.2)
  );
}

function rimTorque(surround: Surround, gas: Gas, speed: number, radius: number, width: number): number {
  if (!(width > 0)) return 0;
  if (surround.kind === 'open') {
    const friction = openRimFriction(reynoldsNumber(gas, speed, radius));
    return friction * 0.5 * gas.density * (speed * radius) ** 2 * 2 * Math.PI * radius * radius * width;
  }
  const gapReynolds = (gas.density * speed * radius * surround.gap) / gas.viscosity;
  const moment = enclosedRimMoment(surround.gap / radius, gapReynolds);
  return 0.5 * moment * Math.PI * gas.density * speed * speed * radius ** 4 * width;
}

const bridge = (fluid: number, molecular: number): number =>
  fluid > 0 ? (fluid * molecular) / (fluid + molecular) : 0;

/**
 * Windage of a wheel, from open air to a few pascal.
 *
 * @param radius    m, of the wheel
 * @param width     m, of its rim's outer surface; 0 for a thin disc
 * @param speed     rad/s, at least 0
 * @param gas       what it spins in
 * @param surround  open, or walls at a gap
 *
 * Good to about 10 % for a smooth wheel in the disc regimes, worse for bolts and spokes. O(1). Sources: with
 * WINDAGE_FORMULAS.
 */
export function windage(radius: number, width: number, speed: number, gas: Gas, surround: Surround): Windage {
  const knudsen = meanFreePath(gas) / (surround.kind === 'walled' ? surround.gap : radius);
  if (!(speed > 0)) {
    return { torque: 0, power: 0, faces: 0, rim: 0, reynolds: 0, regime: 'laminar', knudsen };
  }
  const reynolds = reynoldsNumber(gas, speed, radius);
  const { moment, regime } = discMoment(surround, radius, reynolds);
  const molecular = gas.density * gas.molecularSpeed * speed * Math.PI;
  const faces = bridge(moment * 0.5 * gas.density * speed ** 2 * radius ** 5, (molecular * radius ** 4) / 4);
  const rim = bridge(rimTorque(surround, gas, speed, radius, width), (molecular * radius ** 3 * width) / 2);
  const torque = faces + rim;
  return { torque, power: torque * speed, faces, rim, reynolds, regime, knudsen };
}
