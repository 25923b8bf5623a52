import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';

/** Energy of a sea over frequency: S(omega), m^2*s/rad, so that its integral is m0 and Hs = 4 sqrt(m0). */
export type WaveSpectrum =
  /** By significant height and peak period; Bretschneider, also called two-parameter Pierson-Moskowitz. */
  | { readonly kind: 'bretschneider'; readonly height: number; readonly peakPeriod: number }
  /** By significant height and mean period T1. */
  | { readonly kind: 'ittc'; readonly height: number; readonly meanPeriod: number }
  /** Fully grown sea by wind at 19.5 m, m/s. */
  | { readonly kind: 'wind'; readonly windSpeed: number }
  /** A young sea: peaked by gamma, 1 to 7, 3.3 as a rule. */
  | {
      readonly kind: 'jonswap';
      readonly height: number;
      readonly peakPeriod: number;
      readonly gamma: number;
    };

export const SPECTRUM_FORMULAS: FormulaNotes<
  'bretschneider' | 'ittc' | 'wind' | 'jonswap' | 'moments' | 'periods'
> = {
  bretschneider: {
    formula: 'S = 5/16 H² ω_p⁴ ω⁻⁵ exp(−5/4 (ω_p/ω)⁴)',
    source: 'Bretschneider; DNV-RP-C205',
  },
  ittc: {
    formula: 'S = 173 H²/T_1⁴ ω⁻⁵ exp(−691/(T_1⁴ ω⁴)), constants carried unrounded',
    source: 'ITTC Recommended Procedure 7.5-02-07-01.1',
  },
  wind: {
    formula: 'S = α g² ω⁻⁵ exp(−β (g/(U ω))⁴), α = 0.0081, β = 0.74',
    source: 'Pierson & Moskowitz, JGR 69 (1964)',
  },
  jonswap: {
    formula: 'S = N S_Bretschneider γ^exp(−½((ω−ω_p)/(σ ω_p))²), σ = 0.07 below ω_p, 0.09 above',
    source: 'Hasselmann et al. 1973; DNV-RP-C205',
  },
  moments: { formula: 'm_n = ∫ ωⁿ S dω', source: 'definition' },
  periods: {
    formula: 'T_1 = 2π m_0/m_1, T_z = 2π √(m_0/m_2); T_p/T_z = (5π/4)^(1/4)',
    source: 'ITTC; DNV-RP-C205',
  },
};

/** Gamma function by Lanczos' approximation (g = 7, 9 terms), x > 0.5. Source: Numerical Recipes, from memory. */
function gammaFunction(x: number): number {
  const c = [
    0.999_999_999_999_809_9, 676.520_368_121_885_1, -1259.139_216_722_402_8, 771.323_428_777_653_1,
    -176.615_029_162_140_6, 12.507_343_278_686_905, -0.138_571_095_265_720_12, 9.984_369_578_019_572e-6,
    1.505_632_735_149_311_6e-7,
  ] as const;
  const y = x - 1;
  let sum: number = c[0];
  for (let i = 1; i < c.length; i++) sum += c[i]! / (y + i);
  const t = y + 7.5;
  return Math.sqrt(2 * Math.PI) * t ** (y + 0.5) * Math.exp(-t) * sum;
}

/** T_p over T_z of a Bretschneider sea: (5 pi / 4)^(1/4). */
export const PEAK_OVER_ZERO_CROSSING = ((5 * Math.PI) / 4) ** 0.25;

/** T_p over T_1 of a Bretschneider sea: Gamma(3/4) (5/4)^(1/4). */
export const PEAK_OVER_MEAN = gammaFunction(0.75) * 1.25 ** 0.25;

/** A and B of S = A omega^-5 exp(-B omega^-4) with height H, m, and mean period T1, s. Source: ITTC. */
export function ittcConstants(
  height: number,
  meanPeriod: number,
): { readonly A: number; readonly B: number } {
  const peak = (2 * Math.PI) / (meanPeriod * PEAK_OVER_MEAN);
  const B = 1.25 * peak ** 4;
  return { A: (B * height * height) / 4, B };
}

/** Philips' and Pierson-Moskowitz' constants. */
const ALPHA = 0.0081;
const BETA = 0.74;

/** Significant height, m, and peak frequency, rad/s, of a sea fully grown under a wind. Source: Pierson & Moskowitz. */
export function seaOfWind(
  windSpeed: number,
  gravity: number = STANDARD_GRAVITY,
): { readonly height: number; readonly peakFrequency: number; readonly peakPeriod: number } {
  const peakFrequency = ((0.8 * BETA) ** 0.25 * gravity) / windSpeed;
  return {
    height: (2 * Math.sqrt(ALPHA / BETA) * windSpeed * windSpeed) / gravity,
    peakFrequency,
    peakPeriod: (2 * Math.PI) / peakFrequency,
  };
}

/** Share N that keeps a peaked spectrum's height, by the usual formula: 1 - 0.287 ln(gamma). Source: DNV-RP-C205. */
export const jonswapShareByFormula = (gamma: number): number => 1 - 0.287 * Math.log(gamma);

const jonswapPeak = (gamma: number, ratio: number): number => {
  const sigma = ratio <= 1 ? 0.07 : 0.09;
  const x = (ratio - 1) / sigma;
  return gamma ** Math.exp(-0.5 * x * x);
};

/** Shape w^-5 exp(-5/4 w^-4), w over the peak frequency; its integral is 1/5. */
const baseShape = (ratio: number): number => {
  const square = ratio * ratio;
  const fourth = square * square;
  return Math.exp(-1.25 / fourth) / (fourth * ratio);
};

/**
 * Share N by integration: with it the spectrum has exactly the height it is given. Simpson over the peak, where
 * gamma acts; the tails beyond +-12 sigma are the plain spectrum. Source: Hasselmann et al. 1973.
 */
export function jonswapShare(gamma: number): number {
  const excess = (from: number, to: number): number =>
    simpson((ratio) => (jonswapPeak(gamma, ratio) - 1) * baseShape(ratio), from, to, 400);
  const whole = 0.2 + excess(0.16, 1) + excess(1 + 1e-15, 2.08);
  return 0.2 / whole;
}

function simpson(f: (x: number) => number, from: number, to: number, intervals: number): number {
  const h = (to - from) / intervals;
  let sum = f(from) + f(to);
  for (let i = 1; i < intervals; i++) sum += (i % 2 === 1 ? 4 : 2) * f(from + i * h);
  return (sum * h) / 3;
}

/** Peak frequency of a spectrum, rad/s. */
export function peakFrequencyOf(spectrum: WaveSpectrum): number {
  switch (spectrum.kind) {
    case 'bretschneider':
    case 'jonswap':
      return (2 * Math.PI) / spectrum.peakPeriod;
    case 'ittc':
      return (2 * Math.PI) / (spectrum.meanPeriod * PEAK_OVER_MEAN);
    case 'wind':
      return seaOfWind(spectrum.windSpeed).peakFrequency;
  }
}

/** Significant height of a spectrum, m. */
export const heightOf = (spectrum: WaveSpectrum): number =>
  spectrum.kind === 'wind' ? seaOfWind(spectrum.windSpeed).height : spectrum.height;

/**
 * The spectrum as a function of frequency, m^2*s/rad against rad/s; 0 at and below 0.
 *
 * Each kind is the one shape, set by height and peak. Cost: once about 800 evaluations for a peaked one, then
 * O(1). Source: with SPECTRUM_FORMULAS.
 */
export function compileSpectrum(spectrum: WaveSpectrum): (frequency: number) => number {
  const peak = peakFrequencyOf(spectrum);
  const height = heightOf(spectrum);
  const gamma = spectrum.kind === 'jonswap' ? spectrum.gamma : 1;
  const scale = ((5 / 16) * height * height * jonswapShare(gamma)) / peak;
  return (frequency) => {
    if (!(frequency > 0)) return 0;
    const ratio = frequency / peak;
    return scale * baseShape(ratio) * (gamma === 1 ? 1 : jonswapPeak(gamma, ratio));
  };
}

/**
 * Moment m_n of a spectrum, n below 4: integral of omega^n S.
 *
 * Simpson in ln(omega) from 0.2 to 400 times the peak frequency and the w^-5 tail in closed form.
 */
export function spectralMoment(spectrum: WaveSpectrum, order: number): number {
  const peak = peakFrequencyOf(spectrum);
  const density = compileSpectrum(spectrum);
  const at = (x: number): number => {
    const frequency = peak * Math.exp(x);
    return density(frequency) * frequency ** (order + 1);
  };
  const far = 400;
  // The width of the peak changes at ln 1 = 0, where panels must meet.
  const body = simpson(at, Math.log(0.2), 0, 1200) + simpson(at, 1e-15, Math.log(far), 4000);
  const end = peak * far;
  return body + (density(end) * end ** (order + 1)) / (4 - order);
}

/** Mean period T1 and mean zero-crossing period Tz, s. Source: ITTC. */
export function meanPeriods(spectrum: WaveSpectrum): { readonly T1: number; readonly Tz: number } {
  const m0 = spectralMoment(spectrum, 0);
  return {
    T1: (2 * Math.PI * m0) / spectralMoment(spectrum, 1),
    Tz: 2 * Math.PI * Math.sqrt(m0 / spectralMoment(spectrum, 2)),
  };
}
