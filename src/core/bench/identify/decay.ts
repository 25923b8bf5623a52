import { type Fit, type FitOutcome, fitLeastSquares } from '../leastSquares';
import { averageBlocks, dropMissing, type Samples } from '../resampling';
import { fisherTail } from '../statistics';
import {
  asGiven,
  type Estimate,
  estimateOf,
  type Given,
  type Identification,
  judgeResiduals,
  type Patch,
  patchOf,
  powerProduct,
  refuse,
  show,
  withVerdict,
} from './result';
import { SWING_NAMES, type SwingShape, simulateSwing } from './swing';
import { guessSwing } from './swingGuess';

export interface DecayOptions {
  readonly signal?: 'angle' | 'rate';
  /** Restoring moment with the angle (a float at small angles) or with its sine (a pendulum). */
  readonly restoring?: 'linear' | 'sine';
  /** Restoring stiffness, N*m/rad, when known: gives the inertia. */
  readonly stiffness?: Given;
  /** Inertia about the roll line, kg*m^2, when known: gives the stiffness. */
  readonly inertia?: Given;
  /** Weight, N, of a floating body: with a known inertia gives the metacentric height. */
  readonly weight?: Given;
}

const MOST_POINTS = 20_000;
const LEAST_CYCLES = 1.5;

/** delta = 2 pi zeta / sqrt(1 - zeta^2): natural logarithm of the ratio of successive peaks of one sign. */
export const logDecrement = (zeta: number): number => (2 * Math.PI * zeta) / Math.sqrt(1 - zeta * zeta);

/** Damping ratio from two peaks of one sign `cycles` full cycles apart; linear damping assumed. */
export function dampingFromPeaks(
  first: number,
  later: number,
  cycles = 1,
): { decrement: number; zeta: number } {
  const decrement = Math.log(first / later) / cycles;
  return { decrement, zeta: decrement / Math.sqrt(4 * Math.PI * Math.PI + decrement * decrement) };
}

/**
 * Identifies a free swing that dies down: natural period, and damping told apart into linear, quadratic and dry.
 *
 * Output-error fit of the equation of motion, start and offset free. With a known stiffness the inertia follows,
 * with a known inertia the stiffness and, for a float of known weight, the metacentric height.
 *
 * @param samples  angle (rad) or rate (rad/s) on a rising clock, from after the release on
 * @returns estimates period, frequency, linear, quadratic, dry (with a verdict each); or why the log cannot tell
 *
 * Source: roll-decay practice; Ljung, System Identification, 1999, ch. 7 (output error).
 */
export function identifyDecay(samples: Samples, options: DecayOptions = {}): Identification {
  const clean = averageBlocks(dropMissing(samples), MOST_POINTS);
  const n = clean.time.length;
  if (n < 30) return refuse(`The log has ${n} readings of the swing; 30 are needed.`);
  const shape: SwingShape = { isSine: options.restoring === 'sine', signal: options.signal ?? 'angle' };
  const time = clean.time.map((t) => t - clean.time[0]);
  const y = clean.values;
  const span = time[n - 1];
  const guess = guessSwing(time, y, shape);
  if (!guess) return refuse('The log shows no swing: no frequency stands out.');
  const cycles = (guess[0] * span) / (2 * Math.PI);
  if (cycles < LEAST_CYCLES) {
    return refuse(
      `The log shows ${show(cycles, 2)} cycles of the swing; at least ${LEAST_CYCLES} are needed to tell the period from the damping.`,
    );
  }
  const perCycle = (2 * Math.PI) / guess[0] / (span / (n - 1));
  if (perCycle < 6)
    return refuse(`The log has ${show(perCycle, 2)} readings a cycle; at least 6 are needed.`);
  const free = fitSwing(shape, time, y, guess, [true, false, false]);
  const start = free.kind === 'fitted' ? free.fit.values : guess;
  const full = fitSwing(shape, time, y, start, [true, true, true]);
  if (full.kind !== 'fitted') return refuse(explain(full));
  const fit = full.fit;
  const swing = Math.max(...y) - Math.min(...y);
  if (!standsOut(y, fit)) return refuse('The log shows no swing: what there is cannot be told from noise.');
  if (!(fit.residualSpread < 0.25 * swing)) {
    return refuse(
      `The log is no free swing: ${show((100 * fit.residualSpread) / swing, 2)} % of its range is left unexplained.`,
    );
  }
  return conclude(shape, time, y, fit, free.kind === 'fitted' ? free.fit : undefined, options);
}

/** F test of the swing against a level: at 1e-9, since the best of many frequencies was picked. */
function standsOut(y: Float64Array, fit: Fit): boolean {
  const mean = y.reduce((a, v) => a + v, 0) / y.length;
  const level = y.reduce((a, v) => a + (v - mean) ** 2, 0);
  const freedom = Math.max(1, fit.degreesOfFreedom / fit.correlation);
  return fisherTail(((level / fit.sumOfSquares - 1) * freedom) / 6, 6, freedom) < 1e-9;
}

function explain(outcome: FitOutcome): string {
  return outcome.kind === 'fitted' ? '' : outcome.sentence;
}

function conclude(
  shape: SwingShape,
  time: Float64Array,
  y: Float64Array,
  fit: Fit,
  linearFit: Fit | undefined,
  options: DecayOptions,
): Identification {
  const w = Math.abs(fit.values[0]);
  const frequency = { ...estimateOf(fit, 0, 'natural frequency', 'rad/s'), value: w };
  const period = powerProduct('natural period', 's', 2 * Math.PI, [
    [{ value: w, halfWidth: fit.halfWidths[0] }, -1],
  ]);
  let terms = [
    withVerdict(estimateOf(fit, 1, 'linear damping over inertia', '1/s')),
    withVerdict(estimateOf(fit, 2, 'quadratic damping over inertia', '1/rad')),
    withVerdict(estimateOf(fit, 3, 'dry friction over inertia', 'rad/s²')),
  ];
  const remarks = judgeResiduals(fit);
  const seen = terms.filter((t) => t.verdict === 'seen');
  const diesDown = linearFit && linearFit.values[1] - linearFit.halfWidths[1] > 0;
  if (seen.length === 0 && diesDown) {
    terms = terms.map((t) => ({ ...t, verdict: 'cannot-tell' as const }));
    remarks.push(
      'The swing dies down, but over too narrow a range of amplitudes to tell linear, quadratic and dry damping apart: log a longer decay from a larger angle.',
    );
  }
  const negative = seen.find((t) => t.high < 0);
  if (negative)
    remarks.push(
      `The ${negative.name} comes out below zero (${show(negative.value)} ${negative.unit}): no body does that; the restoring moment is probably not as straight as assumed.`,
    );
  if (linearFit && linearFit.values[1] + linearFit.halfWidths[1] < 0) {
    return refuse(
      `The swing grows (by a factor e in ${show(-2 / linearFit.values[1])} s): this is no decay.`,
    );
  }
  const estimates: Estimate[] = [period, frequency, ...terms];
  if (linearFit) {
    const zeta = linearFit.values[1] / (2 * w);
    estimates.push({
      name: 'equivalent damping ratio',
      unit: '',
      value: zeta,
      low: zeta - linearFit.halfWidths[1] / (2 * w),
      high: zeta + linearFit.halfWidths[1] / (2 * w),
    });
  }
  const patches: Patch[] = [patchOf('naturalPeriod', period)];
  const given: Given = { value: w, halfWidth: fit.halfWidths[0] };
  let inertia: Given | undefined = options.inertia;
  if (options.stiffness) {
    const e = powerProduct('inertia', 'kg·m²', 1, [
      [options.stiffness, 1],
      [given, -2],
    ]);
    estimates.push(e);
    patches.push(patchOf('bodyInertia', e));
    inertia = asGiven(e);
  } else if (options.inertia) {
    const e = powerProduct('stiffness', 'N·m/rad', 1, [
      [options.inertia, 1],
      [given, 2],
    ]);
    estimates.push(e);
    patches.push(patchOf('rollStiffness', e));
    if (options.weight) {
      const gm = powerProduct('metacentric height', 'm', 1, [
        [asGiven(e), 1],
        [options.weight, -1],
      ]);
      estimates.push(gm);
      patches.push(patchOf('metacentricHeight', gm));
    }
  }
  if (inertia) pushDamping(terms, inertia, estimates, patches);
  const predicted = new Float64Array(y.length);
  for (let i = 0; i < y.length; i++) predicted[i] = y[i] + fit.residuals[i];
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    residualSpread: fit.residualSpread,
    comparison: { time, measured: y, predicted, unit: shape.signal === 'rate' ? 'rad/s' : 'rad' },
  };
}

function pushDamping(
  terms: readonly Estimate[],
  inertia: Given,
  estimates: Estimate[],
  patches: Patch[],
): void {
  const rows = [
    ['linear damping', 'N·m·s/rad', 'linearDamping'],
    ['quadratic damping', 'N·m·s²/rad²', 'quadraticDamping'],
    ['dry friction', 'N·m', 'dryFriction'],
  ] as const;
  rows.forEach(([name, unit, quantity], i) => {
    const t = terms[i];
    const half = (t.high - t.low) / 2;
    const spread = Math.hypot(half * inertia.value, t.value * (inertia.halfWidth ?? 0));
    const value = t.value * inertia.value;
    const e: Estimate = {
      name,
      unit,
      value,
      low: value - spread,
      high: value + spread,
      ...(t.verdict ? { verdict: t.verdict } : {}),
    };
    estimates.push(e);
    if (t.verdict === 'seen') patches.push(patchOf(quantity, e));
  });
}

/** Fits the swing with some of the three dampings free; the others are held at zero. */
function fitSwing(
  shape: SwingShape,
  time: Float64Array,
  y: Float64Array,
  start: Float64Array,
  free: readonly [boolean, boolean, boolean],
): FitOutcome {
  const index = [0, ...[1, 2, 3].filter((k) => free[k - 1]), 4, 5, 6];
  const all = Float64Array.from(start);
  for (let k = 1; k <= 3; k++) if (!free[k - 1]) all[k] = 0;
  const w = Math.abs(start[0]);
  const reach = Math.max(Math.abs(start[4]), Math.abs(start[5]) / w, 1e-9);
  const sizes = [w, w / 20, 0.05 / reach, 0.01 * w * w * reach, reach, reach * w, reach];
  const outcome = fitLeastSquares(
    {
      names: index.map((k) => SWING_NAMES[k]),
      rows: y.length,
      sizes: index.map((k) => sizes[k]),
      evaluate(p, out) {
        for (let j = 0; j < index.length; j++) all[index[j]] = p[j];
        simulateSwing(shape, all, time, out);
        for (let i = 0; i < y.length; i++) out[i] -= y[i];
      },
    },
    index.map((k) => all[k]),
    { isTimeSeries: true },
  );
  if (outcome.kind !== 'fitted') return outcome;
  return { kind: 'fitted', fit: widenTo7(outcome.fit, index) };
}

/** The fit with all seven parameters in their places; those held have value and width zero. */
function widenTo7(fit: Fit, index: readonly number[]): Fit {
  const spread = (v: Float64Array): Float64Array => {
    const out = new Float64Array(7);
    index.forEach((k, j) => {
      out[k] = v[j];
    });
    return out;
  };
  return {
    ...fit,
    values: spread(fit.values),
    standardErrors: spread(fit.standardErrors),
    halfWidths: spread(fit.halfWidths),
  };
}
