import { convertAngleWalk, FLICKER_FLOOR } from '../../control';
import { median, robustSpread } from '../statistics';
import { type AllanPoint, computeAllanCurve, type NoiseKind } from './allan';
import { fitNoise, gatherSpectrum, profileInterval } from './noiseSpectrum';
import { type Estimate, type Identified, type Patch, patchOf, type Refused, refuse, show } from './result';

export interface StillSensorOptions {
  /** Unit of the values, for the labels: rad/s for a rate gyro, m/s² for an accelerometer. */
  readonly unit?: string;
}

export interface StillSensorResult extends Identified {
  /** Overlapping Allan deviation with 95 % intervals, for the plot; the fitted model is in `comparison`. */
  readonly curve: readonly AllanPoint[];
}

const LEAST_POINTS = 2000;
const MOST_POINTS = 2 ** 19;

/**
 * Identifies the noise of a sensor that stands still: noise density N, bias instability B, random walk of the bias K.
 *
 * The three are fitted to the spectrum by maximum likelihood (the points of an Allan curve hang together, so that their
 * scatter says nothing of the uncertainty); the Allan curve is computed beside it and the fitted model drawn through it:
 * sigma^2 = N^2/tau + (2 ln 2/pi) B^2 + K^2 tau/3. N is the Allan one, sigma(1 s) of white noise; data sheets often
 * mean the one-sided density, larger by the square root of two, given as well.
 *
 * @param values  even samples; gaps must be filled or cut out beforehand
 * @param step    s
 * @returns refused when the log is too short or the sensor moved
 *
 * Source: IEEE Std 952 annex C; NIST SP 1065; Whittle 1953.
 */
export function identifyStillSensor(
  values: Float64Array,
  step: number,
  options: StillSensorOptions = {},
): StillSensorResult | Refused {
  const unit = options.unit ?? 'rad/s';
  const n = values.length;
  if (n < LEAST_POINTS) return refuse(`The log has ${n} readings of the sensor; ${LEAST_POINTS} are needed.`);
  const gap = values.findIndex((v) => !Number.isFinite(v));
  if (gap >= 0)
    return refuse(`Reading ${gap + 1} (${show(gap * step)} s) is missing: cut the log to a whole stretch.`);
  const moved = findMovement(values, step, unit);
  if (moved) return moved;
  const block = Math.ceil(n / MOST_POINTS);
  const count = Math.floor(n / block);
  const even = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    for (let k = i * block; k < (i + 1) * block; k++) even[i] += values[k] / block;
  }
  const dt = step * block;
  const bins = gatherSpectrum(even, dt);
  const white = median(bins.power.subarray(bins.power.length >> 1));
  const fit = fitNoise(
    bins,
    Float64Array.from([white, white * bins.frequency[0] * 0.1, white * bins.frequency[0] ** 2 * 0.1]),
  );
  const densityUnit = `${unit}/√Hz`;
  const names = [
    ['noise density', densityUnit],
    ['bias instability', unit],
    ['random walk', `${unit}/√s`],
  ] as const;
  const estimates: Estimate[] = names.map(([name, u], k) => {
    const [low, high] = profileInterval(bins, fit, k);
    return {
      name,
      unit: u,
      value: Math.sqrt(fit.variances[k]),
      low: Math.sqrt(low),
      high: Math.sqrt(high),
      verdict: low > 0 ? 'seen' : 'not-seen',
    } as const;
  });
  const remarks: string[] = [];
  const quantities = ['sensorNoiseDensity', 'sensorBiasInstability', 'sensorRandomWalk'] as const;
  const patches: Patch[] = [];
  estimates.forEach((e, k) => {
    if (e.verdict === 'seen') patches.push(patchOf(quantities[k], e));
    else remarks.push(`No ${e.name} is seen in ${show(n * step)} s: it is below ${show(e.high)} ${e.unit}.`);
  });
  const N = estimates[0];
  const scaled = (name: string, u: string, f: number): Estimate => ({
    name,
    unit: u,
    value: N.value * f,
    low: N.low * f,
    high: N.high * f,
  });
  estimates.push(
    scaled('one-sided noise density', densityUnit, Math.SQRT2),
    scaled('walk per root hour', unit === 'rad/s' ? 'rad/√h' : `${unit}·s/√h`, convertAngleWalk(1)),
  );
  const [n2, b2, k2] = fit.variances;
  const kindAt = (tau: number): NoiseKind => {
    const parts = [n2 / tau, FLICKER_FLOOR ** 2 * b2, (k2 * tau) / 3];
    return parts[2] > Math.max(parts[0], parts[1]) ? 'walk' : parts[1] > parts[0] ? 'flicker' : 'white';
  };
  const curve = computeAllanCurve(even, dt, kindAt);
  const time = Float64Array.from(curve, (p) => p.tau);
  const predicted = time.map((tau) => Math.sqrt(n2 / tau + FLICKER_FLOOR ** 2 * b2 + (k2 * tau) / 3));
  const outside = curve.filter((p, i) => predicted[i] < p.low / 1.3 || predicted[i] > p.high * 1.3);
  if (outside.length > 0.15 * curve.length) {
    remarks.push(
      `The Allan curve leaves the model near ${show(outside[0].tau)} s: besides white noise, flicker and random walk something else acts (a filter in the sensor, a hum, a drift with temperature).`,
    );
  }
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    curve,
    residualSpread: robustSpread(values),
    comparison: { time, measured: Float64Array.from(curve, (p) => p.deviation), predicted, unit },
  };
}

/** A knock or a turn shows as readings far outside the spread of their own second. */
function findMovement(values: Float64Array, step: number, unit: string): Refused | undefined {
  const differences = new Float64Array(values.length - 1);
  for (let i = 1; i < values.length; i++) differences[i - 1] = values[i] - values[i - 1];
  const spread = robustSpread(differences);
  if (!(spread > 0))
    return refuse(
      'The sensor reads the same value nearly all the time: it is switched off, or its resolution is too coarse to see the noise.',
    );
  let worst = 0;
  let count = 0;
  for (let i = 0; i < differences.length; i++) {
    if (Math.abs(differences[i]) > 8 * spread) count++;
    if (Math.abs(differences[i]) > Math.abs(differences[worst])) worst = i;
  }
  if (count === 0) return undefined;
  return refuse(
    `The sensor was not still: at ${show(worst * step, 6)} s it jumps by ${show(differences[worst])} ${unit}, ${show(Math.abs(differences[worst]) / spread, 2)} times its spread. Cut the log to the quiet part.`,
  );
}
