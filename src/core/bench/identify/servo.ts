import { type Fit, type FitOutcome, fitLeastSquares } from '../leastSquares';
import { differenceNoise, fisherTail } from '../statistics';
import {
  type Estimate,
  estimate,
  estimateOf,
  type Identification,
  judgeResiduals,
  type Patch,
  patchOf,
  refuse,
  show,
} from './result';
import { findCommandChanges, type HeldCommand, simulateServo } from './servoMotion';

export interface ServoLog {
  /** s, rising. */
  readonly time: Float64Array;
  /** rad, command held from each stamp on. */
  readonly command: Float64Array;
  /** rad, measured tilt. */
  readonly angle: Float64Array;
}

/** Readings a servo log may have; more are asked to be cut. */
export const MOST_SERVO_POINTS = 20_000;
/** s, a lag of nothing would divide by zero. */
export const SHORTEST_LAG = 1e-5;

/** Whole rows only, time from the first. */
export function cleanServoLog(log: ServoLog): ServoLog {
  const rows: number[] = [];
  for (let i = 0; i < log.time.length; i++)
    if (Number.isFinite(log.command[i]) && Number.isFinite(log.angle[i])) rows.push(i);
  return {
    time: Float64Array.from(rows, (i) => log.time[i] - log.time[rows[0]]),
    command: Float64Array.from(rows, (i) => log.command[i]),
    angle: Float64Array.from(rows, (i) => log.angle[i]),
  };
}

/** Fits delay, lag, gain, offset and, if asked, the speed limit; the play is held. */
function fitStep(
  log: ServoLog,
  held: HeldCommand,
  start: readonly number[],
  hasLimit: boolean,
  backlash: number,
): FitOutcome {
  const names = ['delay', 'lag', 'gain', 'offset', ...(hasLimit ? ['speed limit'] : [])];
  return fitLeastSquares(
    {
      names,
      rows: log.time.length,
      sizes: [0.01, 0.01, 1, 0.01, 1],
      lower: [0, SHORTEST_LAG, 1e-3, Number.NEGATIVE_INFINITY, 1e-6],
      evaluate(p, out) {
        simulateServo(
          { delay: p[0], lag: p[1], speedLimit: hasLimit ? p[4] : Number.POSITIVE_INFINITY, backlash },
          held,
          log.time,
          out,
        );
        for (let i = 0; i < out.length; i++) out[i] = p[2] * out[i] + p[3] - log.angle[i];
      },
    },
    start.slice(0, names.length),
    { isTimeSeries: true },
  );
}

/**
 * Identifies delay, lag and speed limit of a gimbal servo from steps of the command.
 *
 * The speed limit is taken up only if it explains the log significantly better (F test at 0.1 %); otherwise the log shows
 * no limit, and the highest speed seen is the least it can be.
 *
 * @param log       command and measured tilt; steps small and large, with rest between them
 * @param backlash  rad, known play; 0 when not known
 * @returns estimates 'delay', 'lag', 'gain' and 'speed limit' where seen
 */
export function identifyServoStep(raw: ServoLog, backlash = 0): Identification {
  const log = cleanServoLog(raw);
  const n = log.time.length;
  if (n < 30) return refuse(`The log has ${n} whole readings of the servo; 30 are needed.`);
  if (n > MOST_SERVO_POINTS)
    return refuse(`The log has ${n} readings: cut it to the steps (at most ${MOST_SERVO_POINTS} readings).`);
  const held = findCommandChanges(log.time, log.command);
  if (held.time.length < 2)
    return refuse(`The command never changes: it stays at ${show(log.command[0])} rad.`);
  const noise = differenceNoise(log.angle);
  let largest = 0;
  for (let j = 1; j < held.command.length; j++)
    largest = Math.max(largest, Math.abs(held.command[j] - held.command[j - 1]));
  const moved = Math.max(...log.angle) - Math.min(...log.angle);
  if (moved < 10 * noise || moved < 0.05 * largest)
    return refuse(
      `The servo does not follow: the command steps by ${show(largest)} rad and the tilt moves ${show(moved)} rad.`,
    );
  const free = searchStep(log, held, false, backlash, largest);
  const limited = searchStep(log, held, true, backlash, largest);
  if (!free && !limited)
    return refuse('The steps could not be fitted: the tilt does not settle towards the command.');
  const { fit, hasLimit } = chooseStep(free, limited);
  if (fit.residualSpread > 0.1 * moved)
    return refuse(
      `The tilt does not follow the command as a servo does: ${show((100 * fit.residualSpread) / moved, 2)} % of its range is left unexplained.`,
    );
  const delay = estimateOf(fit, 0, 'delay', 's');
  const lag = estimateOf(fit, 1, 'lag', 's');
  const step = log.time[n - 1] / (n - 1);
  if (delay.value + lag.value < 0.5 * step)
    return refuse(
      `Delay and lag together (${show(delay.value + lag.value)} s) are shorter than the sample time (${show(step)} s): log faster.`,
    );
  const remarks = judgeResiduals(fit);
  const estimates: Estimate[] = [
    delay,
    lag,
    estimateOf(fit, 2, 'gain', ''),
    estimateOf(fit, 3, 'offset', 'rad'),
  ];
  const patches: Patch[] = [patchOf('servoDelay', delay)];
  if (lag.low > 0) patches.push(patchOf('servoLag', lag));
  else
    remarks.push(
      `The lag (${show(lag.value)} s, 95 % up to ${show(lag.high)} s) cannot be told from none: ${hasLimit ? 'the speed limit rules these steps; add small ones' : 'log faster'}.`,
    );
  if (hasLimit) {
    // The limit acts on the commanded scale; what the tilt shows is the gain times it.
    const gain = fit.values[2];
    const covariance = fit.covariance;
    const value = gain * fit.values[4];
    const variance =
      fit.values[4] ** 2 * covariance[2 * 5 + 2] +
      gain ** 2 * covariance[4 * 5 + 4] +
      2 * gain * fit.values[4] * covariance[2 * 5 + 4];
    const limit = estimate(
      'speed limit',
      value,
      (fit.halfWidths[4] / fit.standardErrors[4]) * Math.sqrt(variance),
      'rad/s',
    );
    estimates.push(limit);
    patches.push(patchOf('servoSpeedLimit', limit));
  } else {
    remarks.push(
      `The steps do not reach the speed limit: it is above ${show((fit.values[2] * largest) / fit.values[1])} rad/s.`,
    );
  }
  if (Math.abs(fit.values[2] - 1) > Math.max(0.02, fit.halfWidths[2]))
    remarks.push(
      `The tilt moves ${show(fit.values[2])} times what is commanded: check the travel setting or the linkage.`,
    );
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    residualSpread: fit.residualSpread,
    comparison: {
      time: log.time,
      measured: log.angle,
      predicted: log.angle.map((v, i) => v + fit.residuals[i]),
      unit: 'rad',
    },
  };
}

function chooseStep(free: Fit | undefined, limited: Fit | undefined): { fit: Fit; hasLimit: boolean } {
  if (!limited) return { fit: free as Fit, hasLimit: false };
  if (!free) return { fit: limited, hasLimit: true };
  const dof = limited.degreesOfFreedom / limited.correlation;
  const f = (free.sumOfSquares / limited.sumOfSquares - 1) * dof;
  const isBetter = fisherTail(f, 1, Math.max(1, dof)) < 0.001;
  return isBetter ? { fit: limited, hasLimit: true } : { fit: free, hasLimit: false };
}

/** Best of a small grid of starts: the delay makes the surface stepped, and one start may stop at a false minimum. */
function searchStep(
  log: ServoLog,
  held: HeldCommand,
  hasLimit: boolean,
  backlash: number,
  largest: number,
): Fit | undefined {
  const late = findResponseTime(log, held);
  let fastest = 0;
  const n = log.time.length;
  const reach = Math.max(1, Math.round((0.3 * late) / (log.time[n - 1] / (n - 1))));
  for (let i = reach; i < n; i++)
    fastest = Math.max(
      fastest,
      Math.abs(log.angle[i] - log.angle[i - reach]) / (log.time[i] - log.time[i - reach]),
    );
  let best: Fit | undefined;
  for (const share of [0.15, 0.45, 0.8]) {
    for (const lag of [0.2 * late, 0.8 * late]) {
      const start = [share * late, Math.max(lag, 2 * SHORTEST_LAG), 1, 0, Math.max(fastest, largest * 1e-3)];
      const outcome = fitStep(log, held, start, hasLimit, backlash);
      if (outcome.kind === 'fitted' && (!best || outcome.fit.sumOfSquares < best.sumOfSquares))
        best = outcome.fit;
    }
  }
  return best;
}

/** Middle time from a change of command to half of the way there, s: how late the servo is, roughly. */
function findResponseTime(log: ServoLog, held: HeldCommand): number {
  const last = log.time[log.time.length - 1];
  let best = last / 20;
  let size = 0;
  let i = 0;
  for (let j = 1; j < held.time.length; j++) {
    const step = held.command[j] - held.command[j - 1];
    if (Math.abs(step) <= size) continue;
    while (i < log.time.length && log.time[i] < held.time[j]) i++;
    const from = log.angle[Math.max(0, i - 1)];
    const until = j + 1 < held.time.length ? held.time[j + 1] : last;
    for (let k = i; k < log.time.length && log.time[k] < until; k++) {
      if ((log.angle[k] - from) / step < 0.5) continue;
      best = Math.max(log.time[k] - held.time[j], (0.5 * last) / log.time.length);
      size = Math.abs(step);
      break;
    }
  }
  return best;
}
