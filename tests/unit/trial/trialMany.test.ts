import { describe, expect, it } from 'vitest';
import { createRandom, drawUniform } from '../../../src/core/control';
import { STRIDER } from '../../../src/core/rig';
import {
  AS_DRAWN,
  drawBuild,
  explainedShare,
  type ManyRequest,
  type RunRow,
  runShard,
  summariseMany,
  TOLERANCE_NAMES,
  type Tolerances,
  USUAL_TOLERANCES,
  wilsonRate,
} from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';
import { ALL_ON, EDGED, ready } from '../../support/trialRigs';

const request: ManyRequest = {
  seed: 11,
  runs: 60,
  length: 1.5,
  tolerances: USUAL_TOLERANCES,
  shove: { most: 1.6, height: 0.4, from: 0.2, to: 0.6 },
  switches: ALL_ON,
};

describe('many runs', () => {
  it.each([
    { name: 'on an edge, by the fast kernel', rig: EDGED, runs: 60 },
    { name: 'walking, by the star', rig: STRIDER, runs: 24 },
  ])('say the same, bit for bit, in 1, 2 and 4 shards, through a file and back: $name', ({ rig, runs }) => {
    const setup = ready(rig);
    const asked = { ...request, runs };
    const shards = (n: number): RunRow[] =>
      Array.from({ length: n }, (_, k) => [...runShard(setup, asked, n - 1 - k, n)]).flat();
    const whole = shards(1);
    expect(whole.length).toBe(runs);
    for (const n of [2, 4]) {
      const rows = shards(n);
      expect(rows.map(({ run }) => run)).not.toEqual(whole.map(({ run }) => run));
      const back = rows.map((row) => JSON.parse(JSON.stringify(row)) as RunRow);
      expect([...back].sort((a, b) => a.run - b.run)).toEqual(whole);
      expect(summariseMany(back)).toEqual(summariseMany(whole));
    }
    // A shove of nothing and one of 1.6 N s are both among them, so both ends are tried.
    const { success } = summariseMany(whole);
    expect(success.held).toBeGreaterThan(0);
    expect(success.held).toBeLessThan(runs);
  });

  it('depend on the seed', () => {
    const setup = ready(EDGED);
    const few = { ...request, runs: 4 };
    const rows = (seed: number) => [...runShard(setup, { ...few, seed }, 0, 1)];
    expect(rows(1)).not.toEqual(rows(2));
  });
});

describe('the draw of a rig', () => {
  it('keeps within its tolerances, uses their whole width, and is the drawn rig when there are none', () => {
    const none = Object.fromEntries(TOLERANCE_NAMES.map((name) => [name, 0])) as unknown as Tolerances;
    expect(drawBuild(none, undefined, 1, 7)).toEqual({ build: AS_DRAWN, shove: 0, shoveAt: 0 });
    const widest = Object.fromEntries(TOLERANCE_NAMES.map((name) => [name, 0]));
    for (let run = 0; run < 400; run++) {
      const { build } = drawBuild(USUAL_TOLERANCES, undefined, 3, run);
      for (const name of TOLERANCE_NAMES) {
        const off = Math.abs(build[name] - AS_DRAWN[name]) / USUAL_TOLERANCES[name];
        expect(off).toBeLessThanOrEqual(1 + 1e-12);
        widest[name] = Math.max(widest[name]!, off);
      }
    }
    for (const name of TOLERANCE_NAMES) expect(widest[name], name).toBeGreaterThan(0.97);
  });

  it('does not change the rig when a shove is asked for', () => {
    const shove = { most: 2, height: 0.4, from: 0.5, to: 1.5 };
    const drawn = drawBuild(USUAL_TOLERANCES, shove, 3, 9);
    expect(drawn.build).toEqual(drawBuild(USUAL_TOLERANCES, undefined, 3, 9).build);
    expect(Math.abs(drawn.shove)).toBeLessThanOrEqual(2);
    expect(drawn.shoveAt).toBeGreaterThanOrEqual(0.5);
    expect(drawn.shoveAt).toBeLessThanOrEqual(1.5);
  });
});

describe('the interval of a success rate', () => {
  // Newcombe, Two-sided confidence intervals for the single proportion, Stat. Med. 17 (1998), table I, method 3.
  it.each([
    [81, 263, 0.2553, 0.3662],
    [15, 148, 0.0624, 0.1605],
    [0, 20, 0, 0.1611],
    [1, 29, 0.0061, 0.1718],
  ])('%i of %i', (held, runs, low, high) => {
    const rate = wilsonRate(held, runs);
    expectClose([rate.low, rate.high], [low, high], { abs: 5.1e-5 }); // four digits are given
  });
  it('is everything before the first run, and ends at 1 when all hold', () => {
    expect(wilsonRate(0, 0)).toMatchObject({ low: 0, high: 1 });
    expect(wilsonRate(50, 50).high).toBe(1);
  });
});

describe('the share of the spread that one tolerance explains', () => {
  const random = createRandom(4);
  const draw = (n: number) => Array.from({ length: n }, () => 2 * drawUniform(random) - 1);
  const n = 6000;
  const a = draw(n);
  const b = draw(n);
  const c = draw(n);

  it('is its share of the variance for a sum: 3 a + b gives 0.9 and 0.1, and c nothing', () => {
    const y = a.map((value, i) => 3 * value + b[i]!);
    expectClose(explainedShare(a, y), 0.9, { abs: 0.01 }, 'a');
    expectClose(explainedShare(b, y), 0.1, { abs: 0.02 }, 'b');
    expectClose(explainedShare(c, y), 0, { abs: 0.005 }, 'c');
  });

  it('sees what no straight line would: a squared', () => {
    const y = a.map((value) => value * value);
    expect(explainedShare(a, y)).toBeGreaterThan(0.98);
  });

  it('is nothing for a tolerance of nothing, and for too few runs to tell', () => {
    expect(explainedShare(new Array(n).fill(1), a)).toBe(0);
    expect(explainedShare(a.slice(0, 30), a.slice(0, 30))).toBe(0);
  });
});
