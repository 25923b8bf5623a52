import { describe, expect, it } from 'vitest';
import { envelopeShape } from '../../../src/app/stage/envelopeSurface';
import { BENCH_GYRO, layOut } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const place = { centre: [0, 0, 0.5], spacing: 0.13, skew: (54.73 * Math.PI) / 180 } as const;

describe('momentum envelope on the stage', () => {
  it('of a pyramid at the usual skew is nearly a sphere, with seven surfaces inside it', () => {
    const gyros = layOut('pyramid', BENCH_GYRO, place);
    const shape = envelopeShape(gyros, [1, -1, 1, -1]);
    if (!shape) throw new Error('four wheels have an envelope');
    expect(shape.inner).toHaveLength(7);
    // Along the pyramid's axis each wheel gives the sine of the skew: 4 sin 54.73 degrees = 3.2659. Wie, ch. 7.
    expect(shape.reach).toBeGreaterThan(3.26);
    expect(shape.reach).toBeLessThan(3.266); // measured 3.2648: the rings stop short of the pole
    for (const { points, triangles, lines } of [shape.outer, ...shape.inner]) {
      expect(triangles.length % 3).toBe(0);
      expect(triangles.length).toBeGreaterThan(0);
      for (const k of [...triangles, ...lines]) expect(Number.isFinite(points[3 * k])).toBe(true);
    }
  });

  it('of a pair reaches twice the momentum of one, and there is none without momentum', () => {
    const gyros = layOut('scissored pair', BENCH_GYRO, place);
    expectClose(envelopeShape(gyros, [2, -2])?.reach ?? Number.NaN, 4, { rel: 1e-12 });
    expect(envelopeShape(gyros, [0, 0])).toBeUndefined();
    expect(envelopeShape([], [])).toBeUndefined();
  });
});
