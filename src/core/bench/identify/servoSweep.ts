import { type FitOutcome, fitLeastSquares } from '../leastSquares';
import { differenceNoise } from '../statistics';
import {
  type Estimate,
  estimate,
  estimateOf,
  type Given,
  type Identification,
  judgeResiduals,
  type Patch,
  patchOf,
  refuse,
  show,
  withVerdict,
} from './result';
import { cleanServoLog, MOST_SERVO_POINTS, type ServoLog, SHORTEST_LAG } from './servo';
import { findCommandChanges, simulateServo } from './servoMotion';
import { findResolution } from './servoResolution';

export interface ServoDynamics {
  readonly delay: Given;
  readonly lag: Given;
}

/**
 * Identifies play and resolution of a gimbal servo from a slow sweep of the command up and down.
 *
 * Play and lag both make the tilt trail the command; delay and lag come from the steps and are held, and their own
 * uncertainty is carried into the play.
 *
 * @param dynamics  delay and lag, s
 * @returns estimates 'backlash' with a verdict, 'resolution' where the staircase shows
 */
export function identifyServoSweep(raw: ServoLog, dynamics: ServoDynamics): Identification {
  const log = cleanServoLog(raw);
  const n = log.time.length;
  if (n < 100) return refuse(`The log has ${n} whole readings of the sweep; 100 are needed.`);
  if (n > MOST_SERVO_POINTS)
    return refuse(
      `The log has ${n} readings: cut it to a few sweeps (at most ${MOST_SERVO_POINTS} readings).`,
    );
  const turns = findReversals(log.command);
  if (turns.length < 2)
    return refuse(
      `The command turns back ${turns.length === 0 ? 'never' : 'once only'}: sweep up and down at least once more.`,
    );
  const held = findCommandChanges(log.time, log.command);
  const from = turns[0];
  const noise = differenceNoise(log.angle);
  const range = Math.max(...log.command) - Math.min(...log.command);
  const sum = Math.max(dynamics.delay.value, 0) + Math.max(dynamics.lag.value, SHORTEST_LAG);
  const model = new Float64Array(n);
  const fitFrom = (start: number): FitOutcome =>
    fitLeastSquares(
      {
        names: ['backlash', 'gain', 'offset'],
        rows: n - from,
        sizes: [0.01 * range, 1, 0.01 * range],
        lower: [Number.NEGATIVE_INFINITY, 1e-3, Number.NEGATIVE_INFINITY],
        evaluate(p, out) {
          simulateServo(
            {
              delay: dynamics.delay.value,
              lag: Math.max(dynamics.lag.value, SHORTEST_LAG),
              speedLimit: Number.POSITIVE_INFINITY,
              backlash: p[0],
            },
            held,
            log.time,
            model,
          );
          for (let i = from; i < n; i++) out[i - from] = p[1] * model[i] + p[2] - log.angle[i];
        },
      },
      [start, 1, 0],
      { isTimeSeries: true },
    );
  const outcome = fitFrom(0.02 * range);
  if (outcome.kind !== 'fitted') return refuse(outcome.sentence);
  const { fit } = outcome;
  if (fit.residualSpread > 0.1 * range)
    return refuse(
      `The tilt does not follow the sweep: ${show((100 * fit.residualSpread) / range, 2)} % of its range is left unexplained.`,
    );
  const speed = meanSpeed(log, from);
  const doubt = 2 * speed * Math.hypot(dynamics.delay.halfWidth ?? 0, dynamics.lag.halfWidth ?? 0);
  const gain = fit.values[1];
  const backlash = withVerdict(
    estimate(
      'backlash',
      gain * fit.values[0],
      Math.hypot(gain * fit.halfWidths[0], fit.values[0] * fit.halfWidths[1], doubt),
      'rad',
    ),
  );
  const remarks = judgeResiduals(fit);
  const estimates: Estimate[] = [backlash, estimateOf(fit, 1, 'gain', '')];
  const patches: Patch[] = [];
  if (backlash.verdict === 'seen') patches.push(patchOf('servoBacklash', backlash));
  else remarks.push(`No play is seen: it is below ${show(backlash.high)} rad.`);
  if (speed * sum > Math.max(2 * backlash.value, 20 * noise))
    remarks.push(
      'The sweep is fast: most of the trailing is delay and lag. Sweep slower for a better figure of the play.',
    );
  const resolution = findResolution(log.angle.subarray(from), log.command.subarray(from), noise);
  if (resolution.kind === 'seen') {
    estimates.push(resolution.estimate);
    patches.push(patchOf('servoResolution', resolution.estimate));
  } else remarks.push(resolution.sentence);
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    residualSpread: fit.residualSpread,
    comparison: {
      time: log.time.subarray(from),
      measured: log.angle.subarray(from),
      predicted: log.angle.subarray(from).map((v, i) => v + fit.residuals[i]),
      unit: 'rad',
    },
  };
}

/** Rows at which the command turns back by more than a twentieth of its range. */
function findReversals(command: Float64Array): number[] {
  const range = Math.max(...command) - Math.min(...command);
  const turns: number[] = [];
  let extreme = 0;
  let side = 0;
  for (let i = 1; i < command.length; i++) {
    const d = command[i] - command[extreme];
    if (side === 0) {
      if (Math.abs(d) > 0.05 * range) {
        side = Math.sign(d);
        extreme = i;
      }
    } else if (side * d > 0) extreme = i;
    else if (side * d < -0.05 * range) {
      turns.push(extreme);
      side = -side;
      extreme = i;
    }
  }
  return turns;
}

function meanSpeed(log: ServoLog, from: number): number {
  let path = 0;
  for (let i = from + 1; i < log.time.length; i++) path += Math.abs(log.command[i] - log.command[i - 1]);
  return path / (log.time[log.time.length - 1] - log.time[from]);
}
