/** Free or prescribed motion of a star from a start, sampled into columns. For tests, pictures and the command line. */
import { createRk4Work, integrateAdaptively, stepRk4 } from './integrators';
import { settleState, starDerivative } from './starDynamics';
import { compileStar, restState, type StarDescription, type StarModel } from './starModel';
import { createStarWork, type StarWork } from './starWork';

/** What differs from rest at the start. Arrays are one entry per gyro. */
export interface StarStart {
  /** Pose numbers of the footing (an angle; or quaternion and place); rest when left out. */
  readonly pose?: readonly number[];
  readonly baseSpeeds?: readonly number[];
  readonly tilt?: readonly number[];
  readonly tiltRate?: readonly number[];
  /** rad/s, wheels relative to gimbals. */
  readonly wheelSpeed?: readonly number[];
}

export interface StarColumns {
  readonly model: StarModel;
  /** s, one per sample. */
  readonly time: Float64Array;
  /** One column per state number, in the state's order. */
  readonly columns: readonly Float64Array[];
  /** Columns by meaning; the same arrays. */
  readonly pose: readonly Float64Array[];
  readonly tilt: readonly Float64Array[];
  readonly baseSpeeds: readonly Float64Array[];
  readonly tiltRate: readonly Float64Array[];
  readonly wheelSpeed: readonly Float64Array[];
  readonly last: Float64Array;
}

/** Fills the effort for an instant; may also set the moving base or planted point in `work`. */
export type EffortLaw = (time: number, state: Float64Array, effort: Float64Array, work: StarWork) => void;

/** State vector of a start. Throws RangeError on a wrong length. */
export function startState(model: StarModel, start: StarStart): Float64Array {
  const state = restState(model);
  const put = (values: readonly number[] | undefined, at: number, size: number, name: string): void => {
    if (values === undefined) return;
    if (values.length !== size)
      throw new RangeError(`${name}: ${values.length} numbers where ${size} belong`);
    state.set(values, at);
  };
  const n = model.gimbals;
  put(start.pose, 0, model.footing.poseSize, 'pose');
  put(start.tilt, model.tiltAt, n, 'tilt');
  put(start.baseSpeeds, model.baseSpeedAt, model.footing.speeds, 'baseSpeeds');
  put(start.tiltRate, model.rateAt, n, 'tiltRate');
  put(start.wheelSpeed, model.wheelSpeedAt, n, 'wheelSpeed');
  return state;
}

const columnsOf = (
  model: StarModel,
  times: readonly number[],
  rows: readonly Float64Array[],
): StarColumns => {
  const columns = Array.from({ length: model.stateSize }, (_, k) =>
    Float64Array.from(rows, (row) => row[k]!),
  );
  return {
    model,
    time: Float64Array.from(times),
    columns,
    pose: columns.slice(0, model.tiltAt),
    tilt: columns.slice(model.tiltAt, model.baseSpeedAt),
    baseSpeeds: columns.slice(model.baseSpeedAt, model.rateAt),
    tiltRate: columns.slice(model.rateAt, model.wheelSpeedAt),
    wheelSpeed: columns.slice(model.wheelSpeedAt),
    last: rows[rows.length - 1]!,
  };
};

/**
 * Motion of a star by fixed RK4 steps, sampled.
 *
 * @param description  the star
 * @param start        what differs from rest
 * @param seconds      how long, s
 * @param dt           step, s; the nearest whole number of steps is taken
 * @param sampleEvery  steps between samples; the start and the end are always samples
 * @param law          effort at each stage; none when left out
 *
 * O(steps x gyros); allocates the columns only.
 */
export function simulateFree(
  description: StarDescription,
  start: StarStart,
  seconds: number,
  dt: number,
  sampleEvery = 1,
  law?: EffortLaw,
): StarColumns {
  const model = compileStar(description);
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const state = startState(model, start);
  const rk4 = createRk4Work(model.stateSize);
  const derivative = (time: number, x: Float64Array, out: Float64Array): void => {
    law?.(time, x, effort, work);
    starDerivative(model, work, x, effort, out);
  };
  const steps = Math.max(1, Math.round(seconds / dt));
  const step = seconds / steps;
  const times = [0];
  const rows = [Float64Array.from(state)];
  for (let k = 1; k <= steps; k++) {
    stepRk4(derivative, (k - 1) * step, state, step, rk4);
    settleState(model, state);
    if (k % sampleEvery === 0 || k === steps) {
      times.push(k * step);
      rows.push(Float64Array.from(state));
    }
  }
  return columnsOf(model, times, rows);
}

/**
 * The same motion by the adaptive eighth-order method, sampled at equal intervals. The reference other steps are
 * measured against.
 *
 * @param tolerance  absolute and relative, on each state number
 */
export function simulateExactly(
  description: StarDescription,
  start: StarStart,
  seconds: number,
  samples: number,
  tolerance = 1e-12,
  law?: EffortLaw,
): StarColumns {
  const model = compileStar(description);
  const work = createStarWork(model);
  const effort = new Float64Array(model.effortSize);
  const state = startState(model, start);
  const times = [0];
  const rows = [Float64Array.from(state)];
  let firstStep: number | undefined;
  for (let k = 1; k <= samples; k++) {
    const outcome = integrateAdaptively(
      (time, x, out) => {
        law?.(time, x, effort, work);
        starDerivative(model, work, x, effort, out);
      },
      ((k - 1) * seconds) / samples,
      (k * seconds) / samples,
      state,
      { absolute: tolerance, relative: tolerance, ...(firstStep === undefined ? {} : { firstStep }) },
      (_time, x) => settleState(model, x),
    );
    if (outcome.kind === 'gave-up')
      throw new Error(`integration gave up at ${outcome.time} s: ${outcome.reason}`);
    firstStep = outcome.lastStep;
    times.push((k * seconds) / samples);
    rows.push(Float64Array.from(state));
  }
  return columnsOf(model, times, rows);
}
