import { type FitOutcome, fitLeastSquares } from '../leastSquares';
import { differenceNoise, fisherTail, median } from '../statistics';
import {
  type Estimate,
  estimateOf,
  type Identified,
  judgeResiduals,
  type Patch,
  type PatchQuantity,
  patchOf,
  type Refused,
  refuse,
  show,
} from './result';
import { layGrid, predictRun, type RollParameters, type RunData, type Stretch } from './rollPrediction';
import { countReadings, dropKnocked, joinStretches } from './stretches';

export interface ClosedLoopLog {
  /** s, rising, even to a few per cent. */
  readonly time: Float64Array;
  /** rad. */
  readonly roll: Float64Array;
  /** rad, the tilt commanded to the servo, held from each stamp on. */
  readonly tiltCommand: Float64Array;
  /** N*m, a known moment on the body, if there was one. */
  readonly moment?: Float64Array;
}

/** What the rig says now; SI. Stiffness and weight come from the scales and are held. */
export interface ClosedLoopRig extends RollParameters {
  /** N*m/rad, m g l: positive topples, negative swings back. */
  readonly stiffness: number;
  /** N. */
  readonly weight: number;
}

export const CLOSED_LOOP_NAMES = ['inertia', 'momentum', 'lag', 'delay', 'centreOffset'] as const;
export type ClosedLoopName = (typeof CLOSED_LOOP_NAMES)[number];

export interface ClosedLoopResult extends Identified {
  /** The rig's numbers that lie outside what the log allows. */
  readonly mustChange: readonly ClosedLoopName[];
  /** Fewest changes that explain the log as well as changing all, in order of what each brings. */
  readonly fewestChanges: readonly ClosedLoopName[];
  /** Residual spread with the rig as it stands, rad. */
  readonly spreadBefore: number;
}

export interface ClosedLoopOptions {
  /** Which numbers may change; all five when absent. */
  readonly free?: readonly ClosedLoopName[];
  /** False leaves the search for the fewest changes out, which is most of the work. */
  readonly findsFewest?: boolean;
}

const UNITS: Readonly<Record<ClosedLoopName, string>> = {
  inertia: 'kg·m²',
  momentum: 'N·m·s',
  lag: 's',
  delay: 's',
  centreOffset: 'm',
};
const LABELS: Readonly<Record<ClosedLoopName, string>> = {
  inertia: 'inertia',
  momentum: 'momentum',
  lag: 'lag',
  delay: 'delay',
  centreOffset: 'centre of mass offset',
};
const QUANTITIES: Readonly<Record<ClosedLoopName, PatchQuantity>> = {
  inertia: 'bodyInertia',
  momentum: 'arrayMomentum',
  lag: 'servoLag',
  delay: 'servoDelay',
  centreOffset: 'centreOfMassOffset',
};
const MOST_POINTS = 20_000;
/** Length of the stretches in toppling times: short to find knocks by, then joined, since every start left free costs a little. */
const SHORTEST = 2.5;
const LONGEST = 10;
/**
 * Finds which numbers of the rig must change for the model to match a closed-loop run.
 *
 * The run is cut into stretches in each of which roll and roll rate start free, for a body that topples cannot be predicted
 * for long; within a stretch the logged command drives servo and body. Stretches of 2.5 toppling times show where the
 * body was knocked; those that were not are joined to stretches of up to 10 for the fit proper, because with the loop
 * closed each start left free pulls the answer a little (with short ones the inertia came out 1 % high). Stiffness and weight are held, for only ratios to them show in the motion. The controller
 * itself need not be known.
 *
 * @param log   run with the loop closed and something to see in it: shoves, set-point steps
 * @param rig   present numbers; where the search starts and what is compared
 *
 * Source: Ljung, System Identification, 1999, ch. 13 (closed loop); Golub and Pereyra 1973 (variable projection).
 */
export function identifyClosedLoop(
  log: ClosedLoopLog,
  rig: ClosedLoopRig,
  options: ClosedLoopOptions = {},
): ClosedLoopResult | Refused {
  const free = options.free ?? CLOSED_LOOP_NAMES;
  const data = prepareRun(log, rig);
  if ('kind' in data) return data;
  const noise = differenceNoise(data.roll);
  const range = Math.max(...data.roll) - Math.min(...data.roll);
  if (!(range > 10 * noise))
    return refuse(
      `The body hardly moves in this run (${show(range)} rad, noise ${show(noise)} rad): push it, or step its set point.`,
    );
  const travel = Math.max(...data.command) - Math.min(...data.command);
  if (!(travel > 0)) return refuse('The tilt command never changes in this run.');
  let run = data;
  let outcome = fitRun(run, rig, free);
  // Knocks bend the first fit, so judge every stretch again by the fit without the worst of them.
  for (let round = 0; round < 2 && outcome.kind === 'fitted'; round++) {
    const left = new Float64Array(data.roll.length);
    predictRun(data, withValues(rig, free, outcome.fit.values), left);
    const quiet = dropKnocked(data, left);
    if (
      quiet.stretches.length === run.stretches.length &&
      quiet.stretches.every((s, k) => s === run.stretches[k])
    )
      break;
    run = quiet;
    outcome = fitRun(run, rig, free, outcome.fit.values);
  }
  const knocked = data.stretches.length - run.stretches.length;
  if (outcome.kind === 'fitted') {
    run = { ...run, stretches: joinStretches(run, LONGEST / SHORTEST) };
    outcome = fitRun(run, rig, free, outcome.fit.values);
  }
  if (outcome.kind !== 'fitted')
    return refuse(`${outcome.sentence} Hold one of them, or log a livelier run.`);
  const { fit } = outcome;
  const whole = measureSpread(run, rig);
  if (fit.residualSpread > 0.2 * range)
    return refuse(
      `The model does not explain this run: ${show((100 * fit.residualSpread) / range, 2)} % of its range is left over.`,
    );
  const estimates: Estimate[] = free.map((name, j) => {
    const e = estimateOf(fit, j, LABELS[name], UNITS[name]);
    return e;
  });
  const mustChange = free.filter((name, j) => rig[name] < estimates[j].low || rig[name] > estimates[j].high);
  const fewestChanges =
    options.findsFewest === false
      ? mustChange
      : findFewest(run, rig, free, fit.sumOfSquares, fit.degreesOfFreedom, fit.correlation);
  const patches: Patch[] = mustChange.map((name) => patchOf(QUANTITIES[name], estimates[free.indexOf(name)]));
  const remarks = judgeResiduals(fit);
  if (knocked > 0)
    remarks.push(
      `${knocked} of ${data.stretches.length} stretches were knocked by something the log does not know and are left out.`,
    );
  free.forEach((name, j) => {
    const e = estimates[j];
    const isZeroable = name === 'centreOffset' || name === 'delay';
    if (!isZeroable && e.low <= 0)
      remarks.push(
        `The log hardly fixes the ${LABELS[name]}: 95 % from ${show(e.low)} to ${show(e.high)} ${UNITS[name]}.`,
      );
  });
  if (mustChange.length === 0)
    remarks.push('Every number of the rig lies within what this run allows: nothing need change.');
  const predicted = run.roll.map((v, i) => v + fit.residuals[i]);
  return {
    kind: 'identified',
    estimates,
    patches,
    remarks,
    mustChange,
    fewestChanges,
    spreadBefore: whole,
    residualSpread: fit.residualSpread,
    comparison: { time: run.time, measured: run.roll, predicted, unit: 'rad' },
  };
}

function withValues(
  rig: RollParameters,
  free: readonly ClosedLoopName[],
  values: Float64Array,
): Record<ClosedLoopName, number> {
  const p: Record<ClosedLoopName, number> = {
    inertia: rig.inertia,
    momentum: rig.momentum,
    lag: rig.lag,
    delay: rig.delay,
    centreOffset: rig.centreOffset,
  };
  free.forEach((name, j) => {
    p[name] = values[j];
  });
  return p;
}

function prepareRun(log: ClosedLoopLog, rig: ClosedLoopRig): RunData | Refused {
  const n = log.time.length;
  if (n < 100) return refuse(`The log has ${n} readings of the run; 100 are needed.`);
  if (n > MOST_POINTS) return refuse(`The log has ${n} readings: cut it to at most ${MOST_POINTS}.`);
  for (const [name, column] of [
    ['roll', log.roll],
    ['tilt command', log.tiltCommand],
  ] as const) {
    const gap = column.findIndex((v) => !Number.isFinite(v));
    if (gap >= 0)
      return refuse(`The ${name} is missing at ${show(log.time[gap])} s: cut the log to a whole stretch.`);
  }
  const step = median(Float64Array.from({ length: n - 1 }, (_, i) => log.time[i + 1] - log.time[i]));
  for (let i = 1; i < n; i++) {
    if (log.time[i] - log.time[i - 1] > 3 * step)
      return refuse(
        `The log has a gap of ${show(log.time[i] - log.time[i - 1])} s at ${show(log.time[i - 1])} s: cut it there.`,
      );
  }
  if (!(rig.inertia > 0)) return refuse(`The rig's inertia is ${rig.inertia} kg·m²: it must be above zero.`);
  const rate = Math.sqrt(Math.abs(rig.stiffness) / rig.inertia);
  const length = Math.max(12, Math.min(Math.floor(n / 3), Math.round(SHORTEST / rate / step)));
  const time = log.time.map((t) => t - log.time[0]);
  const stretches: Stretch[] = [];
  // Where the servo stood before the log began is not known; by then it is forgotten.
  const settled = Math.min(Math.floor(n / 4), Math.ceil((12 * (rig.lag + rig.delay)) / step));
  for (let i = settled; i + length <= n; i += length) stretches.push({ from: i, length });
  return {
    time,
    roll: log.roll,
    command: log.tiltCommand,
    moment: log.moment,
    stiffness: rig.stiffness,
    weight: rig.weight,
    stretches,
    ...layGrid(time, log.tiltCommand),
    step,
  };
}

const SIZES = (rig: ClosedLoopRig): Readonly<Record<ClosedLoopName, number>> => ({
  inertia: rig.inertia,
  momentum: Math.abs(rig.momentum),
  lag: Math.max(rig.lag, 5e-3),
  delay: Math.max(rig.delay, 5e-3),
  centreOffset: 1e-3,
});

function fitRun(
  run: RunData,
  rig: ClosedLoopRig,
  free: readonly ClosedLoopName[],
  from?: Float64Array,
): FitOutcome {
  const p = withValues(rig, free, from ?? Float64Array.from(free, (name) => rig[name]));
  const size = SIZES(rig);
  const lowest: Readonly<Record<ClosedLoopName, number>> = {
    inertia: 0.05 * rig.inertia,
    momentum: Number.NEGATIVE_INFINITY,
    lag: 1e-4,
    delay: 0,
    centreOffset: Number.NEGATIVE_INFINITY,
  };
  return fitLeastSquares(
    {
      names: free.map((name) => LABELS[name]),
      rows: run.roll.length,
      sizes: free.map((name) => size[name]),
      lower: free.map((name) => lowest[name]),
      evaluate(x, out) {
        for (let j = 0; j < free.length; j++) p[free[j]] = x[j];
        predictRun(run, p, out);
      },
    },
    free.map((name) => Math.max(p[name], lowest[name])),
    // Rows outside the stretches hold zero and count for nothing either.
    {
      isTimeSeries: true,
      eliminated: 2 * run.stretches.length + run.roll.length - countReadings(run),
    },
  );
}

function sumOfSquares(run: RunData, p: RollParameters): number {
  const out = new Float64Array(run.roll.length);
  predictRun(run, p, out);
  return out.reduce((s, v) => s + v * v, 0);
}

const measureSpread = (run: RunData, p: RollParameters): number =>
  Math.sqrt(sumOfSquares(run, p) / Math.max(1, countReadings(run) - 2 * run.stretches.length));

/** Forward selection: add the change that helps most until what is left is no better than changing all (F test, 1 %). */
function findFewest(
  run: RunData,
  rig: ClosedLoopRig,
  free: readonly ClosedLoopName[],
  least: number,
  dof: number,
  correlation: number,
): ClosedLoopName[] {
  const chosen: ClosedLoopName[] = [];
  let sum = sumOfSquares(run, rig);
  const effective = Math.max(1, dof / correlation);
  while (chosen.length < free.length) {
    const open = free.length - chosen.length;
    const f = ((sum / least - 1) * effective) / open;
    if (fisherTail(f, open, effective) > 0.01) break;
    let best: ClosedLoopName | undefined;
    let bestSum = sum;
    for (const name of free) {
      if (chosen.includes(name)) continue;
      const outcome = fitRun(run, rig, [...chosen, name]);
      if (outcome.kind === 'fitted' && outcome.fit.sumOfSquares < bestSum)
        [best, bestSum] = [name, outcome.fit.sumOfSquares];
    }
    if (!best) break;
    chosen.push(best);
    sum = bestSum;
  }
  return chosen;
}
