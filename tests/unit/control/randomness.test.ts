import { describe, expect, it } from 'vitest';
import {
  createRandom,
  drawBits,
  drawInteger,
  drawNormal,
  drawUniform,
  seedRandom,
} from '../../../src/core/control/randomness';
import { expectClose } from '../../support/closeTo';

describe('seeded generator', () => {
  it('is xoshiro128**: first outputs of the state 1, 2, 3, 4 worked out by hand from the published recurrence', () => {
    /* rotl(2 * 5, 7) * 9 = 11520; then state (7, 0, 1026, 12288): rotl(0) * 9 = 0;
       then state (12295, 1029, 1029, 25165824...) gives rotl(1029 * 5, 7) * 9 = 5927040 */
    const state = Uint32Array.of(1, 2, 3, 4, 0);
    expect([drawBits(state), drawBits(state), drawBits(state)]).toEqual([11520, 0, 5927040]);
  });

  it('names streams by seed, run and channel: same name same numbers, other name other numbers', () => {
    const first = (seed: number, run: number, channel: number): string => {
      const s = createRandom(seed, run, channel);
      return [drawBits(s), drawBits(s), drawBits(s), drawBits(s)].join();
    };
    const seen = new Set<string>();
    for (let seed = -3; seed < 8; seed++)
      for (let run = 0; run < 40; run++)
        for (let channel = 0; channel < 6; channel++) seen.add(first(seed, run, channel));
    expect(seen.size).toBe(11 * 40 * 6);
    expect(first(12, 5, 1)).toBe(first(12, 5, 1));
    expect(first(2 ** 40 + 12, 5, 1)).not.toBe(first(12, 5, 1));
    expect(() => createRandom(0.5)).toThrow();
  });

  it('leaves no correlation between neighbouring runs', () => {
    const n = 4000;
    let sum = 0;
    const a = createRandom(0);
    for (let run = 0; run < n; run++) {
      seedRandom(a, 9, run, 0);
      const x = drawNormal(a);
      seedRandom(a, 9, run + 1, 0);
      sum += x * drawNormal(a);
    }
    expect(Math.abs(sum / Math.sqrt(n))).toBeLessThan(3.5); // 3.5 standard deviations of the sum
  });

  it('draws normals with the moments and tail counts of the normal law', () => {
    const s = createRandom(3);
    const n = 400_000;
    const sum = [0, 0, 0, 0];
    const beyond = [0, 0, 0];
    for (let i = 0; i < n; i++) {
      const x = drawNormal(s);
      for (let k = 0; k < 4; k++) sum[k]! += x ** (k + 1);
      for (let k = 0; k < 3; k++) if (Math.abs(x) > k + 2) beyond[k]! += 1;
    }
    /* standard errors: 1, sqrt 2, sqrt 15, sqrt 96 over sqrt n */
    expectClose(
      sum.map((x) => x / n),
      [0, 1, 0, 3],
      { abs: 4 * Math.sqrt(96 / n) },
    );
    expectClose(sum[1]! / n, 1, { abs: 4 * Math.sqrt(2 / n) });
    const share = [0.0455002639, 0.00269979606, 6.33424837e-5];
    beyond.forEach((count, k) => {
      expectClose(count, n * share[k]!, { abs: 4 * Math.sqrt(n * share[k]!) }, `beyond ${k + 2} sigma`);
    });
  });

  it('draws integers evenly and uniforms in [0, 1)', () => {
    const s = createRandom(4);
    const counts = new Float64Array(7);
    for (let i = 0; i < 70_000; i++) counts[drawInteger(s, 7)]! += 1;
    let chi = 0;
    for (const c of counts) chi += (c - 10_000) ** 2 / 10_000;
    expect(chi).toBeLessThan(22.5); // 0.1 % point of chi-square with 6 degrees of freedom
    for (let i = 0; i < 1000; i++) {
      const u = drawUniform(s);
      expect(u >= 0 && u < 1).toBe(true);
    }
    expect(() => drawInteger(s, 0)).toThrow();
  });
});
