import { fitLeastSquares } from '../leastSquares';
import { averageBlocks, cutSamples, dropMissing, type Samples } from '../resampling';
import { differenceNoise, median } from '../statistics';
import {
  asGiven,
  estimateOf,
  type Given,
  type Identification,
  judgeResiduals,
  type Patch,
  patchOf,
  powerProduct,
  refuse,
  show,
} from './result';

export interface TopplingOptions {
  /** Toppling stiffness m g l, N*m/rad, when known: gives the inertia about the edge. */
  readonly stiffness?: Given;
  /** Readings beyond this angle from the start, rad, are left out (it hits something). */
  readonly largestAngle?: number;
}

const MOST_POINTS = 5000;
/** The fall must be seen to grow at least this much, or rate and start cannot be told apart. */
const LEAST_GROWTH = 4;

/**
 * Integrates theta'' = a^2 sin(theta), the fall of an inverted pendulum, by fourth-order Runge-Kutta.
 *
 * @param p  4: a rad/s, theta from upright at time[0] rad, rate there, offset of the signal
 */
export function simulateToppling(p: Float64Array, time: Float64Array, out: Float64Array): void {
  const a2 = p[0] * p[0];
  let angle = p[1];
  let rate = p[2];
  for (let i = 0; i < time.length; i++) {
    if (i > 0) {
      const steps = Math.max(1, Math.ceil((time[i] - time[i - 1]) * Math.abs(p[0]) * 40));
      if (!(steps < 1e6)) {
        out.fill(Number.NaN);
        return;
      }
      const h = (time[i] - time[i - 1]) / steps;
      for (let k = 0; k < steps; k++) {
        const k1 = a2 * Math.sin(angle);
        const v2 = rate + 0.5 * h * k1;
        const k2 = a2 * Math.sin(angle + 0.5 * h * rate);
        const v3 = rate + 0.5 * h * k2;
        const k3 = a2 * Math.sin(angle + 0.5 * h * v2);
        const v4 = rate + h * k3;
        const k4 = a2 * Math.sin(angle + h * v3);
        angle += (h / 6) * (rate + 2 * v2 + 2 * v3 + v4);
        rate += (h / 6) * (k1 + 2 * k2 + 2 * k3 + k4);
      }
    }
    out[i] = angle + p[3];
  }
}

/**
 * Identifies the toppling rate a = sqrt(m g l / I) from a body let go near upright.
 *
 * The fall starts where the angle has left its first value for good; the fit is theta'' = a^2 sin(theta) with start,
 * rate and sensor offset free, so neither an exact release from rest nor an exact zero is asked of the user.
 *
 * @param samples  roll angle, rad, from before the release until it hits something
 */
export function identifyToppling(samples: Samples, options: TopplingOptions = {}): Identification {
  const clean = averageBlocks(dropMissing(samples), 4 * MOST_POINTS);
  if (clean.time.length < 20)
    return refuse(`The log has ${clean.time.length} readings of the fall; 20 are needed.`);
  const window = findFall(clean, options.largestAngle ?? 0.6);
  if ('kind' in window) return window;
  const { time: t, values: y } = averageBlocks(window, MOST_POINTS);
  const time = t.map((v) => v - t[0]);
  const n = time.length;
  if (n < 15)
    return refuse(
      `Only ${n} readings lie between the release and ${show(options.largestAngle ?? 0.6)} rad: log faster, or release nearer to upright.`,
    );
  const rise = y[n - 1] - y[0];
  const sizes = [1, 0.01, 0.01, 0.01];
  let best: ReturnType<typeof fitLeastSquares> | undefined;
  for (const turns of [1.5, 3, 5, 8]) {
    const a = turns / time[n - 1];
    const start = [a, rise / Math.cosh(turns), 0, y[0] - rise / Math.cosh(turns)];
    const outcome = fitLeastSquares(
      {
        names: ['toppling rate', 'start', 'start rate', 'offset'],
        rows: n,
        sizes,
        evaluate(p, out) {
          simulateToppling(p, time, out);
          for (let i = 0; i < n; i++) out[i] -= y[i];
        },
      },
      start,
      { isTimeSeries: true },
    );
    if (outcome.kind === 'gave-up') best ??= outcome;
    else if (
      !best ||
      best.kind === 'gave-up' ||
      (outcome.fit && best.fit && outcome.fit.sumOfSquares < best.fit.sumOfSquares)
    )
      best = outcome;
  }
  if (best?.kind !== 'fitted') return refuse(best ? best.sentence : 'The fall could not be fitted.');
  const fit = best.fit;
  if (fit.residualSpread > 0.1 * Math.abs(rise))
    return refuse(
      `The log is no fall: ${show((100 * fit.residualSpread) / Math.abs(rise), 2)} % of its range is left unexplained.`,
    );
  fit.values[0] = Math.abs(fit.values[0]);
  const rate = estimateOf(fit, 0, 'toppling rate', 'rad/s');
  const growth = Math.exp(rate.value * time[n - 1]);
  if (rate.low <= 0 || growth < LEAST_GROWTH) {
    return refuse(
      `The fall is seen to grow by a factor of ${show(growth, 2)} only: the toppling rate (${show(rate.value)} rad/s, 95 % from ${show(rate.low)} to ${show(rate.high)}) cannot be told from the start.`,
    );
  }
  const estimates = [rate];
  const patches: Patch[] = [patchOf('topplingRate', rate)];
  if (options.stiffness) {
    const inertia = powerProduct('inertia', 'kg·m²', 1, [
      [options.stiffness, 1],
      [asGiven(rate), -2],
    ]);
    estimates.push(inertia);
    patches.push(patchOf('bodyInertia', inertia));
  }
  const predicted = y.map((v, i) => v + fit.residuals[i]);
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks: judgeResiduals(fit),
    residualSpread: fit.residualSpread,
    comparison: { time, measured: y, predicted, unit: 'rad' },
  };
}

/** The part of the log from the first lasting departure to the largest angle; any later start is as valid as the release. */
function findFall(samples: Samples, largest: number): Samples | Identification {
  const { time, values } = samples;
  const n = values.length;
  const rest = median(values.subarray(0, Math.max(5, Math.floor(n / 20))));
  const noise = Math.max(differenceNoise(values), 1e-12);
  let end = 0;
  while (end < n && Math.abs(values[end] - rest) < largest) end++;
  let furthest = 0;
  for (let i = 0; i < end; i++)
    if (Math.abs(values[i] - rest) > Math.abs(values[furthest] - rest)) furthest = i;
  const reach = Math.abs(values[furthest] - rest);
  if (reach < 20 * noise)
    return refuse(
      `The body does not fall: it moves ${show(reach)} rad, against a noise of ${show(noise)} rad.`,
    );
  const side = Math.sign(values[furthest] - rest);
  if (furthest < end - 3 && side * (values[furthest] - values[end - 1]) > Math.max(0.1 * reach, 6 * noise)) {
    return refuse(
      `The log swings back from ${show(side * reach)} rad: this body does not topple. Use the swing decay.`,
    );
  }
  let start = furthest;
  while (start > 0 && side * (values[start - 1] - rest) > Math.max(4 * noise, 0.02 * reach)) start--;
  return cutSamples(samples, time[start], time[furthest]);
}
