import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { solveDiscFlow } from '../../../src/core/physics/rotatingDiscFlow';
import {
  airAt,
  enclosedDiscMoments,
  enclosedRimMoment,
  freeDiscMoment,
  laminarDiscMoment,
  meanFreePath,
  openRimFriction,
  reynoldsNumber,
  turbulentDiscMoment,
  windage,
} from '../../../src/core/physics/windage';
import { expectClose } from '../../support/closeTo';

const RPM = (2 * Math.PI) / 60;
const BOOK_AIR = { density: 1.204, viscosity: 1.825e-5 };

describe('windage', () => {
  it('solves the Karman-Cochran flow: von Karman 1921, Cochran 1934, Schlichting', () => {
    const flow = solveDiscFlow();
    expectClose(
      [flow.radialSlope, flow.swirlSlope, flow.inflow, flow.momentFactor],
      [0.5102326, -0.615922, -0.8844741, 3.8699521],
      { abs: 1e-6 }, // measured 4.2e-8
    );
  });

  it('free disc of 60 mm radius, Schlichting; Theodorsen & Regier 1944', () => {
    const speeds = [6000, 12000, 30000].map((rpm) => rpm * RPM);
    const reynolds = speeds.map((speed) => reynoldsNumber(BOOK_AIR, speed, 0.06));
    expectClose(reynolds, [149226.5, 298453, 746132.6], { rel: 1e-7 }); // measured 7.9e-8
    const torque = (moment: number, speed: number) => moment * 0.5 * 1.204 * speed ** 2 * 0.06 ** 5;
    // The book rounds the laminar factor to 3.87; ours is the computed one.
    const rounding = 3.87 / solveDiscFlow().momentFactor;
    expectClose(rounding, 1, { rel: 1.3e-5 }); // measured 1.2e-5
    const laminar = speeds.map((speed, i) => torque(rounding * laminarDiscMoment(reynolds[i]!), speed));
    expectClose(laminar, [0.0018514, 0.00523655, 0.02069929], { rel: 3e-6 }); // measured 4.4e-7
    expectClose(
      laminar.map((t, i) => t * speeds[i]!),
      [1.16326944, 6.58044568, 65.0287387],
      { rel: 1e-7 }, // measured 1.5e-9
    );
    const turbulent = speeds.map((speed, i) => torque(turbulentDiscMoment(reynolds[i]!), speed));
    expectClose(turbulent, [0.00249056, 0.00867262, 0.04512759], { rel: 3e-6 }); // measured 2e-6
    expectClose(
      turbulent.map((t, i) => t * speeds[i]!),
      [1.56486186, 10.898331, 141.772507],
      { rel: 1e-7 }, // measured 2e-9
    );
  });

  it('free disc of 150 mm at 1000 rad/s, turbulent, as the same sources', () => {
    const reynolds = reynoldsNumber(BOOK_AIR, 1000, 0.15);
    const moment = turbulentDiscMoment(reynolds);
    expectClose([reynolds, moment], [1484383.56, 0.00851223547], { rel: 1e-8 }); // measured 1.1e-9
    expectClose(moment * 0.5 * 1.204 * 1e6 * 0.15 ** 5, 0.389131525, { rel: 1e-8 }); // measured 2.2e-9
  });

  it('goes from laminar to turbulent without a jump and tends to the turbulent law', () => {
    expectClose(freeDiscMoment(3e5 * 1.000001), freeDiscMoment(3e5), { rel: 1e-5 }); // measured 1.3e-6
    expectClose(freeDiscMoment(1e9), turbulentDiscMoment(1e9), { rel: 1e-6 }); // measured 3.1e-9
    expect(freeDiscMoment(6e5)).toBeGreaterThan(laminarDiscMoment(6e5));
    expect(freeDiscMoment(6e5)).toBeLessThan(turbulentDiscMoment(6e5));
  });

  it('enclosed disc in its four regimes, Daily & Nece 1960', () => {
    const first = enclosedDiscMoments(0.1, 3e5);
    expectClose([first[1], first[3]], [0.00536588174, 0.00650393093], { rel: 2e-9 }); // measured 6.9e-10
    const second = enclosedDiscMoments(0.05, 1e6);
    expectClose([second[2], second[3]], [0.00416800585, 0.00476976709], { rel: 2e-9 }); // measured 1.3e-9
    expectClose(enclosedDiscMoments(0.01, 1000)[0], 0.628318531, { rel: 1e-9 }); // measured 4.5e-10
  });

  it('a slow thin gap is plane Couette flow: torque mu omega R^4 pi / gap on both faces', () => {
    const air = airAt();
    const at = windage(0.05, 0, 0.5, air, { kind: 'walled', gap: 2e-4 });
    expect(at.regime).toBe('I');
    expectClose(at.torque, (air.viscosity * 0.5 * Math.PI * 0.05 ** 4) / 2e-4, { rel: 1e-3 }); // measured 6.5e-4
  });

  it('a drum in the open: laminar 2 mu omega at its wall, turbulent by its own law', () => {
    expectClose(openRimFriction(40), 0.1, { rel: 1e-14 }); // measured 0
    const friction = openRimFriction(1e6);
    const root = Math.sqrt(friction);
    expectClose(1 / root, -0.6 + 4.07 * Math.log10(1e6 * root), { rel: 1e-12 }); // measured 0
    expect(enclosedRimMoment(0.05, 30)).toBeGreaterThan(enclosedRimMoment(0.05, 60));
  });

  it('air by tables: 1.204 kg/m3 and 18.13 uPa s at 20 C, mean free path 66 nm', () => {
    const air = airAt();
    expectClose([air.density, air.viscosity], [1.204, 1.813e-5], { rel: 1e-3 }); // measured 2.2e-4
    expectClose(meanFreePath(air), 66e-9, { rel: 0.02 }); // measured 1.4e-2
    expectClose(meanFreePath(airAt(1)), meanFreePath(air) * 101325, { rel: 1e-12 }); // measured 0
  });

  it('thinner gas drags less; at low pressure as the pressure itself', () => {
    const walled = { kind: 'walled', gap: 0.01 } as const;
    let before = Number.POSITIVE_INFINITY;
    for (const pressure of [101325, 1e4, 1e3, 100, 10, 1, 0.1]) {
      const { torque } = windage(0.2, 0.05, 1000, airAt(pressure), walled);
      expect(torque).toBeLessThan(before);
      before = torque;
    }
    const low = windage(0.2, 0.05, 1000, airAt(0.01), walled);
    const lower = windage(0.2, 0.05, 1000, airAt(0.001), walled);
    expect(low.knudsen).toBeGreaterThan(1);
    expectClose(low.torque / lower.torque, 10, { rel: 0.01 }); // measured 6.7e-3
    // Free molecules, diffuse walls: shear rho c u / 4 over both faces and the rim.
    const gas = airAt(0.001);
    const shear = (gas.density * gas.molecularSpeed) / 4;
    const faces = (2 * shear * 1000 * 2 * Math.PI * 0.2 ** 4) / 4;
    const rim = shear * 1000 * 2 * Math.PI * 0.2 ** 3 * 0.05;
    expectClose(lower.torque, faces + rim, { rel: 0.002 }); // measured 7.5e-4
  });

  it('drag rises with speed and with size, in the open and enclosed', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.02, max: 0.5, noNaN: true }),
        fc.double({ min: 1, max: 3000, noNaN: true }),
        fc.double({ min: 1.01, max: 2, noNaN: true }),
        fc.double({ min: 0.5, max: 101325, noNaN: true }),
        fc.constantFrom({ kind: 'open' } as const, { kind: 'walled', gap: 0.005 } as const),
        (radius, speed, more, pressure, surround) => {
          const gas = airAt(pressure);
          const at = windage(radius, 0.02, speed, gas, surround).torque;
          expect(windage(radius, 0.02, speed * more, gas, surround).torque).toBeGreaterThan(at);
          expect(windage(radius * more, 0.02, speed, gas, surround).torque).toBeGreaterThan(at);
        },
      ),
      { seed: 20260005 },
    );
  });
});
