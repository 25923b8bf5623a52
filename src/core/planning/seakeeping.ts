/**
 * Roll of a floating body in waves with and without its array, by frequencies. The array answers roll rate: momentum e = gain x roll angle, so that its torque -de/dt is damping. Reductions are of the
 * root-mean-square roll angle: Perez, Ship Motion Control (2005).
 */
import { type RightingModel, waveNumber } from '../physics';
import { effectiveSlopeShare, type WaveBody, type WaveTrain } from './waveLoad';

/** A body that rolls on the water. */
export interface RollBody {
  /** kg*m^2, added inertia included. */
  readonly inertia: number;
  /** N*m/rad at small roll: weight x metacentric height; positive. */
  readonly stiffness: number;
  /** N*m*s/rad and N*m*s^2/rad^2. */
  readonly linearDamping: number;
  readonly quadraticDamping: number;
  /** N and its righting arms, for the run in time; undefined for a straight line of the stiffness above. */
  readonly righting: { readonly weight: number; readonly arms: RightingModel } | undefined;
  readonly waves: WaveBody;
}

/** A gimballed array about the roll axis: e = momentum sin(tilt). */
export interface RollArray {
  /** N*m*s with all gimbals at 90 degrees. */
  readonly momentum: number;
  /** rad, largest tilt to either side. */
  readonly tilt: number;
  /** rad/s */
  readonly tiltRate: number;
  /** N*m, largest torque on the body; Infinity for none but that of the tilt rate. */
  readonly torque: number;
  /** kg*m^2 of all gimbals about their own axes together. */
  readonly gimbalInertia: number;
  /** s, lag of the servos. */
  readonly lag: number;
}

export interface RollFigures {
  /** rad */
  readonly rmsRoll: number;
  /** rad, rad and rad/s: nothing without an array. */
  readonly rmsTilt: number;
  readonly mostTilt: number;
  readonly mostTiltRate: number;
  /** N*m, of the array on the body. */
  readonly rmsTorque: number;
  /** W, mean the array takes out of the rolling. */
  readonly powerTaken: number;
}

export interface Spectral extends RollFigures {
  /** N*m*s/rad: linear damping that takes out as much as the quadratic does at this roll. */
  readonly equivalentDamping: number;
}

/** Root-mean-square rate to the linear damping that a quadratic one is worth, for a Gaussian roll. Source: Kaplan (1966); Price and Bishop, Probabilistic Theory of Ship Dynamics (1974). */
const GAUSSIAN = Math.sqrt(8 / Math.PI);
/** The same for one sinusoid, of its amplitude: 8 / (3 pi). Source: equal energy over a cycle. */
const SINUSOID = 8 / (3 * Math.PI);

/**
 * Amplitude of roll for a unit moment, rad/(N*m), at a frequency of encounter.
 *
 * @param damping  N*m*s/rad, all of it
 */
export function rollPerMoment(body: RollBody, damping: number, frequency: number): number {
  const real = body.stiffness - body.inertia * frequency * frequency;
  const imaginary = damping * frequency;
  return 1 / Math.sqrt(real * real + imaginary * imaginary);
}

/**
 * Roll amplitude over the amplitude of wave slope, against wave frequency, for a curve on paper.
 *
 * @param damping    N*m*s/rad, all of it
 * @param frequency  rad/s, of a hull that lies still
 * @param heading    rad
 */
export function rollPerSlope(body: RollBody, damping: number, frequency: number, heading: number): number {
  const share = effectiveSlopeShare(body.waves, waveNumber(frequency), heading);
  return body.stiffness * share * Math.abs(Math.sin(heading)) * rollPerMoment(body, damping, frequency);
}

/**
 * Roll in a train of waves by frequencies: linear righting, quadratic damping by its equivalent, array within
 * its limits (see `largestGain`).
 *
 * @param gain  N*m*s/rad: momentum the array holds for each radian of roll; 0 for no array
 * @param momentum  N*m*s of the array, to give tilt; not read at gain 0
 *
 * O(components x iterations); the equivalent damping is found to 1e-12.
 */
export function rollByFrequency(body: RollBody, train: WaveTrain, gain: number, momentum: number): Spectral {
  let rate = 0;
  let roll = 0;
  let equivalent = 0;
  const worth = train.components === 1 ? SINUSOID * Math.SQRT2 : GAUSSIAN;
  let low = 0;
  let high = Infinity;
  // Roll falls as damping grows, so the true value lies between a trial and what that trial leads to.
  for (let i = 0; i < 200; i++) {
    const sums = rollSums(body, train, body.linearDamping + equivalent + gain);
    rate = Math.sqrt(sums.rate);
    roll = Math.sqrt(sums.roll);
    const next = worth * body.quadraticDamping * rate;
    if (Math.abs(next - equivalent) <= 1e-12 * (next + equivalent)) break;
    if (next > equivalent) {
      low = equivalent;
      high = Math.min(high, next);
    } else {
      high = equivalent;
      low = Math.max(low, next);
    }
    equivalent = (low + high) / 2;
  }
  const rmsMomentum = gain * roll;
  const share = gain > 0 ? rmsMomentum / momentum : 0;
  const peak = train.components === 1 ? Math.SQRT2 : PEAKS;
  return {
    rmsRoll: roll,
    rmsTilt: share,
    mostTilt: Math.asin(Math.min(1, peak * share)),
    mostTiltRate: gain > 0 ? (peak * gain * rate) / momentum : 0,
    rmsTorque: gain * rate,
    powerTaken: gain * rate * rate,
    equivalentDamping: equivalent,
  };
}

/** Root-mean-squares that count as the highest peak of a sea: about one wave in 3,000 is higher (Rayleigh). */
const PEAKS = 4;

function rollSums(
  body: RollBody,
  train: WaveTrain,
  damping: number,
): { readonly roll: number; readonly rate: number } {
  let roll = 0;
  let rate = 0;
  const across = Math.sin(train.heading);
  for (let i = 0; i < train.components; i++) {
    const k = train.wavenumber[i];
    const moment =
      body.stiffness * effectiveSlopeShare(body.waves, k, train.heading) * k * train.amplitude[i] * across;
    const w = train.encounter[i];
    const amplitude = moment * rollPerMoment(body, damping, w);
    roll += (amplitude * amplitude) / 2;
    rate += (amplitude * amplitude * w * w) / 2;
  }
  return { roll, rate };
}

/**
 * Largest gain with which the highest peaks of this train stay within tilt, tilt rate and torque, up to
 * `mostDamping` of critical. Roll in waves falls more slowly than the gain rises, so tilt grows with the gain.
 *
 * @returns N*m*s/rad. O(components x iterations).
 */
export function largestGain(body: RollBody, train: WaveTrain, array: RollArray, mostDamping = 0.7): number {
  const critical = 2 * Math.sqrt(body.inertia * body.stiffness);
  const isWithin = (gain: number): boolean => {
    const figures = rollByFrequency(body, train, gain, array.momentum);
    const peak = train.components === 1 ? Math.SQRT2 : PEAKS;
    const sine = peak * figures.rmsTilt;
    const rate = array.tiltRate * Math.sqrt(Math.max(0, 1 - sine * sine));
    return (
      sine <= Math.sin(array.tilt) && figures.mostTiltRate <= rate && peak * figures.rmsTorque <= array.torque
    );
  };
  let good = 0;
  let bad = Math.max(0, mostDamping * critical - body.linearDamping);
  if (bad === 0 || isWithin(bad)) return bad;
  for (let i = 0; i < 60; i++) {
    const middle = (good + bad) / 2;
    if (isWithin(middle)) good = middle;
    else bad = middle;
  }
  return good;
}
