import { describe, expect, it } from 'vitest';
import { axisAngle, gimbalFrame, moveGyro, setTiltLimit, turnGyro } from '../../../src/app/stage/partEdits';
import { BENCH_GYRO, type Layout, layOut, type Rig, readRig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const withLayout = (layout: Layout): Rig => ({
  ...STRIDER,
  array: { gyros: layOut(layout, BENCH_GYRO, { centre: [0, 0, 0.5], spacing: 0.2, skew: 0.955 }) },
});

const positions = (rig: Rig) => rig.array.gyros.map((gyro) => [...gyro.position]);

describe('moveGyro', () => {
  const pair = withLayout('scissored pair');

  it('spreads a pair about its middle and lifts it as one', () => {
    expect(positions(moveGyro(pair, 0, 0, 0.13, false))).toEqual([
      [0.13, 0, 0.5],
      [-0.13, 0, 0.5],
    ]);
    expect(positions(moveGyro(pair, 1, 2, 0.6, false))).toEqual([
      [0.1, 0, 0.6],
      [-0.1, 0, 0.6],
    ]);
  });

  it('moves one alone when asked to', () => {
    expect(positions(moveGyro(pair, 0, 0, 0.13, true))).toEqual([
      [0.13, 0, 0.5],
      [-0.1, 0, 0.5],
    ]);
  });

  it('leaves those in the middle where they are when a side is pulled out', () => {
    const wide = moveGyro(withLayout('two pairs'), 0, 0, 0.15, false);
    expect(positions(wide).map((p) => p[0])).toEqual([0.15, -0.15, 0, 0]);
  });

  it('ignores a gyro that is not there', () => {
    expect(moveGyro(pair, 7, 0, 1, false)).toBe(pair);
  });
});

describe('setTiltLimit', () => {
  const limits = (rig: Rig) => rig.array.gyros.map(({ tilt }) => [tilt.min, tilt.max]);

  it('gives a pair geared the other way round the mirrored limit', () => {
    const pair = withLayout('scissored pair');
    const quarter = Math.PI / 4;
    expect(limits(setTiltLimit(pair, 0, 'max', 1, false))).toEqual([
      [-quarter, 1],
      [-1, quarter],
    ]);
    // Geared wheels cannot have limits of their own.
    expect(limits(setTiltLimit(pair, 1, 'min', -0.5, true))).toEqual([
      [-quarter, 0.5],
      [-0.5, quarter],
    ]);
  });

  it('goes to all of a pyramid, or to one', () => {
    const pyramid = withLayout('pyramid');
    expect(limits(setTiltLimit(pyramid, 2, 'max', 1.2, false)).map(([, max]) => max)).toEqual([
      1.2, 1.2, 1.2, 1.2,
    ]);
    const alone = limits(setTiltLimit(pyramid, 2, 'max', 1.2, true)).map(([, max]) => max);
    expect(alone.filter((max) => max === 1.2)).toHaveLength(1);
  });
});

describe('turning a gimbal axis', () => {
  it('turns gimbal and spin axis together and makes a rig that reads back', () => {
    const turned = turnGyro(withLayout('scissored pair'), 0, 'heading', Math.PI / 6, false);
    for (const gyro of turned.array.gyros) {
      expectClose(axisAngle(gyro, 'heading'), Math.PI / 2 + Math.PI / 6, { rel: 1e-11 }); // measured 1e-13: axes are kept to 12 decimals
      expectClose(gyro.spinAxis, [0, 0, 1], { abs: 1e-12 }); // measured 0
    }
    expect(readRig(turned).kind).toBe('read');
  });

  it('raises the axis by a positive skew, whichever way it heads', () => {
    const pyramid = withLayout('pyramid');
    const before = pyramid.array.gyros.map((gyro) => axisAngle(gyro, 'skew'));
    const raised = turnGyro(pyramid, 0, 'skew', 0.1, false);
    raised.array.gyros.forEach((gyro, i) => {
      expectClose(axisAngle(gyro, 'skew'), before[i] + 0.1, { rel: 1e-10 }); // measured 2e-13
    });
  });

  it('comes back to where it was', () => {
    const pyramid = withLayout('pyramid');
    const there = turnGyro(pyramid, 1, 'heading', 0.7, true);
    const back = turnGyro(there, 1, 'heading', -0.7, true);
    expectClose(back.array.gyros[1].gimbalAxis, pyramid.array.gyros[1].gimbalAxis, { abs: 1e-11 }); // measured 4e-13
  });
});

describe('gimbalFrame', () => {
  it('is right-handed and square even for axes that are not', () => {
    const { g, s, t } = gimbalFrame({ gimbalAxis: [0, 2, 0], spinAxis: [0.2, 0.5, 0.9] });
    const dot = (a: ArrayLike<number>, b: ArrayLike<number>) => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
    expectClose([dot(g, s), dot(g, t), dot(s, t)], [0, 0, 0], { abs: 1e-15 }); // measured 0
    expectClose([dot(g, g), dot(s, s), dot(t, t)], [1, 1, 1], { abs: 1e-14 }); // measured 2e-16
  });

  it('finds some frame for a spin axis along the gimbal axis', () => {
    const { s } = gimbalFrame({ gimbalAxis: [0, 0, 1], spinAxis: [0, 0, 1] });
    expectClose(Math.hypot(...s), 1, { abs: 1e-14 }); // measured 0
  });
});
