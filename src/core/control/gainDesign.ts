import { Matrix } from 'ml-matrix';
import type { Controller } from './controllers';
import { limitDelaySecondOrder } from './delayLimits';
import { searchMaximum } from './directSearch';
import type { EstimatorModel } from './estimators';
import { holdInput } from './linear/exponential';
import { solveDiscreteRiccati } from './linear/riccati';
import { buildController, type Law } from './loopModel';
import { createLoopScorer, type LoopScorer, scoreLoop } from './loopScore';
import { judgeLoop, type Margins, measureDecay } from './margins';
import { buildPlant, type RollTiltPlant } from './plantModels';

/** How far the real loop may lie from its description; each a share of the nominal figure, both ways. */
export interface LoopSpread {
  readonly delay: number;
  readonly gain: number;
  readonly momentum: number;
}

export const USUAL_SPREAD: LoopSpread = { delay: 0.3, gain: 0.15, momentum: 0.1 };

export interface DesignRequest {
  readonly plant: RollTiltPlant;
  readonly estimator: EstimatorModel;
  readonly law: Law;
  readonly spread?: LoopSpread;
  /** 1/s that every mode of the loop must reach; a choice in keeping with the body when left out */
  readonly leastDecay?: number;
  /** feedback only: find the balance point by itself */
  readonly hasTrim?: boolean;
}

export type DesignOutcome =
  | {
      readonly kind: 'designed';
      readonly controller: Controller;
      readonly gains: Float64Array;
      readonly margins: Margins;
      /** 1/s, slowest mode, estimator included */
      readonly decay: number;
      /** smallest |1 + L| over all corners of the spread: 0 at the border, 1 is the most there can be */
      readonly robustMargin: number;
      readonly evaluations: number;
    }
  | {
      readonly kind: 'impossible';
      /** no set of gains was found that holds in every corner; `holdsNominally` tells whether one holds at all */
      readonly reason: 'delay-too-long' | 'neutral-body' | 'no-gains-found';
      readonly holdsNominally: boolean;
      /** s, the longest delay at which lean and lean rate feedback can hold this body at all; Infinity for a float */
      readonly delayLimit: number;
    };

interface Corner {
  readonly scorer: LoopScorer;
  readonly scale: number;
}

/**
 * 1/s asked for when nothing is said: a quarter of the toppling rate, or 0.3 of a float's roll frequency. A trim term is slow
 * by nature and gets half of that: asked for more, it eats the margin.
 */
export function chooseLeastDecay(plant: RollTiltPlant, hasTrim = false): number {
  const rate = Math.sqrt(Math.abs(plant.stiffness) / plant.inertia);
  return (plant.stiffness > 0 ? 0.25 : 0.3) * (hasTrim ? 0.5 : 1) * rate;
}

/**
 * Gains for this hardware: those whose margin is largest in the worst corner of delay, gain and momentum, among
 * those that settle fast enough.
 *
 * Starts from pole placement at several speeds and from a linear-quadratic regulator, then climbs by direct
 * search. The answer is verified by the eigenvalues of the full loop at every corner before it is called
 * designed. About 0.05 s.
 */
export function designGains(request: DesignRequest): DesignOutcome {
  const { plant, estimator, law } = request;
  const spread = request.spread ?? USUAL_SPREAD;
  const topplingRate = plant.stiffness / plant.inertia;
  const delayLimit = topplingRate > 0 ? limitDelaySecondOrder(topplingRate) : Number.POSITIVE_INFINITY;
  const leastDecay = request.leastDecay ?? chooseLeastDecay(plant, request.hasTrim === true);
  if (!(leastDecay > 0))
    return { kind: 'impossible', reason: 'neutral-body', holdsNominally: false, delayLimit };

  const nominal = createLoopScorer(plant, estimator, law, leastDecay);
  const late = { ...plant, delay: plant.delay * (1 + spread.delay) };
  const slow = createLoopScorer(late, estimator, law, leastDecay);
  const low = (1 - spread.gain) * (1 - spread.momentum);
  const high = (1 + spread.gain) * (1 + spread.momentum);
  const corners: Corner[] = [
    { scorer: nominal, scale: 1 },
    { scorer: nominal, scale: low },
    { scorer: nominal, scale: high },
    { scorer: slow, scale: low },
    { scorer: slow, scale: high },
  ];
  const worst = (gains: ArrayLike<number>): number => {
    let least = Number.POSITIVE_INFINITY;
    for (const corner of corners) least = Math.min(least, scoreLoop(corner.scorer, gains, corner.scale));
    return least;
  };

  let start: Float64Array | undefined;
  let startValue = Number.NEGATIVE_INFINITY;
  let evaluations = 0;
  for (const candidate of listStarts(request, leastDecay)) {
    const value = worst(candidate);
    evaluations++;
    if (value > startValue) {
      startValue = value;
      start = candidate;
    }
  }
  if (start === undefined)
    return { kind: 'impossible', reason: 'neutral-body', holdsNominally: false, delayLimit };
  const signs = start.map(Math.sign);
  const active = [...start.keys()].filter((i) => start[i] !== 0);
  const spell = (x: Float64Array): Float64Array => {
    const gains = new Float64Array(start.length);
    active.forEach((i, j) => {
      gains[i] = signs[i]! * Math.exp(x[j]!);
    });
    return gains;
  };
  const found = searchMaximum(
    (x) => worst(spell(x)),
    active.map((i) => Math.log(Math.abs(start[i]!))),
    { evaluations: 500, tolerance: 1e-4, startSize: 0.25 },
  );
  evaluations += found.evaluations;
  const gains = spell(found.x);
  return conclude(request, gains, found.value, evaluations, corners, late, delayLimit);
}

function conclude(
  request: DesignRequest,
  gains: Float64Array,
  robustMargin: number,
  evaluations: number,
  corners: readonly Corner[],
  late: RollTiltPlant,
  delayLimit: number,
): DesignOutcome {
  const { plant, estimator, law } = request;
  const verdict = judgeLoop({ plant, estimator, law, gains });
  const holdsNominally = verdict.kind === 'holds';
  /* A reaction wheel's gains pass through the plant all three, so there the gains themselves are scaled. */
  const holdsEverywhere = corners.every((corner, i) => {
    const p = i >= 3 ? late : plant;
    const isWheel = plant.actuator === 'wheelTorque';
    const scaled = isWheel ? p : { ...p, momentum: p.momentum * corner.scale };
    const applied = isWheel ? gains.map((g) => g * corner.scale) : gains;
    return measureDecay({ plant: scaled, estimator, law, gains: applied }) > 0;
  });
  if (!(robustMargin > 0) || !holdsNominally || !holdsEverywhere) {
    const tooLong = late.delay >= delayLimit;
    return {
      kind: 'impossible',
      reason: tooLong ? 'delay-too-long' : 'no-gains-found',
      holdsNominally,
      delayLimit,
    };
  }
  return {
    kind: 'designed',
    controller: buildController(law, gains),
    gains,
    margins: verdict.margins,
    decay: verdict.decay,
    robustMargin,
    evaluations,
  };
}

/* Sets of gains from which the climb may start: poles placed at several speeds, and regulators. */
function listStarts(request: DesignRequest, leastDecay: number): Float64Array[] {
  const { plant, law } = request;
  const natural = Math.sqrt(Math.abs(plant.stiffness) / plant.inertia);
  const starts: Float64Array[] = [];
  for (const factor of [0.35, 0.6, 0.8, 1, 1.3, 1.7, 2.3, 3, 4]) {
    for (const zeta of [0.4, 0.7, 1, 1.5]) {
      for (const p of [1.3 * leastDecay, 3 * leastDecay]) {
        const placed = placePoles(request, factor * natural, zeta, p, request.hasTrim ? 1.3 * leastDecay : 0);
        if (placed !== undefined) starts.push(placed);
      }
    }
  }
  if (law === 'feedback' && !request.hasTrim) {
    for (const effort of [0.1, 1, 10, 100]) {
      const gains = designRegulator(plant, {
        lean: 1,
        leanRate: 1 / natural ** 2,
        tilt: 1e-3,
        tiltRate: 1 / (effort * natural) ** 2,
      });
      if (gains !== undefined) starts.push(Float64Array.of(gains[0]!, gains[1]!, gains[2]!, 0, 0));
    }
  }
  return starts;
}

/*
 * Gains that put the modes of the loop without lag and delay at a pair (w, zeta), at p and, with trim, at q.
 * Feedback: I s^4 + (h b - I c + d) s^3 + (h a - k - I e - d c) s^2 + (k c - d e) s + k e with a, b, c, e the
 * gains of lean, lean rate, tilt and trim; without trim one power less.
 */
function placePoles(
  request: DesignRequest,
  w: number,
  zeta: number,
  p: number,
  q: number,
): Float64Array | undefined {
  const { inertia: I, stiffness: k, damping: d, momentum: h } = request.plant;
  const a1 = 2 * zeta * w;
  const a0 = w * w;
  switch (request.law) {
    case 'pidTilt':
      return Float64Array.of((a1 * I) / h, Math.max(I * a0 + k, 0.05 * Math.abs(k)) / h, (0.1 * I) / h);
    case 'pidTiltRate': {
      const lean = I * (a0 + a1 * p) + k;
      const rate = I * (a1 + p) - d;
      return lean > 0 && rate > 0 ? Float64Array.of(lean / h, (I * a0 * p) / h, rate / h) : undefined;
    }
    case 'feedback': {
      const e = (I * a0 * p * q) / k;
      const c = (I * (a0 * (p + q) + a1 * p * q) + d * e) / k;
      const b = (I * (a1 + p + q + c) - d) / h;
      const a = (I * (a0 + a1 * (p + q) + p * q + e) + k + d * c) / h;
      return a === 0 || b === 0 ? undefined : Float64Array.of(a, b, c, 0, q > 0 ? e : 0);
    }
    case 'reactionWheel': {
      /* the same with the wheel's momentum for h times tilt, and no servo gain between */
      const c = (I * a0 * p) / k;
      return Float64Array.of(I * (a0 + a1 * p) + k + d * c, I * (a1 + p + c) - d, c);
    }
  }
}

/** Weights of the regulator: cost = lean weight * lean^2 + ... + tilt rate weight * (commanded tilt rate)^2. */
export interface RegulatorWeights {
  readonly lean: number;
  readonly leanRate: number;
  readonly tilt: number;
  readonly tiltRate: number;
}

/**
 * Linear-quadratic gains on lean, lean rate and tilt for a tilt rate command, the delay and lag left out.
 * Undefined when the body is neutral, since then nothing ties the tilt to the lean.
 *
 * @returns 3: 1/s per rad of lean, 1 per rad/s of lean rate, 1/s per rad of tilt
 */
export function designRegulator(plant: RollTiltPlant, weights: RegulatorWeights): Float64Array | undefined {
  const bare = buildPlant({ ...plant, actuator: 'tilt', servoLag: 0 });
  /* lag-free plant state (roll, total momentum / I), tilt as a third state driven by the commanded rate */
  const g = plant.momentum / plant.inertia;
  const A = Matrix.zeros(3, 3);
  A.setSubMatrix(bare.A, 0, 0);
  A.setSubMatrix(bare.B, 0, 2);
  const B = new Matrix([[0], [0], [1]]);
  const held = holdInput(A, B, plant.sampleTime);
  const rate = new Matrix([[0, 1, -g]]);
  const Q = Matrix.zeros(3, 3);
  Q.set(0, 0, weights.lean);
  Q.set(2, 2, weights.tilt);
  Q.add(rate.transpose().mmul(rate).mul(weights.leanRate));
  const solved = solveDiscreteRiccati(held.transition, held.input, Q, new Matrix([[weights.tiltRate]]));
  if (solved.kind === 'failed') return undefined;
  /* -K (roll, total, tilt) with total = roll rate + g tilt */
  const K = solved.K;
  return Float64Array.of(-K.get(0, 0), -K.get(0, 1), -(K.get(0, 2) + g * K.get(0, 1)));
}
