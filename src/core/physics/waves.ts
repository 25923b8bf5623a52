import type { FormulaNotes } from './formula';
import { STANDARD_GRAVITY } from './hydrostatics';
import { compileSpectrum, peakFrequencyOf, type WaveSpectrum } from './waveSpectra';

export const WAVE_FORMULAS: FormulaNotes<
  'length' | 'speed' | 'number' | 'slope' | 'encounter' | 'extremes' | 'realisation' | 'seaState'
> = {
  length: { formula: 'L = g T² / (2π)', source: 'Airy, deep water' },
  speed: { formula: 'c = g T / (2π)', source: 'Airy, deep water' },
  number: { formula: 'k = ω² / g', source: 'Airy, deep water' },
  slope: { formula: 'slope amplitude = k a = π H / L', source: 'Airy, deep water' },
  encounter: {
    formula: 'ω_e = ω − ω² V cos μ / g, μ = 0 following, 180° head',
    source: 'Lloyd, Seakeeping (1989); Tupper, Introduction to Naval Architecture',
  },
  extremes: {
    formula: 'H_max/(4√m_0) = √(ln N / 2) most probable; H_1/10 = 1.2727 (4√m_0)',
    source: 'Longuet-Higgins 1952 (Rayleigh)',
  },
  realisation: {
    formula: 'ζ = Σ √(2 S Δω) cos(ω t + φ), frequencies at random within their bands',
    source: 'Longuet-Higgins; random-phase sum, bands of equal energy',
  },
  seaState: { formula: 'bands of significant height', source: 'WMO Manual on Codes, table 3700' },
};

/** Length, m, of a deep-water wave of a period, s. Source: Airy. */
export const waveLength = (period: number, gravity: number = STANDARD_GRAVITY): number =>
  (gravity * period * period) / (2 * Math.PI);

/** Speed, m/s, of a deep-water wave of a period, s. Source: Airy. */
export const waveSpeed = (period: number, gravity: number = STANDARD_GRAVITY): number =>
  (gravity * period) / (2 * Math.PI);

/** Wave number, rad/m, at a frequency, rad/s. Source: Airy, deep water. */
export const waveNumber = (frequency: number, gravity: number = STANDARD_GRAVITY): number =>
  (frequency * frequency) / gravity;

/** Amplitude of surface slope, rad, of a wave of a height (crest to trough), m, and period, s. Source: Airy. */
export const waveSlope = (height: number, period: number, gravity: number = STANDARD_GRAVITY): number =>
  (Math.PI * height) / waveLength(period, gravity);

/**
 * Frequency of encounter, rad/s; negative when the craft overtakes the waves.
 *
 * @param frequency  rad/s, of the wave
 * @param speed      m/s, of the craft
 * @param heading    rad, 0 with following waves, pi against them
 *
 * Source: Lloyd, Seakeeping (1989).
 */
export const encounterFrequency = (
  frequency: number,
  speed: number,
  heading: number,
  gravity: number = STANDARD_GRAVITY,
): number => frequency - (frequency * frequency * speed * Math.cos(heading)) / gravity;

/** Upper bound of significant height, m, of WMO sea states 0 to 8; state 9 is everything above. */
export const SEA_STATE_HEIGHTS = [0, 0.1, 0.5, 1.25, 2.5, 4, 6, 9, 14] as const;

export const SEA_STATE_NAMES = [
  'calm (glassy)',
  'calm (rippled)',
  'smooth',
  'slight',
  'moderate',
  'rough',
  'very rough',
  'high',
  'very high',
  'phenomenal',
] as const;

/** WMO sea state of a significant height, m; a height on a bound takes the lower state. Source: table 3700. */
export function seaStateOf(height: number): number {
  for (let state = 0; state < SEA_STATE_HEIGHTS.length; state++) {
    if (height <= SEA_STATE_HEIGHTS[state]!) return state;
  }
  return 9;
}

/** Most probable greatest height of N waves over significant height. Source: Longuet-Higgins 1952. */
export const greatestHeightRatio = (waves: number): number => Math.sqrt(Math.log(waves) / 2);

/**
 * Mean height of the highest 1/n of waves over 4 sqrt(m0), n > 1. Source: Longuet-Higgins 1952 (Rayleigh).
 */
export function highestShareRatio(n: number): number {
  // H_1/n / sqrt(8 m0) = sqrt(ln n) + n (sqrt(pi)/2) erfc(sqrt(ln n)).
  const x = Math.sqrt(Math.log(n));
  return (x + (n * Math.sqrt(Math.PI) * complementaryError(x)) / 2) / Math.SQRT2;
}

/** erfc(x), x >= 0: series of erf below 2.5, continued fraction above. Source: Abramowitz & Stegun 7.1. */
function complementaryError(x: number): number {
  if (x < 2.5) {
    let term = x;
    let sum = x;
    for (let n = 1; n < 100 && Math.abs(term) > 1e-17 * sum; n++) {
      term *= (-x * x) / n;
      sum += term / (2 * n + 1);
    }
    return 1 - (2 / Math.sqrt(Math.PI)) * sum;
  }
  let fraction = 0;
  for (let k = 60; k >= 1; k--) fraction = k / 2 / (x + fraction);
  return Math.exp(-x * x) / (Math.sqrt(Math.PI) * (x + fraction));
}

/** A sea as a sum of cosines: elevation = sum amplitude cos(frequency t + phase). */
export interface WaveComponents {
  /** rad/s. */
  readonly frequency: Float64Array;
  /** m. */
  readonly amplitude: Float64Array;
  /** rad. */
  readonly phase: Float64Array;
}

/**
 * Splits a sea into components of equal energy, each at a random place within its band, so that the sum does
 * not repeat.
 *
 * @param spectrum    see WaveSpectrum
 * @param components  number of cosines, at least 1
 * @param draw        uniform draw in [0, 1); called twice a component, in order
 *
 * Deterministic for a given draw. Cost: 4000 evaluations of the spectrum. Source: Longuet-Higgins, random phase.
 */
export function splitSea(spectrum: WaveSpectrum, components: number, draw: () => number): WaveComponents {
  const { edges, total } = equalEnergyEdges(spectrum, components);
  const frequency = new Float64Array(components);
  const amplitude = new Float64Array(components);
  const phase = new Float64Array(components);
  const height = Math.sqrt((2 * total) / components);
  for (let i = 0; i < components; i++) {
    frequency[i] = edges[i]! + (edges[i + 1]! - edges[i]!) * draw();
    amplitude[i] = height;
    phase[i] = 2 * Math.PI * draw();
  }
  return { frequency, amplitude, phase };
}

/** Frequencies that part the energy between 0.4 and 8 peak frequencies equally; m0 of the whole spectrum. */
function equalEnergyEdges(spectrum: WaveSpectrum, parts: number): { edges: Float64Array; total: number } {
  const density = compileSpectrum(spectrum);
  const peak = peakFrequencyOf(spectrum);
  const n = 4000;
  const grid = new Float64Array(n + 1);
  const energy = new Float64Array(n + 1);
  for (let i = 0; i <= n; i++) grid[i] = peak * 0.4 * 20 ** (i / n);
  for (let i = 1; i <= n; i++) {
    const middle = density((grid[i]! + grid[i - 1]!) / 2);
    const step = grid[i]! - grid[i - 1]!;
    energy[i] = energy[i - 1]! + (step * (density(grid[i - 1]!) + 4 * middle + density(grid[i]!))) / 6;
  }
  // The tail past 8 peaks goes as w^-5: its energy is S w / 4, shared among all parts.
  const total = energy[n]! + (density(grid[n]!) * grid[n]!) / 4;
  const edges = new Float64Array(parts + 1);
  let j = 1;
  for (let i = 0; i <= parts; i++) {
    const wanted = (energy[n]! * i) / parts;
    while (j < n && energy[j]! < wanted) j++;
    const span = energy[j]! - energy[j - 1]!;
    const t = span > 0 ? (wanted - energy[j - 1]!) / span : 0;
    edges[i] = grid[j - 1]! + t * (grid[j]! - grid[j - 1]!);
  }
  return { edges, total };
}

/** Elevation, m, at a time, s, and a distance along the waves' way, m. O(components), allocates nothing. */
export function seaElevation(sea: WaveComponents, time: number, distance: number): number {
  let sum = 0;
  for (let i = 0; i < sea.frequency.length; i++) {
    const w = sea.frequency[i]!;
    sum += sea.amplitude[i]! * Math.cos(w * time - ((w * w) / STANDARD_GRAVITY) * distance + sea.phase[i]!);
  }
  return sum;
}

/** Slope of the surface along the waves' way, rad, as `seaElevation`. */
export function seaSlope(sea: WaveComponents, time: number, distance: number): number {
  let sum = 0;
  for (let i = 0; i < sea.frequency.length; i++) {
    const w = sea.frequency[i]!;
    const k = (w * w) / STANDARD_GRAVITY;
    sum += sea.amplitude[i]! * k * Math.sin(w * time - k * distance + sea.phase[i]!);
  }
  return sum;
}
