import { describe, expect, it } from 'vitest';
import { balanceByFourRuns } from '../../../src/core/bench/balance/fourRun';
import { compareGrades, findGrade, gradeOfUnbalance } from '../../../src/core/bench/balance/grade';
import { splitOverHoles } from '../../../src/core/bench/balance/holeSplit';
import { balanceByInfluence } from '../../../src/core/bench/balance/influence';
import { findMarks, trackOrder } from '../../../src/core/bench/balance/orderTracking';
import {
  add,
  angleOf,
  multiply,
  negate,
  type Phasor,
  phasor,
  sizeOf,
} from '../../../src/core/bench/balance/phasor';
import { permissibleUnbalance } from '../../../src/core/physics';
import { expectClose } from '../../support/closeTo';
import { createSeededStream } from '../../support/seededStream';

const deg = Math.PI / 180;
const polar = (size: number, degrees: number): Phasor => phasor(size, degrees * deg);

describe('influence coefficients', () => {
  it('two planes: turbine rotor (Rao, Mechanical Vibrations, example 9.1, from memory)', () => {
    // Readings in mils at the two bearings, trial weights in oz. The angles recalled are those of the unbalance; the weights
    // to add stand opposite, as the readings expected with them on confirm.
    const outcome = balanceByInfluence(
      [polar(8.5, 60), polar(6.5, 205)],
      [
        { plane: 0, weight: polar(10, 270), readings: [polar(6, 125), polar(4.5, 230)] },
        { plane: 1, weight: polar(12, 180), readings: [polar(6, 35), polar(10.5, 160)] },
      ],
    );
    expect(outcome.kind).toBe('balanced');
    if (outcome.kind !== 'balanced') return;
    const [left, right] = outcome.corrections.map(negate);
    expectClose([sizeOf(left), angleOf(left) / deg], [10.0561, 145.5548], { rel: 1e-5 }, 'left plane');
    expectClose([sizeOf(right), angleOf(right) / deg], [5.8774, 248.2559], { rel: 1e-5 }, 'right plane');
    expectClose(outcome.expected.map(sizeOf), [0, 0], { abs: 1e-12 }, 'readings afterwards');
  });
  it('one plane: finds the unbalance of a rotor whose response is known', () => {
    const response = polar(37, 212);
    const unbalance = polar(0.004, 77);
    const trial = polar(0.003, 0);
    const outcome = balanceByInfluence(
      [multiply(response, unbalance)],
      [{ plane: 0, weight: trial, readings: [multiply(response, add(unbalance, trial))] }],
      1e-3,
    );
    expect(outcome.kind).toBe('balanced');
    if (outcome.kind !== 'balanced') return;
    expectClose([sizeOf(outcome.corrections[0]), angleOf(outcome.corrections[0]) / deg], [0.004, 257], {
      rel: 1e-10,
    });
    expect(outcome.doubts[0]).toBeGreaterThan(1e-5);
  });
  it('keeps its stated doubt on the size: at least 90 of 100 noisy balances', () => {
    const response = polar(37, 212);
    const unbalance = polar(0.004, 77);
    const trial = polar(0.004, 140);
    const spread = 0.004;
    let inside = 0;
    for (let seed = 1; seed <= 300; seed++) {
      const stream = createSeededStream(seed);
      const noisy = (v: Phasor): Phasor => ({
        re: v.re + spread * stream.normal(),
        im: v.im + spread * stream.normal(),
      });
      const outcome = balanceByInfluence(
        [noisy(multiply(response, unbalance))],
        [{ plane: 0, weight: trial, readings: [noisy(multiply(response, add(unbalance, trial)))] }],
        1.96 * spread,
      );
      if (
        outcome.kind === 'balanced' &&
        Math.abs(sizeOf(outcome.corrections[0]) - 0.004) <= outcome.doubts[0]
      )
        inside++;
    }
    expect(inside).toBeGreaterThanOrEqual(270);
  });
  it('refuses a trial weight that changes nothing, planes that act alike, a missing run', () => {
    expect(
      balanceByInfluence([polar(5, 10)], [{ plane: 0, weight: polar(1, 0), readings: [polar(5.01, 10)] }]),
    ).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/plane 1 changes no reading by more than 0.2 %/),
    });
    const alike = balanceByInfluence(
      [polar(5, 10), polar(5, 12)],
      [
        {
          plane: 0,
          weight: polar(1, 0),
          readings: [add(polar(5, 10), polar(2, 30)), add(polar(5, 12), polar(2, 30))],
        },
        {
          plane: 1,
          weight: polar(1, 0),
          readings: [add(polar(5, 10), polar(2.01, 30)), add(polar(5, 12), polar(2, 30))],
        },
      ],
    );
    expect(alike).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/act alike/) });
    expect(balanceByInfluence([polar(5, 10)], [])).toMatchObject({ kind: 'refused' });
  });
});

describe('four runs, amplitude only', () => {
  const response = polar(20, 130);
  const unbalance = polar(0.005, 200);
  const amplitude = (angle: number): number =>
    sizeOf(multiply(response, add(unbalance, polar(0.004, angle))));
  const runs = [0, 120, 240].map((a) => ({ angle: a * deg, amplitude: amplitude(a) }));
  it('finds mass and angle from amplitudes alone', () => {
    const outcome = balanceByFourRuns(sizeOf(multiply(response, unbalance)), runs, 0.004);
    expect(outcome.kind).toBe('balanced');
    if (outcome.kind !== 'balanced') return;
    expectClose([sizeOf(outcome.correction), angleOf(outcome.correction) / deg], [0.005, 20], { rel: 1e-10 });
    expectClose(outcome.contradiction, 0, { abs: 1e-10 });
  });
  it('takes any three angles', () => {
    const odd = [10, 95, 251].map((a) => ({ angle: a * deg, amplitude: amplitude(a) }));
    const outcome = balanceByFourRuns(sizeOf(multiply(response, unbalance)), odd, 0.004);
    if (outcome.kind !== 'balanced') throw new Error(outcome.sentence);
    expectClose(sizeOf(outcome.correction), 0.005, { rel: 1e-10 });
  });
  it('refuses amplitudes that contradict each other', () => {
    expect(balanceByFourRuns(0.03, runs, 0.004)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/contradict/),
    });
    expect(balanceByFourRuns(0.1, runs.slice(1), 0.004)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/three are needed/),
    });
  });
});

describe('balance grade', () => {
  it('G 6.3 at 3000 rpm is 20 um of eccentricity (ISO 21940-11 figure 2, read off)', () => {
    expectClose(gradeOfUnbalance(20e-6, 1, 3000 * (Math.PI / 30)), 6.3, { rel: 5e-3 }); // 6.283
  });
  it('6.015 G W / N ounce inches (hand formula of the trade, from memory)', () => {
    const ounceInch = 0.028349523125 * 0.0254;
    const unbalance = ((6.015 * 2.5 * 1000) / 3600) * ounceInch;
    expectClose(gradeOfUnbalance(unbalance, 1000 * 0.45359237, 3600 * (Math.PI / 30)), 2.5, { rel: 5e-4 });
  });
  it('grades before and after', () => {
    const speed = 8000 * (Math.PI / 30);
    const change = compareGrades(0.5e-3, 0.02e-3, 0.06, 0.5, speed);
    expectClose([change.before, change.after], [50.2655, 2.01062], { rel: 1e-5 });
    expect([change.gradeBefore, change.gradeAfter]).toEqual([undefined, 2.5]);
    expectClose(gradeOfUnbalance(permissibleUnbalance(6.3, speed, 0.5), 0.5, speed), 6.3, { rel: 1e-12 });
    expect([findGrade(6.3), findGrade(6.31), findGrade(5000)]).toEqual([6.3, 16, undefined]);
  });
});

describe('splitting over holes', () => {
  const ring = (n: number, mostPerHole: number, step = 0, way: 'add' | 'drill' = 'add') => ({
    angles: Array.from({ length: n }, (_, k) => (2 * Math.PI * k) / n),
    mostPerHole,
    step,
    way,
  });
  it('uses the two neighbours, by the law of sines', () => {
    const outcome = splitOverHoles(polar(0.002, 40), ring(12, 0.005));
    expect(outcome.kind).toBe('split');
    if (outcome.kind !== 'split') return;
    expectClose(outcome.masses[1], (0.002 * Math.sin(20 * deg)) / Math.sin(30 * deg), { rel: 1e-12 });
    expectClose(outcome.masses[2], (0.002 * Math.sin(10 * deg)) / Math.sin(30 * deg), { rel: 1e-12 });
    expectClose(outcome.left, 0, { abs: 1e-15 });
  });
  it('spreads over more when a hole is full, and no split weighs less (against random ones)', () => {
    const goal = polar(0.002, 40);
    const outcome = splitOverHoles(goal, ring(12, 0.0008));
    expect(outcome.kind).toBe('split');
    if (outcome.kind !== 'split') return;
    const total = outcome.masses.reduce((s, m) => s + m, 0);
    expectClose([outcome.achieved.re, outcome.achieved.im], [goal.re, goal.im], { rel: 1e-9 });
    expect(Math.max(...outcome.masses)).toBeLessThanOrEqual(0.0008);
    const stream = createSeededStream(5);
    let tried = 0;
    for (let k = 0; k < 200_000; k++) {
      const m = Array.from({ length: 12 }, (_, i) =>
        Math.cos(i * 30 * deg - 40 * deg) > -0.1 ? 0.0008 * stream.uniform() : 0,
      );
      const sum = m.reduce<Phasor>((s, v, i) => add(s, polar(v, 30 * i)), { re: 0, im: 0 });
      if (Math.abs(sum.re - goal.re) > 3e-5 || Math.abs(sum.im - goal.im) > 3e-5) continue;
      tried++;
      expect(m.reduce((s, v) => s + v, 0)).toBeGreaterThan(total - 6e-5);
    }
    expect(tried).toBeGreaterThan(20);
  });
  it('drills on the far side and keeps to whole steps', () => {
    const outcome = splitOverHoles(polar(0.002, 40), ring(12, 0.005, 1e-5, 'drill'));
    expect(outcome.kind).toBe('split');
    if (outcome.kind !== 'split') return;
    outcome.masses.forEach((m, k) => {
      if (m > 0) expect(Math.cos((30 * k - 220) * deg)).toBeGreaterThan(0);
    });
    for (const m of outcome.masses) expectClose(m / 1e-5, Math.round(m / 1e-5), { abs: 1e-9 });
    expect(outcome.left).toBeLessThan(1e-5);
  });
  it('says what the holes can give when it is too little', () => {
    expect(splitOverHoles(polar(0.01, 40), ring(12, 0.0008))).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/10.0 g are needed towards 40°, 3\.\d+ g is the most/),
    });
  });
});

describe('order tracking', () => {
  const speed = 2 * Math.PI * 41.3;
  const make = (seed: number, spread: number, drift = 0) => {
    const stream = createSeededStream(seed);
    const n = 6000;
    const time = Float64Array.from({ length: n }, (_, i) => i / 2000);
    const turn = (t: number): number => speed * t * (1 + drift * t) + 1;
    const signal = time.map(
      (t) =>
        0.8 * Math.cos(turn(t) + 2.2) +
        0.3 * Math.cos(2 * turn(t) + 0.4) +
        0.2 +
        0.5 * Math.sin(2 * Math.PI * 100 * t) +
        spread * stream.normal(),
    );
    const mark = time.map((t) => ((turn(t) / (2 * Math.PI)) % 1 < 0.1 ? 3.3 : 0) + 0.02 * stream.normal());
    return { time, signal, mark, turn };
  };
  const trueMarks = (turn: (t: number) => number): Float64Array => {
    const out: number[] = [];
    for (let k = 1; ; k++) {
      let low = 0;
      let high = 3;
      if (turn(3) < 2 * Math.PI * k) return Float64Array.from(out);
      for (let i = 0; i < 60; i++) {
        const m = 0.5 * (low + high);
        if (turn(m) < 2 * Math.PI * k) low = m;
        else high = m;
      }
      out.push(low);
    }
  };
  it('finds amplitude and angle at wheel speed, beside a hum and the second order, in its interval', () => {
    let inside = 0;
    for (let seed = 1; seed <= 300; seed++) {
      const { time, signal, turn } = make(seed, 0.3, 0.003);
      const outcome = trackOrder(time, signal, trueMarks(turn));
      if (outcome.kind !== 'tracked') throw new Error(outcome.sentence);
      const want = phasor(0.8, 2.2);
      if (
        Math.abs(outcome.reading.re - want.re) <= outcome.halfWidth &&
        Math.abs(outcome.reading.im - want.im) <= outcome.halfWidth
      )
        inside++;
    }
    // Two directions at 95 % each: 90 % for both together, and the hum widens the interval.
    expect(inside).toBeGreaterThanOrEqual(270);
  });
  it('reads the marks from the log itself', () => {
    const { time, signal, mark } = make(1, 0.05);
    const marks = findMarks(time, mark);
    expect(marks.length).toBeGreaterThan(120);
    const outcome = trackOrder(time, signal, marks);
    expect(outcome.kind).toBe('tracked');
    if (outcome.kind !== 'tracked') return;
    expectClose(outcome.speed, speed, { rel: 1e-3 });
    expectClose(sizeOf(outcome.reading), 0.8, { rel: 0.02 });
    // A mark at 2000 readings a second is good to half a reading: 3.7 degrees at this speed.
    expectClose(angleOf(outcome.reading), 2.2, { abs: 0.07 });
  });
  it('refuses a missing mark, too few turns, too slow a log', () => {
    const { time, signal, turn } = make(1, 0.05);
    const marks = trueMarks(turn);
    expect(
      trackOrder(
        time,
        signal,
        marks.filter((_, k) => k !== 40),
      ),
    ).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/mark is missing at/) });
    expect(trackOrder(time, signal, marks.subarray(0, 4))).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/3 whole turns/),
    });
    const slow = time.filter((_, i) => i % 8 === 0);
    expect(
      trackOrder(
        slow,
        signal.filter((_, i) => i % 8 === 0),
        marks,
      ),
    ).toMatchObject({ kind: 'refused', sentence: expect.stringMatching(/readings a turn/) });
  });
});
