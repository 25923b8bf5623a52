import { describe, expect, it } from 'vitest';
import { searchMaximum } from '../../../src/core/control/directSearch';
import type { EstimatorModel } from '../../../src/core/control/estimators';
import { type DesignRequest, designGains, designRegulator } from '../../../src/core/control/gainDesign';
import { chooseRange, mapGains } from '../../../src/core/control/gainMap';
import { LAW_GAINS, type Law } from '../../../src/core/control/loopModel';
import { countOutside, createLoopScorer, measureModulus } from '../../../src/core/control/loopScore';
import { judgeLoop, measureDecay } from '../../../src/core/control/margins';
import type { RollTiltPlant } from '../../../src/core/control/plantModels';
import { createRandom, drawUniform } from '../../../src/core/control/randomness';
import { boundLean, findLeastSpeed, scaleGains, scheduleGains } from '../../../src/core/control/spinDown';
import { expectClose } from '../../support/closeTo';

const DT = 0.002;
const WALKER: RollTiltPlant = {
  actuator: 'tilt',
  inertia: 0.3,
  stiffness: 7.5,
  damping: 0.05,
  momentum: 0.6,
  servoLag: 0.018,
  delay: 0.0105,
  sampleTime: DT,
  sensorHeight: 0.3,
  gravity: 9.80665,
};
const BOAT: RollTiltPlant = {
  ...WALKER,
  inertia: 10,
  stiffness: -20,
  damping: 0.5,
  momentum: 20,
  servoLag: 0.05,
};
const FILTER: EstimatorModel = { kind: 'complementary', sampleTime: DT, timeConstant: 1.5 };
const BASE: Record<Law, readonly number[]> = {
  pidTilt: [9, 60, 0.3],
  pidTiltRate: [60, 30, 9],
  feedback: [80, 12, 2, 0, 0],
  reactionWheel: [20, 4, 1],
};
const LAWS = Object.keys(BASE) as Law[];
const plantOf = (plant: RollTiltPlant, law: Law): RollTiltPlant => ({
  ...plant,
  actuator: law === 'reactionWheel' ? 'wheelTorque' : 'tilt',
});

describe('count of growing modes by the argument principle', () => {
  it.each(LAWS)('agrees with eigenvalues: %s, random gains of either sign, seed 31', (law) => {
    const random = createRandom(31);
    let holding = 0;
    for (const plant of [plantOf(WALKER, law), plantOf(BOAT, law)]) {
      const scorer = createLoopScorer(plant, FILTER, law, 0.5);
      for (let i = 0; i < 120; i++) {
        const gains = BASE[law].map(
          (g) => g * Math.exp(3 * drawUniform(random) - 1.5) * (drawUniform(random) < 0.1 ? -1 : 1),
        );
        if (law === 'feedback' && i % 3 === 0) gains[4] = drawUniform(random);
        if (law === 'feedback' && i % 5 === 0) gains[3] = 0.8 * drawUniform(random);
        if (i % 7 === 0) gains[law === 'feedback' || law === 'reactionWheel' ? 2 : 1] = 0;
        const decay = measureDecay({ plant, estimator: FILTER, law, gains });
        if (Math.abs(decay) < 0.05) continue;
        expect(countOutside(scorer.hold, scorer.holdPoles, gains, 1) === 0, `${law} ${gains}`).toBe(
          decay > 0,
        );
        if (decay > 0) holding++;
      }
    }
    expect(holding).toBeGreaterThan(30);
  });

  it('gives a modulus margin that is one over the largest sensitivity', () => {
    const scorer = createLoopScorer(WALKER, FILTER, 'feedback', 0.5);
    const verdict = judgeLoop({ plant: WALKER, estimator: FILTER, law: 'feedback', gains: BASE.feedback });
    if (verdict.kind === 'fails') throw new Error('must hold');
    expectClose(measureModulus(scorer.margin, BASE.feedback, 1), 1 / verdict.margins.sensitivity, {
      rel: 3e-3,
    }); // measured 3e-4
  });
});

describe('designed gains', () => {
  const cases: [string, RollTiltPlant][] = [
    ['walker', WALKER],
    ['boat', BOAT],
  ];
  for (const [name, plant] of cases) {
    it.each(LAWS)(`${name}, %s: hold at every corner of delay, gain and momentum, by eigenvalues`, (law) => {
      const p = plantOf(plant, law);
      const found = designGains({ plant: p, estimator: FILTER, law });
      if (found.kind !== 'designed') throw new Error(found.reason);
      for (const delay of [1, 1.3]) {
        for (const factor of [0.85 * 0.9, 1, 1.15 * 1.1]) {
          const isWheel = law === 'reactionWheel';
          const momentum = isWheel ? p.momentum : p.momentum * factor;
          const gains = isWheel ? found.gains.map((g) => g * factor) : found.gains;
          const decay = measureDecay({
            plant: { ...p, delay: p.delay * delay, momentum },
            estimator: FILTER,
            law,
            gains,
          });
          expect(decay, `delay ${delay}, factor ${factor}`).toBeGreaterThan(0);
        }
      }
      expect(found.robustMargin).toBeLessThanOrEqual(1 / found.margins.sensitivity + 1e-6);
      expect(found.margins.gainUp).toBeGreaterThan(1.265);
      expect(found.margins.gainDown).toBeLessThan(0.765);
      expect(found.margins.delay).toBeGreaterThan(0.3 * p.delay);
    });
  }

  it('beat every one of 400 random sets around them, seed 5, in the worst corner', () => {
    const request: DesignRequest = { plant: WALKER, estimator: FILTER, law: 'feedback', leastDecay: 0.8 };
    const found = designGains(request);
    if (found.kind !== 'designed') throw new Error(found.reason);
    const late = { ...WALKER, delay: WALKER.delay * 1.3 };
    const scorers = [WALKER, late].map((p) => createLoopScorer(p, FILTER, 'feedback', 0.8));
    const worst = (gains: ArrayLike<number>): number => {
      let least = Number.POSITIVE_INFINITY;
      for (const scorer of scorers) {
        for (const scale of [0.85 * 0.9, 1.15 * 1.1]) {
          if (countOutside(scorer.hold, scorer.holdPoles, gains, scale) > 0) return -1;
          if (countOutside(scorer.pace, scorer.pacePoles, gains, scale) > 0) return -1;
          least = Math.min(least, measureModulus(scorer.margin, gains, scale));
        }
      }
      return least;
    };
    const random = createRandom(5);
    let best = -1;
    for (let i = 0; i < 400; i++) {
      const spread = i < 200 ? 0.1 : 1;
      best = Math.max(
        best,
        worst(found.gains.map((g) => g * Math.exp(spread * (2 * drawUniform(random) - 1)))),
      );
    }
    expect(best).toBeGreaterThan(0.5 * found.robustMargin);
    expect(best).toBeLessThan(found.robustMargin + 2e-3);
  });

  it('trade margin for pace: the faster it must settle, the smaller the margin', () => {
    const margins = [0.3, 0.8, 1.6, 2.4].map((leastDecay) => {
      const found = designGains({ plant: WALKER, estimator: FILTER, law: 'feedback', leastDecay });
      return found.kind === 'designed' ? found.robustMargin : 0;
    });
    for (let i = 1; i < margins.length; i++) expect(margins[i]!).toBeLessThan(margins[i - 1]! + 2e-3);
    expect(margins[3]!).toBeLessThan(0.9 * margins[0]!);
  });

  it('find the balance point when asked to, and still hold', () => {
    const found = designGains({ plant: WALKER, estimator: FILTER, law: 'feedback', hasTrim: true });
    if (found.kind !== 'designed') throw new Error(found.reason);
    expect(found.gains[4]).toBeGreaterThan(0);
    expect(found.decay).toBeGreaterThan(0);
  });

  it('say no with the delay limit when the delay is beyond what any lean feedback can hold', () => {
    const found = designGains({ plant: { ...WALKER, delay: 0.3 }, estimator: FILTER, law: 'feedback' });
    expect(found).toMatchObject({ kind: 'impossible', reason: 'delay-too-long', holdsNominally: false });
    if (found.kind === 'impossible')
      expectClose(found.delayLimit, Math.sqrt((2 * 0.3) / 7.5), { rel: 1e-12 }); // measured 0
    expect(
      designGains({ plant: { ...WALKER, stiffness: 0 }, estimator: FILTER, law: 'feedback' }),
    ).toMatchObject({
      kind: 'impossible',
      reason: 'neutral-body',
    });
  });

  it('regulator: has the gain margin from a half up of a linear-quadratic loop without lag or delay', () => {
    const bare = { ...WALKER, servoLag: 0, delay: 0, sampleTime: 2e-4, sensorHeight: 0, damping: 0 };
    const gains = designRegulator(bare, { lean: 1, leanRate: 0.04, tilt: 0.01, tiltRate: 0.001 })!;
    const five = [gains[0]!, gains[1]!, gains[2]!, 0, 0];
    /* all three gains together pass through the regulator's input: scaling them by 0.5 to 20 keeps it stable */
    for (const factor of [0.51, 1, 5, 20]) {
      const decay = measureDecay({
        plant: bare,
        estimator: { kind: 'ideal', sampleTime: 2e-4 },
        law: 'feedback',
        gains: five.map((g) => g * factor),
      });
      expect(decay, `factor ${factor}`).toBeGreaterThan(0);
    }
  });
});

describe('direct search', () => {
  it('climbs a curved ridge to its top', () => {
    const found = searchMaximum((x) => -100 * (x[1]! - x[0]! ** 2) ** 2 - (1 - x[0]!) ** 2, [-1.2, 1], {
      evaluations: 600,
      tolerance: 1e-8,
      startSize: 0.5,
    });
    expectClose(found.x, [1, 1], { abs: 1e-4 }); // measured 1e-8
  });
});

describe('map of stable gains', () => {
  const loop = { plant: WALKER, estimator: FILTER, law: 'pidTilt', gains: [9, 60, 0.3] } as const;
  const map = mapGains({
    ...loop,
    across: 0,
    up: 1,
    acrossRange: [-2, 60],
    upRange: [-10, 400],
    columns: 32,
    rows: 30,
  });

  it('marks each point as its eigenvalues do', () => {
    let holding = 0;
    for (let r = 0; r < 30; r += 3) {
      for (let c = 0; c < 32; c++) {
        const gains = [map.across[c]!, map.up[r]!, 0.3];
        const decay = measureDecay({ ...loop, gains });
        if (Math.abs(decay) < 0.05) continue;
        expect(map.value[r * 32 + c]! > 0, `${gains}`).toBe(decay > 0);
        if (decay > 0) holding++;
      }
    }
    expect(holding).toBeGreaterThan(40);
  });

  it('draws its border where the spectral radius is one, static line included', () => {
    let points = 0;
    let onStatic = 0;
    for (let i = 0; i + 1 < map.border.length; i += 2) {
      const [x, y] = [map.border[i]!, map.border[i + 1]!];
      if (Number.isNaN(x)) continue;
      points++;
      const gains = [x, y, 0.3];
      const decay = measureDecay({ ...loop, gains });
      /* every border point has a mode on the circle; where it is the worst one the decay is zero */
      if (decay > -1e-3) expect(Math.abs(decay)).toBeLessThan(1e-3);
      /* the line of zero frequency, h ki = k; measured 8e-5 off: the gyro is sampled on the ripple of the hold */
      if (Math.abs(y - 12.5) < 1e-3 * 12.5) onStatic++;
    }
    expect(points).toBeGreaterThan(100);
    expect(onStatic).toBeGreaterThan(1);
  });

  it('offers ranges about the present gain', () => {
    expect([chooseRange(2), chooseRange(-2), chooseRange(0)]).toEqual([
      [0, 6],
      [-6, 0],
      [0, 1],
    ]);
    expect(LAW_GAINS.feedback).toHaveLength(5);
  });
});

describe('wheel speed', () => {
  const loop = { plant: WALKER, estimator: FILTER, law: 'feedback', gains: BASE.feedback } as const;
  it('scaled gains keep the loop as it was at every speed; fixed ones lose it below the gain margin', () => {
    const full = judgeLoop(loop);
    if (full.kind === 'fails') throw new Error('must hold');
    const rows = scheduleGains(loop, [1, 0.7, full.margins.gainDown * 0.95]);
    for (const row of rows) {
      if (row.scaledVerdict.kind === 'fails') throw new Error('scaled gains must hold');
      expectClose(row.scaledVerdict.margins.gainUp, full.margins.gainUp, { rel: 1e-9 }); // measured 7e-15
      expectClose(row.scaled, scaleGains(loop, 1 / row.share), { rel: 1e-15 }); // measured 0
    }
    expect(rows.map((row) => row.fixedVerdict.kind)).toEqual(['holds', 'holds', 'fails']);
  });
  it('least speed is the gain reduction margin; a boat holds with its wheel at rest', () => {
    const full = judgeLoop(loop);
    if (full.kind === 'fails') throw new Error('must hold');
    const least = findLeastSpeed(loop);
    if (least.kind !== 'found') throw new Error('there is a least speed');
    expectClose(least.share, full.margins.gainDown, { rel: 1e-4 }); // measured 2e-6
    expect(findLeastSpeed({ ...loop, plant: BOAT, gains: [0.8, 0.5, -1.5, 0, 0] }).kind).toBe('always');
    expect(findLeastSpeed({ ...loop, gains: [1, 1, 1, 0, 0] }).kind).toBe('never');
  });
  it('bounds the lean that the momentum left can bring back', () => {
    expectClose(boundLean(0.3, 7.5, 0.15), 0.1, { rel: 1e-12 }); // measured 1e-16
    expect(boundLean(0.3, -7.5, 0.15)).toBe(Number.POSITIVE_INFINITY);
  });
});
