import { describe, expect, it } from 'vitest';
import {
  capturePoint,
  capturePointAfter,
  cartTablePressure,
  crossingTime,
  fallRate,
  marginOfStability,
  orbitalEnergy,
  pendulumState,
} from '../../../src/core/planning/lipm';
import { expectClose } from '../../support/closeTo';

describe('the linear inverted pendulum', () => {
  const rate = fallRate(0.8, 9.81);

  it('falls as Kajita, Yamaura and Kobayashi (1992) have it', () => {
    const { x, v } = pendulumState(-0.1, 0.5, rate, 0.3);
    expectClose([rate, x, v], [3.50178525898, 0.0187071155, 0.362858564], { rel: 1e-8 }); // measured 1e-9, the digits given
  });

  it('keeps its orbital energy, and passes over the foot when that is positive, Kajita (1992)', () => {
    const { x, v } = pendulumState(-0.1, 0.5, rate, 0.3);
    expectClose([orbitalEnergy(-0.1, 0.5, rate), orbitalEnergy(x, v, rate)], [0.0636875, 0.0636875], {
      rel: 1e-12,
    }); // measured 4e-16
    const time = crossingTime(-0.1, 0.5, rate)!;
    expectClose(time, 0.247873844, { rel: 1e-8 }); // measured 4e-10
    expectClose(pendulumState(-0.1, 0.5, rate, time).x, 0, { abs: 1e-15 }); // measured 0
    expect(orbitalEnergy(-0.1, 0.3, rate)).toBeLessThan(0);
    expect(crossingTime(-0.1, 0.3, rate)).toBeUndefined();
    expect(crossingTime(0.1, 0.5, rate)).toBeUndefined();
  });

  it('has a capture point that runs off by itself, Pratt et al. (2006)', () => {
    const xi = capturePoint(-0.1, 0.5, rate);
    expectClose([xi, capturePointAfter(xi, 0, rate, 0.3)], [0.0427843123, 0.122328137], { rel: 1e-8 }); // measured 4e-9
    const { x, v } = pendulumState(-0.1, 0.5, rate, 0.3);
    expectClose(capturePoint(x, v, rate), capturePointAfter(xi, 0, rate, 0.3), { rel: 1e-13 }); // measured 1e-16
    // Pressed on at its capture point the body comes to a stand there: three time constants leave 5 %.
    const late = pendulumState(-0.1 - xi, 0.5, rate, 3 / rate);
    expectClose(late.x, (-0.1 - xi) * Math.exp(-3), { rel: 1e-9 }); // measured 3e-14
  });

  it('has the margin of stability of Hof, Gazendam and Sinke (2005)', () => {
    const w0 = fallRate(1, 9.81);
    expectClose(
      [w0, capturePoint(0.05, 0.4, w0), marginOfStability(0.15, 0.05, 0.4, w0)],
      [3.13209195, 0.177710171, -0.0277101714],
      { rel: 1e-8 },
    ); // measured 2e-9
  });

  it('presses where the cart on a table does, Kajita et al. (2003)', () => {
    expectClose(cartTablePressure(0.02, 1, 0.8, 9.81), -0.0615494393, { rel: 1e-8 }); // measured 8e-10
  });
});
