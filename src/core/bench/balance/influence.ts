import { add, divide, multiply, negate, type Phasor, sizeOf, subtract } from './phasor';

/** A trial run: which plane carried the trial weight, the weight as kg at a wheel angle, the readings of all sensors. */
export interface TrialRun {
  readonly plane: number;
  /** kg at an angle, at the radius at which weights are put. */
  readonly weight: Phasor;
  /** One reading a sensor, any one unit. */
  readonly readings: readonly Phasor[];
}

export type BalanceOutcome =
  | {
      readonly kind: 'balanced';
      /** kg at an angle to add in each plane, trial weights taken off. */
      readonly corrections: readonly Phasor[];
      /** Half width of the 95 % interval of each correction's size, kg; 0 when no reading error is given. */
      readonly doubts: readonly number[];
      /** sensor x plane: reading per kg. */
      readonly influence: readonly (readonly Phasor[])[];
      /** Readings to expect with the corrections on. */
      readonly expected: readonly Phasor[];
      readonly remarks: readonly string[];
    }
  | { readonly kind: 'refused'; readonly sentence: string };

/** A trial weight should change a reading by about this share of it, or turn it by 30 degrees. Common practice. */
const LEAST_CHANGE = 0.25;
const SMALLEST_CHANGE = 0.03;
/** Largest condition number of the two-plane influence matrix that still gives an answer worth cutting metal for. */
const LARGEST_CONDITION = 50;

/**
 * Balances one or two planes by influence coefficients from trial-weight runs with a once-per-turn mark.
 *
 * @param initial       readings before, one a sensor (one for one plane, two for two)
 * @param trials        one run a plane, at the same speed, the other planes bare
 * @param readingError  half width of a reading's 95 % interval in each direction, same unit; 0 when not known
 * @returns corrections that bring the readings to nothing; refused when the trial weights say too little
 *
 * Source: Thearle 1934; Rao, Mechanical Vibrations, section 9.4 (from memory).
 */
export function balanceByInfluence(
  initial: readonly Phasor[],
  trials: readonly TrialRun[],
  readingError = 0,
): BalanceOutcome {
  const planes = initial.length;
  if (planes !== 1 && planes !== 2)
    return refuse(`${planes} readings are given: one plane needs one, two planes need two.`);
  if (trials.length !== planes)
    return refuse(`${trials.length} trial runs are given: ${planes} are needed, one a plane.`);
  const remarks: string[] = [];
  const influence: Phasor[][] = initial.map(() => new Array<Phasor>(planes));
  for (let p = 0; p < planes; p++) {
    const trial = trials.find((t) => t.plane === p);
    if (!trial) return refuse(`No trial run has its weight in plane ${p + 1}.`);
    if (!(sizeOf(trial.weight) > 0))
      return refuse(
        `The trial weight in plane ${p + 1} is ${sizeOf(trial.weight)} kg: it must be above zero.`,
      );
    if (trial.readings.length !== planes)
      return refuse(
        `The trial run of plane ${p + 1} has ${trial.readings.length} readings: ${planes} are needed.`,
      );
    const change = Math.max(...initial.map((v, s) => sizeOf(subtract(trial.readings[s], v)) / sizeOf(v)));
    if (!(change > SMALLEST_CHANGE)) {
      return refuse(
        `The trial weight in plane ${p + 1} changes no reading by more than ${(100 * change).toFixed(1)} %: use a heavier one.`,
      );
    }
    if (change < LEAST_CHANGE)
      remarks.push(
        `The trial weight in plane ${p + 1} changes the readings by ${(100 * change).toFixed(0)} % only: a heavier one would give a surer answer.`,
      );
    initial.forEach((v, s) => {
      influence[s][p] = divide(subtract(trial.readings[s], v), trial.weight);
    });
  }
  const corrections = solve(influence, initial);
  if (typeof corrections === 'string') return refuse(corrections);
  const expected = predict(influence, initial, corrections);
  const doubts = carryErrors(initial, trials, corrections, readingError);
  corrections.forEach((c, p) => {
    if (doubts[p] > 0.5 * sizeOf(c))
      remarks.push(
        `The correction in plane ${p + 1} is uncertain by ${((100 * doubts[p]) / sizeOf(c)).toFixed(0)} % of itself: steady the readings or use heavier trial weights.`,
      );
  });
  return { kind: 'balanced', corrections, doubts, influence, expected, remarks };
}

const refuse = (sentence: string): BalanceOutcome => ({ kind: 'refused', sentence });

/** Corrections, or why there are none. */
function solve(influence: readonly (readonly Phasor[])[], initial: readonly Phasor[]): Phasor[] | string {
  if (initial.length === 1) return [negate(divide(initial[0], influence[0][0]))];
  const [[a, b], [c, d]] = influence;
  const determinant = subtract(multiply(a, d), multiply(b, c));
  const norm = sizeOf(a) ** 2 + sizeOf(b) ** 2 + sizeOf(c) ** 2 + sizeOf(d) ** 2;
  // For a 2x2 matrix s1^2 + s2^2 is the squared norm and s1 s2 the determinant's size.
  const product = sizeOf(determinant);
  const condition =
    product > 0
      ? (norm + Math.sqrt(Math.max(0, norm * norm - 4 * product * product))) / (2 * product)
      : Number.POSITIVE_INFINITY;
  if (!(condition < LARGEST_CONDITION)) {
    return `The two planes act alike on both sensors (condition ${condition.toPrecision(2)}, ${LARGEST_CONDITION} is the most): move planes or sensors further apart, or balance in one plane.`;
  }
  const x = divide(subtract(multiply(b, initial[1]), multiply(d, initial[0])), determinant);
  const y = divide(subtract(multiply(c, initial[0]), multiply(a, initial[1])), determinant);
  return [x, y];
}

/** Readings after weights are put on, by the influence coefficients. */
export function predict(
  influence: readonly (readonly Phasor[])[],
  initial: readonly Phasor[],
  weights: readonly Phasor[],
): Phasor[] {
  return initial.map((v, s) => weights.reduce((sum, w, p) => add(sum, multiply(influence[s][p], w)), v));
}

/** First-order errors of the corrections from independent errors of all readings, by differences. */
function carryErrors(
  initial: readonly Phasor[],
  trials: readonly TrialRun[],
  corrections: readonly Phasor[],
  error: number,
): number[] {
  if (!(error > 0)) return corrections.map(() => 0);
  const planes = initial.length;
  const solveWith = (v: readonly Phasor[], t: readonly (readonly Phasor[])[]): Phasor[] | string => {
    const m = v.map((_, s) =>
      trials
        .map((run) => run.plane)
        .map((_, p) => {
          const k = trials.findIndex((run) => run.plane === p);
          return divide(subtract(t[k][s], v[s]), trials[k].weight);
        }),
    );
    return solve(m, v);
  };
  const readings = trials.map((t) => t.readings);
  const sums = corrections.map(() => 0);
  const h = 1e-4 * error;
  for (let run = -1; run < planes; run++) {
    for (let s = 0; s < planes; s++) {
      for (const push of [
        { re: h, im: 0 },
        { re: 0, im: h },
      ]) {
        const v = run < 0 ? initial.map((x, k) => (k === s ? add(x, push) : x)) : initial;
        const t =
          run < 0
            ? readings
            : readings.map((r, k) => (k === run ? r.map((x, i) => (i === s ? add(x, push) : x)) : r));
        const moved = solveWith(v, t);
        if (typeof moved === 'string') continue;
        moved.forEach((m, p) => {
          sums[p] += ((sizeOf(m) - sizeOf(corrections[p])) * (error / h)) ** 2;
        });
      }
    }
  }
  return sums.map(Math.sqrt);
}
