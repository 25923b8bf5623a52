import type {
  AxisArray,
  AxisEnd,
  AxisPlan,
  FirmSupport,
  LeanSupport,
  MomentumPlanProblem,
} from '../../src/core/planning/momentumPlanProblem';

/** Uniform numbers from a seed (mulberry32, a published public-domain generator). */
export function createRandom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

type Random = () => number;

const between = (random: Random, from: number, to: number): number => from + (to - from) * random();
/** Spread evenly over its decades: limits come in all sizes. */
const spread = (random: Random, from: number, to: number): number =>
  Math.exp(between(random, Math.log(from), Math.log(to)));
const chance = (random: Random, share: number): boolean => random() < share;

/** A sum of three harmonics, a step now and then, of about `amplitude`. */
function drawSignal(random: Random, length: number, amplitude: number): Float64Array {
  const out = new Float64Array(length);
  for (let h = 1; h <= 3; h++) {
    const a = (amplitude * between(random, -1, 1)) / h;
    const phase = between(random, 0, 2 * Math.PI);
    for (let k = 0; k < length; k++) out[k] += a * Math.sin((2 * Math.PI * h * k) / length + phase);
  }
  if (chance(random, 0.3)) {
    const from = Math.floor(random() * length);
    const step = amplitude * between(random, -0.5, 0.5);
    for (let k = from; k < Math.min(length, from + length / 4); k++) out[k] += step;
  }
  return out;
}

function drawArray(random: Random): AxisArray {
  const momentum = spread(random, 0.05, 5);
  const torque = chance(random, 0.3) ? spread(random, 0.1, 20) : Number.POSITIVE_INFINITY;
  if (chance(random, 0.25)) {
    const limit = Number.isFinite(torque) ? torque : spread(random, 0.1, 20);
    return { kind: 'reaction', momentum, tiltMin: 0, tiltMax: 0, tiltRate: 0, torque: limit, servo: null };
  }
  const servo = chance(random, 0.3)
    ? {
        torque: spread(random, 0.05, 5),
        gimbalInertia: spread(random, 1e-5, 1e-3),
        wheelMomentum: momentum / 2,
        gimbals: chance(random, 0.5) ? 1 : 2,
      }
    : null;
  return {
    kind: 'gimballed',
    momentum,
    tiltMin: -between(random, 0.1, 1.4),
    tiltMax: between(random, 0.1, 1.4),
    tiltRate: spread(random, 0.3, 15),
    torque,
    servo,
  };
}

function drawFirm(random: Random, nodes: number, intervals: number): FirmSupport {
  const amplitude = spread(random, 0.05, 5);
  const weight = spread(random, 10, 300);
  const force = drawSignal(random, nodes, 0.1 * weight).map((v) => Math.max(0, v + weight));
  const foot = spread(random, 0.002, 0.1);
  const stance = chance(random, 0.5) ? between(random, 0, 0.06) : 0;
  const pressureMin = new Float64Array(intervals);
  const pressureMax = new Float64Array(intervals);
  const cycles = 1 + Math.floor(random() * 3);
  for (let k = 0; k < intervals; k++) {
    const side = Math.sin((2 * Math.PI * cycles * (k + 0.5)) / intervals) >= 0 ? 1 : -1;
    pressureMin[k] = side * stance - foot;
    pressureMax[k] = side * stance + foot;
  }
  if (chance(random, 0.05)) {
    // a moment in flight: no force, nothing to push on
    const at = Math.floor(random() * nodes);
    force[at] = 0;
  }
  return {
    kind: 'firm',
    ask: drawSignal(random, nodes, amplitude),
    verticalForce: force,
    pressureMin,
    pressureMax,
  };
}

function drawLean(random: Random, nodes: number): LeanSupport {
  const mass = spread(random, 1, 50);
  const height = between(random, 0.1, 1);
  const isFloat = chance(random, 0.3);
  return {
    kind: 'lean',
    inertia: 1.2 * mass * height * height,
    stiffness: mass * 9.81 * height * (isFloat ? -0.3 : chance(random, 0.5) ? 1 : 0.4),
    damping: chance(random, 0.5) ? 0 : mass * height * height * between(random, 0, 1),
    demand: drawSignal(random, nodes, mass * height * spread(random, 0.01, 0.5)),
    weight: mass * 9.81,
    leanMin: -spread(random, 0.01, 0.3),
    leanMax: spread(random, 0.01, 0.3),
  };
}

/** One random plan; the same seed gives the same plan. */
export function drawPlan(seed: number): MomentumPlanProblem {
  const random = createRandom(seed);
  const intervals = 4 + Math.floor(random() * 45);
  const isCyclic = chance(random, 0.6);
  const nodes = isCyclic ? intervals : intervals + 1;
  const axes: AxisPlan[] = [];
  const start: AxisEnd[] = [];
  const end: (AxisEnd | null)[] = [];
  for (let i = 0; i < (chance(random, 0.4) ? 2 : 1); i++) {
    const array = drawArray(random);
    const support = chance(random, 0.6) ? drawFirm(random, nodes, intervals) : drawLean(random, nodes);
    axes.push({ array, support, bodyRate: chance(random, 0.3) ? drawSignal(random, nodes, 0.5) : null });
    const rest: AxisEnd = { momentum: 0, lean: 0, leanRate: 0 };
    start.push(chance(random, 0.5) ? rest : { momentum: 0.1 * array.momentum, lean: 0.004, leanRate: 0.01 });
    end.push(chance(random, 0.5) ? rest : null);
  }
  return {
    intervals,
    step: spread(random, 0.3, 4) / intervals,
    ends: isCyclic ? { kind: 'cyclic' } : { kind: 'given', start, end },
    axes,
    weights: {
      pressure: chance(random, 0.9) ? spread(random, 0.01, 10) : 0,
      lean: spread(random, 0.01, 10),
      momentum: chance(random, 0.9) ? spread(random, 0.01, 10) : 0,
      torque: spread(random, 0.001, 1),
      change: chance(random, 0.8) ? spread(random, 1e-5, 0.1) : 0,
    },
  };
}
