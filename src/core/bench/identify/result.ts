import type { Fit } from '../leastSquares';

/** A number with the 95 % interval in which it lies. */
export interface Estimate {
  readonly name: string;
  readonly value: number;
  readonly low: number;
  readonly high: number;
  /** SI unit, as text. */
  readonly unit: string;
  /** For a term that may be absent: whether the log shows it. */
  readonly verdict?: TermVerdict;
}

/** 'seen': the interval leaves out zero. 'not-seen': it holds zero. 'cannot-tell': something acts, but not which. */
export type TermVerdict = 'seen' | 'not-seen' | 'cannot-tell';

/** What of a rig a result can correct. */
export type PatchQuantity =
  | 'bodyInertia'
  | 'rollStiffness'
  | 'metacentricHeight'
  | 'naturalPeriod'
  | 'linearDamping'
  | 'quadraticDamping'
  | 'dryFriction'
  | 'topplingRate'
  | 'wheelSpinInertia'
  | 'wheelDragConstant'
  | 'wheelDragLinear'
  | 'wheelDragWindage'
  | 'motorResistance'
  | 'motorTorqueConstant'
  | 'servoDelay'
  | 'servoLag'
  | 'servoSpeedLimit'
  | 'servoBacklash'
  | 'servoResolution'
  | 'sensorNoiseDensity'
  | 'sensorBiasInstability'
  | 'sensorRandomWalk'
  | 'arrayMomentum'
  | 'centreOfMassOffset';

/** One correction the app can put into the rig: SI value and its 95 % interval. */
export interface Patch {
  readonly quantity: PatchQuantity;
  readonly value: number;
  readonly low: number;
  readonly high: number;
  readonly unit: string;
}

/** Measured beside fitted, for the residual plot. */
export interface Comparison {
  readonly time: Float64Array;
  readonly measured: Float64Array;
  readonly predicted: Float64Array;
  readonly unit: string;
}

export interface Identified {
  readonly kind: 'identified';
  readonly estimates: readonly Estimate[];
  readonly patches: readonly Patch[];
  readonly comparison: Comparison;
  /** Standard deviation of the residuals, in the comparison's unit. */
  readonly residualSpread: number;
  readonly remarks: readonly string[];
}

export interface Refused {
  readonly kind: 'refused';
  readonly sentence: string;
}

export type Identification = Identified | Refused;

/** A typed number with the half width of its 95 % interval; 0 where it is taken as exact. */
export interface Given {
  readonly value: number;
  readonly halfWidth?: number;
}

export const refuse = (sentence: string): Refused => ({ kind: 'refused', sentence });

export const estimate = (name: string, value: number, halfWidth: number, unit: string): Estimate => ({
  name,
  value,
  low: value - halfWidth,
  high: value + halfWidth,
  unit,
});

/** Estimate of one fitted parameter, scaled by a positive factor. */
export function estimateOf(fit: Fit, index: number, name: string, unit: string, factor = 1): Estimate {
  return estimate(name, fit.values[index] * factor, fit.halfWidths[index] * Math.abs(factor), unit);
}

export const withVerdict = (e: Estimate): Estimate => ({
  ...e,
  verdict: e.low > 0 || e.high < 0 ? 'seen' : 'not-seen',
});

/** c * product of x_i^p_i with the relative half widths added in quadrature (independent errors). */
export function powerProduct(
  name: string,
  unit: string,
  c: number,
  terms: readonly (readonly [Given, number])[],
): Estimate {
  let value = c;
  let square = 0;
  for (const [given, power] of terms) {
    value *= given.value ** power;
    square += ((power * (given.halfWidth ?? 0)) / given.value) ** 2;
  }
  return estimate(name, value, Math.abs(value) * Math.sqrt(square), unit);
}

export const asGiven = (e: Estimate): Given => ({ value: e.value, halfWidth: (e.high - e.low) / 2 });

export const patchOf = (quantity: PatchQuantity, e: Estimate): Patch => ({
  quantity,
  value: e.value,
  low: e.low,
  high: e.high,
  unit: e.unit,
});

/** Named sentences for residuals that are more than noise. */
export function judgeResiduals(fit: Fit): string[] {
  if (fit.correlation < 4) return [];
  return [
    `The residuals are not noise (each hangs on its neighbours, ${fit.correlation.toFixed(0)} readings count as one): the model misses something. Intervals are widened for it.`,
  ];
}

/** Compact number for a sentence. */
export const show = (x: number, digits = 3): string => String(Number(x.toPrecision(digits)));

/** Checks a typed number; undefined when it is positive. */
export const needPositive = (name: string, value: number, unit: string): Refused | undefined =>
  value > 0 && Number.isFinite(value)
    ? undefined
    : refuse(`${name} is ${value} ${unit}: it must be above zero.`);
