import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  convexHull,
  extentOf,
  pressureInterval,
  supportPolygon,
  turningArm,
} from '../../../src/core/planning/supportPolygon';
import { expectClose } from '../../support/closeTo';

/** Greatest distance of any point beyond the outline of the hull, by walking every edge. */
const outside = (hull: Float64Array, x: number, y: number): number => {
  let worst = -Infinity;
  const n = hull.length / 2;
  for (let i = 0; i < n; i++) {
    const j = (i + 1) % n;
    const dx = hull[2 * j]! - hull[2 * i]!;
    const dy = hull[2 * j + 1]! - hull[2 * i + 1]!;
    worst = Math.max(
      worst,
      (dy * (x - hull[2 * i]!) - dx * (y - hull[2 * i + 1]!)) / Math.sqrt(dx * dx + dy * dy),
    );
  }
  return worst;
};

/** Brute force: the pairs of points that have every other point on their left, in O(n^3). */
const hullEdges = (points: readonly number[]): number => {
  const n = points.length / 2;
  let edges = 0;
  for (let a = 0; a < n; a++) {
    for (let b = 0; b < n; b++) {
      if (a === b) continue;
      const dx = points[2 * b]! - points[2 * a]!;
      const dy = points[2 * b + 1]! - points[2 * a + 1]!;
      let isEdge = true;
      for (let c = 0; c < n && isEdge; c++) {
        if (c === a || c === b) continue;
        isEdge = dx * (points[2 * c + 1]! - points[2 * a + 1]!) - dy * (points[2 * c]! - points[2 * a]!) > 0;
      }
      if (isEdge) edges++;
    }
  }
  return edges;
};

/** Evenly spread: a plain double of this library is mostly near zero. */
const evenly = (min: number, max: number) =>
  fc.integer({ min: 0, max: 1_000_000 }).map((n) => min + ((max - min) * n) / 1_000_000);

const coordinate = evenly(-1, 1);
const cloud = fc
  .array(fc.tuple(coordinate, coordinate), { minLength: 3, maxLength: 18 })
  .map((p) => p.flat());

describe('support polygon', () => {
  it('encloses every point, is made of them, and has the edges brute force finds', () => {
    fc.assert(
      fc.property(cloud, (points) => {
        const hull = convexHull(points);
        // Points nearly in line are a matter of rounding: leave them to the next test.
        for (let a = 0; a < points.length; a += 2) {
          for (let b = 0; b < a; b += 2) {
            for (let c = 0; c < b; c += 2) {
              const area =
                (points[b]! - points[a]!) * (points[c + 1]! - points[a + 1]!) -
                (points[b + 1]! - points[a + 1]!) * (points[c]! - points[a]!);
              fc.pre(Math.abs(area) > 1e-9);
            }
          }
        }
        expect(hull.length / 2).toBe(hullEdges(points));
        for (let i = 0; i < points.length; i += 2) {
          expect(outside(hull, points[i]!, points[i + 1]!)).toBeLessThan(1e-12);
        }
        for (let i = 0; i < hull.length; i += 2) {
          let isPoint = false;
          for (let j = 0; j < points.length; j += 2) {
            isPoint ||= points[j] === hull[i] && points[j + 1] === hull[i + 1];
          }
          expect(isPoint).toBe(true);
        }
      }),
      { seed: 411, numRuns: 200 },
    );
  });

  it('leaves out points in line and twice the same', () => {
    expect([...convexHull([0, 0, 1, 0, 2, 0, 2, 0, 2, 2, 0, 2, 1, 2, 0, 0, 0, 1])]).toEqual([
      0, 0, 2, 0, 2, 2, 0, 2,
    ]);
    expect(convexHull([]).length).toBe(0);
    expect(extentOf(convexHull([]), 0)).toBeUndefined();
  });

  it('keeps its margin from every edge, no more and no less, against brute force', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(coordinate, coordinate), { minLength: 1, maxLength: 4 }),
        evenly(0, 0.12),
        fc.constantFrom(0 as const, 1 as const),
        evenly(-1.2, 1.2),
        (feet, margin, axis, at) => {
          const polygon = supportPolygon(feet.flat(), 0.3, 0.2);
          const kept = pressureInterval(polygon, axis, at, margin);
          const beyond = (along: number) =>
            axis === 0 ? outside(polygon, along, at) : outside(polygon, at, along);
          // The function is convex along the line: its least is found by halving thirds.
          let low = -3;
          let high = 3;
          for (let i = 0; i < 200; i++) {
            const a = low + (high - low) / 3;
            const b = high - (high - low) / 3;
            if (beyond(a) < beyond(b)) high = b;
            else low = a;
          }
          const deepest = -beyond((low + high) / 2);
          if (kept === undefined) {
            expect(deepest).toBeLessThan(margin + 1e-9);
            return;
          }
          expect(deepest).toBeGreaterThan(margin - 1e-9);
          for (const end of kept) expectClose(-beyond(end), margin, { abs: 1e-9 }); // measured 3e-16
        },
      ),
      { seed: 902, numRuns: 400 },
    );
  });

  it('is the outer edges of two feet side by side', () => {
    const polygon = supportPolygon([0, 0.05, 0, -0.05], 0.13, 0.056);
    expectClose(pressureInterval(polygon, 1, 0, 0.006)!, [-0.072, 0.072], { rel: 1e-12 }); // measured 0
    expectClose(pressureInterval(polygon, 0, 0.02, 0.006)!, [-0.059, 0.059], { rel: 1e-12 }); // measured 1e-16
    expect(pressureInterval(polygon, 0, 0.073, 0.006)).toBeUndefined();
    // Two feet of a trot: a strip from corner to corner.
    const strip = supportPolygon([0.15, 0.07, -0.15, -0.07], 0.04, 0.04);
    const middle = pressureInterval(strip, 1, 0, 0)!;
    expectClose(middle[1], -middle[0], { rel: 1e-12 }); // measured 0
    expect(middle[1]).toBeLessThan(0.05);
  });
});

describe('turning arm', () => {
  it('is the mean over the soles, point by point', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(coordinate, coordinate), { minLength: 1, maxLength: 4 }), (feet) => {
        const mean = [0, 1].map((axis) => feet.reduce((sum, foot) => sum + foot[axis]!, 0) / feet.length);
        const grid = 60;
        let sum = 0;
        for (const [x, y] of feet) {
          for (let i = 0; i < grid; i++) {
            for (let j = 0; j < grid; j++) {
              const dx = x - mean[0]! + 0.13 * ((i + 0.5) / grid - 0.5);
              const dy = y - mean[1]! + 0.056 * ((j + 0.5) / grid - 0.5);
              sum += Math.sqrt(dx * dx + dy * dy);
            }
          }
        }
        expectClose(turningArm(feet.flat(), 0.13, 0.056), sum / (feet.length * grid * grid), { rel: 3e-4 }); // measured 1e-4, the grid's own
      }),
      { seed: 31, numRuns: 60 },
    );
  });

  it('is half their distance for two small feet far apart, and nothing without feet', () => {
    expectClose(turningArm([0, 1, 0, -1], 0.01, 0.01), 1, { rel: 1e-5 }); // measured 4e-6
    expect(turningArm([], 0.1, 0.1)).toBe(0);
  });
});
