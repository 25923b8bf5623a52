/** Waves under a small hull by the theory of effective slope: regular trains and seeded seas, as surface, slope and roll moment. */
import { createRandom, drawUniform } from '../control';
import { compileSpectrum, encounterFrequency, type WaveSpectrum, waveNumber } from '../physics';
import type { Disturbance } from '../rig';

/** What of a hull the waves act on. */
export interface WaveBody {
  /** N*m/rad: weight times metacentric height. */
  readonly stiffness: number;
  /** m, at the waterline. */
  readonly beam: number;
  /** m */
  readonly draught: number;
}

/** Sinusoids that make up a sea at the moving hull. All arrays one entry a component. */
export interface WaveTrain {
  readonly components: number;
  /** m */
  readonly amplitude: Float64Array;
  /** rad/s as a fixed observer and as the hull meets them (negative: it overtakes the wave). */
  readonly frequency: Float64Array;
  readonly encounter: Float64Array;
  /** rad/m */
  readonly wavenumber: Float64Array;
  /** rad */
  readonly phase: Float64Array;
  /** rad: 0 following, 90 degrees from the right, 180 degrees head sea. */
  readonly heading: number;
}

export type Waves = Extract<Disturbance, { kind: 'waves' | 'sea' }>;

/**
 * Share of the wave's slope that a hull answers to: the slope averaged over its beam, at half its draught.
 *
 * @param wavenumber  rad/m
 * @param heading     rad
 *
 * Source: Froude and Krylov's hypothesis (the wave is as if the hull were not there), for a box section.
 */
export function effectiveSlopeShare(body: WaveBody, wavenumber: number, heading: number): number {
  const across = (wavenumber * body.beam * Math.abs(Math.sin(heading))) / 2;
  const average = across < 1e-4 ? 1 - (across * across) / 6 : Math.sin(across) / across;
  return Math.exp((-wavenumber * body.draught) / 2) * average;
}

/** Components of a sea, between these multiples of the peak frequency, in steps of equal ratio. */
const COMPONENTS = 160;
const LOWEST = 0.5;
const HIGHEST = 6;

/** Peak enhancement of a mean JONSWAP sea. Source: Hasselmann et al., Deutsche Hydrographische Zeitschrift A8 (1973). */
const PEAK_ENHANCEMENT = 3.3;

/** The spectrum a sea disturbance is drawn from. */
export function spectrumOf(sea: Extract<Waves, { kind: 'sea' }>): WaveSpectrum {
  const { significantHeight: height, peakPeriod } = sea;
  return sea.spectrum === 'jonswap'
    ? { kind: 'jonswap', height, peakPeriod, gamma: PEAK_ENHANCEMENT }
    : { kind: 'bretschneider', height, peakPeriod };
}

/**
 * The sinusoids of a wave disturbance. A sea takes random frequencies within bands of equal ratio from half to
 * six times the peak and random phases, all from its seed, and its amplitudes are scaled to the significant
 * height asked, Hs = 4 sqrt(sum a^2 / 2). Slopes of shorter waves are left out; a hull averages them away. Bands
 * of equal ratio, not of equal energy: a lightly damped hull may resonate far out in the tail of a long sea.
 */
export function createWaveTrain(waves: Waves): WaveTrain {
  if (waves.kind === 'waves') {
    const frequency = (2 * Math.PI) / waves.period;
    return {
      components: 1,
      amplitude: Float64Array.of(waves.height / 2),
      frequency: Float64Array.of(frequency),
      encounter: Float64Array.of(frequency),
      wavenumber: Float64Array.of(waveNumber(frequency)),
      phase: Float64Array.of(0),
      heading: waves.heading,
    };
  }
  const random = createRandom(waves.seed);
  const density = compileSpectrum(spectrumOf(waves));
  const peak = (2 * Math.PI) / waves.peakPeriod;
  const frequency = new Float64Array(COMPONENTS);
  const amplitude = new Float64Array(COMPONENTS);
  const phase = new Float64Array(COMPONENTS);
  const ratio = (HIGHEST / LOWEST) ** (1 / COMPONENTS);
  let energy = 0;
  for (let i = 0; i < COMPONENTS; i++) {
    const low = LOWEST * peak * ratio ** i;
    const w = low * ratio ** drawUniform(random);
    frequency[i] = w;
    phase[i] = 2 * Math.PI * drawUniform(random);
    amplitude[i] = Math.sqrt(2 * density(w) * low * (ratio - 1));
    energy += amplitude[i] ** 2 / 2;
  }
  const scale = energy > 0 ? waves.significantHeight / (4 * Math.sqrt(energy)) : 0;
  for (let i = 0; i < COMPONENTS; i++) amplitude[i] *= scale;
  return {
    components: COMPONENTS,
    amplitude,
    frequency,
    encounter: frequency.map((w) => encounterFrequency(w, waves.speed, waves.heading)),
    wavenumber: frequency.map((w) => waveNumber(w)),
    phase,
    heading: waves.heading,
  };
}

/** Height of the water at the hull's middle, m, `time` s into the train. O(components). */
export function waveElevationAt(train: WaveTrain, time: number): number {
  let sum = 0;
  for (let i = 0; i < train.components; i++) {
    sum += train.amplitude[i] * Math.cos(train.encounter[i] * time - train.phase[i]);
  }
  return sum;
}

/** Slope of the water across the hull, rad, positive where it rises to the left. O(components). */
export function waveSlopeAt(train: WaveTrain, time: number): number {
  let sum = 0;
  for (let i = 0; i < train.components; i++) {
    sum += train.wavenumber[i] * train.amplitude[i] * Math.sin(train.encounter[i] * time - train.phase[i]);
  }
  return Math.sin(train.heading) * sum;
}

/**
 * Roll moment of the waves on an upright hull, N*m: weight x metacentric height x effective slope.
 *
 * O(components). Source: effective-slope theory, Lloyd, Seakeeping (1989).
 */
export function waveMomentAt(train: WaveTrain, body: WaveBody, time: number): number {
  let sum = 0;
  for (let i = 0; i < train.components; i++) {
    const k = train.wavenumber[i];
    const share = effectiveSlopeShare(body, k, train.heading);
    sum += share * k * train.amplitude[i] * Math.sin(train.encounter[i] * time - train.phase[i]);
  }
  return body.stiffness * Math.sin(train.heading) * sum;
}

/** Samples after which the turning of phasors starts again from sine and cosine, so that rounding does not grow. */
const FRESH_START = 256;

/** Adds size cos(w t - phase) and its companion in sine at evenly spaced instants, by turning a phasor. */
function addPhasor(
  train: WaveTrain,
  i: number,
  start: number,
  step: number,
  cosineSize: number,
  cosines: Float64Array | undefined,
  sineSize: number,
  sines: Float64Array,
): void {
  const w = train.encounter[i];
  const turnCos = Math.cos(w * step);
  const turnSin = Math.sin(w * step);
  let c = 0;
  let s = 0;
  for (let j = 0; j < sines.length; j++) {
    if (j % FRESH_START === 0) {
      const angle = w * (start + j * step) - train.phase[i];
      c = Math.cos(angle);
      s = Math.sin(angle);
    }
    if (cosines !== undefined) cosines[j] += cosineSize * c;
    sines[j] += sineSize * s;
    const next = c * turnCos - s * turnSin;
    s = s * turnCos + c * turnSin;
    c = next;
  }
}

/**
 * Roll moment of the waves at evenly spaced instants, N*m: `waveMomentAt` many times over.
 *
 * @param start  s into the train of the first instant
 * @param step   s
 * @param out    filled
 *
 * O(samples x components) of a few products each; within 1e-12 of the largest moment.
 */
export function sampleWaveMoment(
  train: WaveTrain,
  body: WaveBody,
  start: number,
  step: number,
  out: Float64Array,
): void {
  out.fill(0);
  const across = body.stiffness * Math.sin(train.heading);
  for (let i = 0; i < train.components; i++) {
    const k = train.wavenumber[i];
    const size = across * effectiveSlopeShare(body, k, train.heading) * k * train.amplitude[i];
    addPhasor(train, i, start, step, 0, undefined, size, out);
  }
}

/**
 * Height (m) and slope across (rad) of the water at evenly spaced instants: `waveElevationAt` and `waveSlopeAt`
 * many times over.
 *
 * @param start  s into the train of the first instant
 * @param step   s
 * @param level  filled
 * @param slope  filled; as long as `level`
 *
 * O(samples x components) of a few products each.
 */
export function sampleWater(
  train: WaveTrain,
  start: number,
  step: number,
  level: Float64Array,
  slope: Float64Array,
): void {
  level.fill(0);
  slope.fill(0);
  const across = Math.sin(train.heading);
  for (let i = 0; i < train.components; i++) {
    const a = train.amplitude[i];
    addPhasor(train, i, start, step, a, level, across * train.wavenumber[i] * a, slope);
  }
}
