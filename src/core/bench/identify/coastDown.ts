import { type Fit, type FitOutcome, fitLeastSquares } from '../leastSquares';
import { averageBlocks, dropMissing, type Samples } from '../resampling';
import { differenceNoise, studentQuantile } from '../statistics';
import {
  asGiven,
  type Estimate,
  estimate,
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

export interface CoastDownOptions {
  /** Spin inertia of wheel and rotor together, kg*m^2: turns decelerations into torques. */
  readonly inertia?: Given;
}

const MOST_POINTS = 20_000;
/** Below this share of the first speed the readings are left out: sensors and bearings behave otherwise there. */
const LOWEST_SHARE = 0.03;

/**
 * Integrates du/dt = -(a0 + a1 u + a2 u^2), u the speed over its scale, by fourth-order Runge-Kutta; it rests once at 0.
 *
 * @param p  4: u at time[0], a0, a1, a2, all 1/s but the first
 */
export function simulateCoastDown(p: Float64Array, time: Float64Array, out: Float64Array): void {
  let u = p[0];
  const slope = (v: number): number => -(p[1] + p[2] * v + p[3] * v * v);
  const quickest = Math.abs(p[2]) + 2 * Math.abs(p[3] * u) + Math.abs(p[1]);
  for (let i = 0; i < time.length; i++) {
    if (i > 0 && u > 0) {
      const span = time[i] - time[i - 1];
      const steps = Math.max(1, Math.ceil(span * quickest * 20));
      if (!(steps < 1e5)) {
        out.fill(Number.NaN);
        return;
      }
      const h = span / steps;
      for (let k = 0; k < steps; k++) {
        const k1 = slope(u);
        const k2 = slope(u + 0.5 * h * k1);
        const k3 = slope(u + 0.5 * h * k2);
        const k4 = slope(u + h * k3);
        u += (h / 6) * (k1 + 2 * k2 + 2 * k3 + k4);
      }
      if (u < 0) u = 0;
    }
    out[i] = u;
  }
}

/**
 * Splits the drag of a freely coasting wheel into a constant part (bearings, seals), one linear in speed (grease, eddy
 * currents) and one quadratic (windage).
 *
 * @param samples  wheel speed, rad/s, from after the motor was cut
 * @returns decelerations per unit of inertia and, with the inertia given, torque coefficients N*m, N*m*s, N*m*s^2
 *
 * Source: common practice; output-error fit.
 */
export function identifyCoastDown(samples: Samples, options: CoastDownOptions = {}): Identification {
  const clean = averageBlocks(
    dropMissing({ time: samples.time, values: samples.values.map(Math.abs) }),
    MOST_POINTS,
  );
  const all = clean.values;
  if (all.length < 20) return refuse(`The log has ${all.length} readings of the coast-down; 20 are needed.`);
  let scale = 0;
  for (let i = 0; i < Math.min(5, all.length); i++) scale += all[i] / 5;
  const noise = differenceNoise(all);
  if (!(scale > 10 * noise))
    return refuse(
      `The wheel does not turn: the first readings are ${show(scale)} rad/s against a noise of ${show(noise)} rad/s.`,
    );
  let n = 0;
  while (n < all.length && all[n] > LOWEST_SHARE * scale) n++;
  if (n < 20)
    return refuse(`Only ${n} readings lie above ${100 * LOWEST_SHARE} % of the first speed: log faster.`);
  const time = clean.time.subarray(0, n).map((t) => t - clean.time[0]);
  const u = all.subarray(0, n).map((v) => v / scale);
  const fall = 1 - u[n - 1];
  if (fall < 10 * (noise / scale)) {
    return refuse(
      `The wheel does not slow down enough: it goes from ${show(scale)} to ${show(all[n - 1])} rad/s with a noise of ${show(noise)} rad/s.`,
    );
  }
  const full = fitDrag(time, u, [true, true, true]);
  if (full.kind !== 'fitted') return refuse(full.sentence);
  const fit = full.fit;
  if (fit.residualSpread > 0.1 * fall) {
    return refuse(
      `The log is no coast-down: ${show((100 * fit.residualSpread) / fall, 2)} % of the fall in speed is left unexplained. Is the motor still driving?`,
    );
  }
  const remarks = judgeResiduals(fit);
  let terms = [
    withVerdict(
      estimate('constant drag over inertia', fit.values[1] * scale, fit.halfWidths[1] * scale, 'rad/s²'),
    ),
    withVerdict(estimate('linear drag over inertia', fit.values[2], fit.halfWidths[2], '1/s')),
    withVerdict(estimate('windage over inertia', fit.values[3] / scale, fit.halfWidths[3] / scale, '1/rad')),
  ];
  const seen = terms.filter((t) => t.verdict === 'seen');
  if (seen.length === 0) {
    terms = terms.map((t) => ({ ...t, verdict: 'cannot-tell' as const }));
    remarks.push(
      `The wheel slows down, but only to ${show(100 * u[n - 1], 2)} % of its first speed: constant, linear and windage drag cannot be told apart. Let it run further down.`,
    );
  }
  for (const t of seen)
    if (t.high < 0)
      remarks.push(
        `The ${t.name} comes out below zero (${show(t.value)} ${t.unit}): something else acts, or the speed scale is off.`,
      );
  const estimates: Estimate[] = [...terms];
  const whole = wholeDrag(fit, scale);
  estimates.push(whole);
  const patches: Patch[] = [];
  if (options.inertia) pushTorques([...terms, whole], options.inertia, estimates, patches);
  const measured = all.subarray(0, n);
  const predicted = measured.map((v, i) => v + fit.residuals[i] * scale);
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    residualSpread: fit.residualSpread * scale,
    comparison: { time, measured, predicted, unit: 'rad/s' },
  };
}

/** Deceleration at the first speed: known far better than its parts, whose errors cancel in the sum. */
function wholeDrag(fit: Fit, scale: number): Estimate {
  const u = fit.values[0];
  const g = [0, 1, u, u * u];
  g[0] = fit.values[2] + 2 * fit.values[3] * u;
  let value = 0;
  let variance = 0;
  for (let i = 1; i < 4; i++) value += g[i] * fit.values[i];
  for (let i = 0; i < 4; i++) for (let j = 0; j < 4; j++) variance += g[i] * g[j] * fit.covariance[4 * i + j];
  const t = studentQuantile(0.95, Math.max(1, fit.degreesOfFreedom / fit.correlation));
  return estimate(
    'deceleration at the first speed',
    value * scale,
    t * Math.sqrt(variance) * scale,
    'rad/s²',
  );
}

function pushTorques(
  terms: readonly Estimate[],
  inertia: Given,
  estimates: Estimate[],
  patches: Patch[],
): void {
  const rows = [
    ['constant drag', 'N·m', 'wheelDragConstant'],
    ['linear drag', 'N·m·s/rad', 'wheelDragLinear'],
    ['windage', 'N·m·s²/rad²', 'wheelDragWindage'],
    ['drag torque at the first speed', 'N·m', undefined],
  ] as const;
  rows.forEach(([name, unit, quantity], i) => {
    const t = terms[i];
    const e: Estimate = { ...scaleBy(name, unit, t, inertia), ...(t.verdict ? { verdict: t.verdict } : {}) };
    estimates.push(e);
    if (quantity && t.verdict === 'seen') patches.push(patchOf(quantity, e));
  });
}

function scaleBy(name: string, unit: string, t: Estimate, inertia: Given): Estimate {
  if (t.value !== 0)
    return powerProduct(name, unit, 1, [
      [asGiven(t), 1],
      [inertia, 1],
    ]);
  return estimate(name, 0, ((t.high - t.low) / 2) * inertia.value, unit);
}

function fitDrag(time: Float64Array, u: Float64Array, free: readonly boolean[]): FitOutcome {
  const n = u.length;
  const index = [0, ...[1, 2, 3].filter((k) => free[k - 1])];
  const p = new Float64Array(4);
  const mean = (1 - u[n - 1]) / time[n - 1];
  const start = [u[0], mean / 3, mean / 3, mean / 3];
  return fitLeastSquares(
    {
      names: index.map((k) => ['first speed', 'constant drag', 'linear drag', 'windage'][k]),
      rows: n,
      sizes: index.map((k) => (k === 0 ? 1 : mean)),
      evaluate(q, out) {
        p.fill(0);
        for (let j = 0; j < index.length; j++) p[index[j]] = q[j];
        simulateCoastDown(p, time, out);
        for (let i = 0; i < n; i++) out[i] -= u[i];
      },
    },
    index.map((k) => start[k]),
    { isTimeSeries: true },
  );
}
