import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  aliasFrequency,
  BALANCE_GRADES,
  permissibleEccentricity,
  permissibleUnbalance,
  permissibleUnbalanceByRule,
  shareBetweenBearings,
  unbalanceForce,
  unbalanceVibration,
} from '../../../src/core/physics/balanceGrade';
import {
  axialFactors,
  bearingDrag,
  bearingLoads,
  equivalentDynamicLoad,
  equivalentStaticLoad,
  gyroscopicLoad,
  lifeSeconds,
  lifeTurns,
  lubricantDrag,
  meanLoad,
  ROLLER_LIFE_EXPONENT,
  staticSafety,
  swingingMeanLoad,
} from '../../../src/core/physics/bearings';
import { STOCK_BEARINGS } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const RPM = (2 * Math.PI) / 60;

describe('balance', () => {
  it('permits 12 g mm for 2 kg at 10,000 rpm and G 6.3, ISO 21940-11:2016', () => {
    expectClose(permissibleUnbalance(6.3, 10000 * RPM, 2) * 1e6, 12.0321137, { rel: 5e-9 }); // measured 1.9e-10
    expectClose(permissibleUnbalanceByRule(6.3, 10000, 2) * 1e6, 12.03174, { rel: 1e-12 }); // measured 0
  });

  it('gives the grade ladder at 3000 rpm, ISO 21940-11 table 1', () => {
    const ladder = BALANCE_GRADES.map(({ grade }) => permissibleEccentricity(grade, 3000 * RPM) * 1e6);
    expectClose(ladder, [1.27323954, 3.18309886, 7.95774715, 20.0535228, 50.9295818, 127.323954], {
      rel: 5e-9, // measured 3.7e-9
    });
  });

  it('makes 10.97 N of 1 g at 10 mm and 10,000 rpm, Den Hartog', () => {
    expectClose(unbalanceForce(1e-3 * 0.01, 10000 * RPM), 10.9662271, { rel: 5e-9 }); // measured 1.1e-9
  });

  it('shakes a free body as the sum of moving and rocking', () => {
    const of = {
      unbalance: 1e-6,
      speed: 800,
      bodyMass: 6,
      bodyInertia: 0.2,
      wheelLever: 0.25,
      sensorLever: 0.1,
    };
    const shaken = unbalanceVibration(of);
    const force = 1e-6 * 800 ** 2;
    expectClose(shaken.acceleration, force / 6 + (force * 0.25 * 0.1) / 0.2, { rel: 1e-14 }); // measured 1.5e-16
    expectClose(shaken.displacement * 800 ** 2, shaken.acceleration, { rel: 1e-14 }); // measured 0
    expectClose(shaken.rate, (force * 0.25) / 0.2 / 800, { rel: 1e-14 }); // measured 2.2e-16
    // Struck at its centre of percussion, the sensor stands still.
    const still = unbalanceVibration({ ...of, sensorLever: -of.bodyInertia / (of.bodyMass * of.wheelLever) });
    expectClose(still.acceleration, 0, { abs: 1e-15 }); // measured 0
  });

  it('shows a fast shake as a slow one in samples', () => {
    expectClose(aliasFrequency(133, 500), 133, { rel: 1e-15 }); // measured 0
    expectClose(aliasFrequency(501, 500), 1, { rel: 1e-12 }); // measured 0
    const rate = 500;
    const fast = 733;
    const alias = aliasFrequency(fast, rate);
    for (let i = 0; i < 20; i++) {
      const t = i / rate;
      expectClose(Math.cos(2 * Math.PI * fast * t), Math.cos(2 * Math.PI * alias * t), { abs: 1e-12 }); // measured 2.6e-14
    }
  });
});

describe('bearings', () => {
  it('life: 512 million turns, 2844 h at 3000 rpm, ISO 281:2007', () => {
    expectClose(lifeTurns(16e3, 2e3), 512e6, { rel: 1e-14 }); // measured 0
    expectClose(lifeSeconds(16e3, 2e3, 3000 * RPM) / 3600, 2844.44444, { rel: 5e-9 }); // measured 1.6e-9
    expectClose(lifeTurns(16e3, 2e3, ROLLER_LIFE_EXPONENT), 1024e6, { rel: 1e-13 }); // measured 2.3e-16
  });

  it('static: P0 370 N, s0 8.108, ISO 76:2006', () => {
    expectClose(equivalentStaticLoad(200, 500), 370, { rel: 1e-14 }); // measured 0
    expectClose(staticSafety(200, 500, 3000), 8.10810811, { rel: 5e-9 }); // measured 2.3e-10
    expectClose(equivalentStaticLoad(200, 10), 200, { rel: 1e-15 }); // measured 0
  });

  it('drag: 0.3 N mm of 50 N on 8 mm at mu 0.0015, maker handbooks', () => {
    const torque = bearingDrag(0.0015, 50, 0.008);
    expectClose(torque * 1e3, 0.3, { rel: 1e-14 }); // measured 0
    expectClose(torque * 12000 * RPM, 0.376991118, { rel: 5e-9 }); // measured 1.1e-9
  });

  it('gyroscopic load: 0.5 N m s at 2 rad/s over 40 mm is 25 N on each', () => {
    expectClose(gyroscopicLoad(0.5, 2, 0.04), 25, { rel: 1e-14 }); // measured 0
  });

  it('both loads of a pair balance force and moment about either end', () => {
    const [left, right] = shareBetweenBearings(100, 0.01, 0.03);
    expectClose([left + right, right * 0.04], [100, 100 * 0.01], { rel: 1e-14 }); // measured 0
    const loads = bearingLoads({
      mass: 0.5,
      momentum: 0.4,
      unbalance: 2e-6,
      speed: 900,
      gimbalRate: 6,
      toLeft: 0.012,
      toRight: 0.012,
      preload: 10,
      loadFactor: 1,
    });
    // Common practice: turning the spin axis rules over weight and unbalance.
    for (const load of loads) {
      expect(load.gyroscopic).toBeGreaterThan(5 * (load.weight + load.unbalance));
      expectClose(load.radial, load.weight + load.unbalance + load.gyroscopic, { rel: 1e-15 }); // measured 0
    }
    expectClose(loads[0].gyroscopic, (0.4 * 6) / 0.024, { rel: 1e-14 }); // measured 0
  });

  it('equivalent load: radial alone below e, the larger of the two above it, ISO 281:2007', () => {
    expectClose(equivalentDynamicLoad(500, 0, 2000), 500, { rel: 1e-15 }); // measured 0
    const at = axialFactors((14 * 400) / 2000);
    expectClose(equivalentDynamicLoad(500, 400, 2000), 0.56 * 500 + at.Y * 400, { rel: 1e-14 }); // measured 0
    expect(axialFactors(0.01)).toEqual({ e: 0.19, Y: 2.3 });
    expect(axialFactors(100)).toEqual({ e: 0.44, Y: 1 });
    fc.assert(
      fc.property(
        fc.double({ min: 1, max: 1e4, noNaN: true }),
        fc.double({ min: 0, max: 1e4, noNaN: true }),
        fc.double({ min: 1, max: 1.5, noNaN: true }),
        (radial, axial, more) => {
          const load = equivalentDynamicLoad(radial, axial, 5000);
          expect(load).toBeGreaterThanOrEqual(radial);
          expect(equivalentDynamicLoad(radial * more, axial, 5000)).toBeGreaterThanOrEqual(
            load * (1 - 1e-12),
          );
        },
      ),
      { seed: 20260004 },
    );
  });

  it('a varying load wears as its cubic mean', () => {
    expectClose(meanLoad([10, 10], [0.3, 0.7]), 10, { rel: 1e-14 }); // measured 1.8e-16
    expectClose(meanLoad([0, 20], [0.5, 0.5]), 20 * Math.cbrt(0.5), { rel: 1e-14 }); // measured 2.2e-16
    // Mean of |sin|^3 over a half turn is 4 / (3 pi).
    expectClose(swingingMeanLoad(0, 30), 30 * Math.cbrt(4 / (3 * Math.PI)), { rel: 1e-6 }); // measured 2.1e-8
    expectClose(swingingMeanLoad(25, 0), 25, { rel: 1e-13 }); // measured 1.5e-16
  });

  it('lubricant drag is steady when slow, then rises as speed to 2/3, and the two laws meet', () => {
    const slow = lubricantDrag(1, 0.015, 25e-6);
    expectClose(lubricantDrag(5, 0.015, 25e-6), slow, { rel: 1e-14 }); // measured 0
    const fast = lubricantDrag(500, 0.015, 25e-6);
    expectClose(lubricantDrag(4000, 0.015, 25e-6) / fast, 4, { rel: 1e-12 }); // measured 0
    const meet = (2000 / 25) * RPM;
    expectClose(lubricantDrag(meet * 1.0001, 0.015, 25e-6), lubricantDrag(meet * 0.9999, 0.015, 25e-6), {
      rel: 1e-2, // measured 7.8e-3
    });
  });

  it('stock sizes have a width and ratings that fit their bore', () => {
    const names = new Set(STOCK_BEARINGS.map((bearing) => bearing.name));
    expect(names.size).toBe(STOCK_BEARINGS.length);
    for (const bearing of STOCK_BEARINGS) {
      expect(bearing.outside, bearing.name).toBeGreaterThan(bearing.bore);
      expect(bearing.width, bearing.name).toBeLessThan((bearing.outside + bearing.bore) / 2);
      expect(bearing.staticRating, bearing.name).toBeLessThan(bearing.dynamicRating);
    }
  });
});
