import { describe, expect, it } from 'vitest';
import {
  codeRollPeriod,
  dampingFromPeaks,
  equivalentLinearDamping,
  logarithmicDecrement,
  rollBackAngle,
  rollPeriod,
  rollPeriodOf,
  rollReduction,
  usualRollStart,
} from '../../../src/core/physics/rollMotion';
import { expectClose } from '../../support/closeTo';

const DEGREE = Math.PI / 180;

describe('roll', () => {
  it('period by the stability code, IMO 2008 IS Code Part A 2.3', () => {
    const { coefficient, period } = codeRollPeriod(12, 4, 65, 1);
    expectClose([coefficient, period], [0.41405, 9.9372], { rel: 1e-13 }); // measured 1.3e-16
  });

  it('period of a rigid body, linear roll theory, and what the code coefficient says of gyration', () => {
    expectClose(rollPeriod(0.7, 0.3), 2.5642298, { rel: 1e-8 }); // measured 5.2e-10
    expectClose(rollPeriodOf(250 * 0.7 ** 2, 250, 0.3), rollPeriod(0.7, 0.3), { rel: 1e-14 }); // measured 1.7e-16
    // C = pi k / (B sqrt g): C = 0.41405 is k / B = 0.41280 at g = 9.81.
    expectClose(rollPeriod(0.4128, 1, 9.81), 2 * 0.41405, { rel: 1e-5 }); // measured 5.2e-6
  });

  it('roll-back angle of the weather criterion, IMO 2008 IS Code Part A 2.3.4', () => {
    const at = rollBackAngle({
      beamOverDraught: 3,
      blockCoefficient: 0.6,
      bilgeKeelShare: 0,
      centreAboveWater: 0,
      draught: 4,
      period: 9.9372,
    });
    expectClose([at.k, at.X1, at.X2, at.s], [1, 0.9, 0.95, 0.0794396], { rel: 1e-12 }); // measured 0
    expectClose(at.angle / DEGREE, 22.442568895503847, { rel: 1e-12 }); // measured 0
    const outside = rollBackAngle({
      beamOverDraught: 9,
      blockCoefficient: 0.9,
      bilgeKeelShare: 50,
      centreAboveWater: 0,
      draught: 4,
      period: 40,
    });
    expect([outside.k, outside.X1, outside.X2, outside.s]).toEqual([0.7, 0.8, 1, 0.035]);
  });

  it('logarithmic decrement and peak ratio, any vibration text', () => {
    const decrements = [0.02, 0.05, 0.1, 0.2].map(logarithmicDecrement);
    expectClose(decrements, [0.125688846, 0.314552702, 0.631483883, 1.28254983], { rel: 5e-9 }); // measured 3.4e-9
    expectClose(decrements.map(Math.exp), [1.13392929, 1.36964653, 1.8803988, 3.60582225], { rel: 5e-9 }); // measured 3e-9
  });

  it('damping from peaks of 10 and 6 degrees', () => {
    expectClose(Math.log(10 / 6), 0.510825624, { rel: 5e-9 }); // measured 4.6e-10
    expectClose(dampingFromPeaks(10, 6), 0.0810330597, { rel: 5e-9 }); // measured 4.3e-10
    expectClose(dampingFromPeaks(10, 6 * 0.6, 2), dampingFromPeaks(10, 6), { rel: 1e-14 }); // measured 0
    expectClose(logarithmicDecrement(dampingFromPeaks(10, 6)), Math.log(10 / 6), { rel: 1e-13 }); // measured 0
  });

  it('reduction from root-mean-square roll, Perez 2005', () => {
    expectClose(rollReduction(2, 5), 0.6, { rel: 1e-15 }); // measured 0
  });

  it('equivalent damping loses what quadratic damping loses in a cycle', () => {
    const [frequency, amplitude, quadratic] = [1.7, 0.2, 40];
    let lost = 0;
    const n = 4000;
    const period = (2 * Math.PI) / frequency;
    for (let i = 0; i < n; i++) {
      const rate = amplitude * frequency * Math.cos((2 * Math.PI * (i + 0.5)) / n);
      lost += (quadratic * Math.abs(rate) * rate * rate * period) / n;
    }
    const linear = equivalentLinearDamping(0, quadratic, frequency, amplitude);
    expectClose(Math.PI * linear * frequency * amplitude ** 2, lost, { rel: 1e-10 }); // measured 6.7e-14
  });

  it('usual start: damping ratio as stated, and a fin that brakes as a plate in strips', () => {
    const of = {
      sectionKind: 'deadrise' as const,
      dryInertia: 100,
      mass: 400,
      GM: 0.5,
      waterDensity: 1025,
      fin: undefined,
    };
    const start = usualRollStart(of);
    const stiffness = 400 * 9.80665 * 0.5;
    expectClose(start.addedInertia, 20, { rel: 1e-14 }); // measured 0
    expectClose(start.linearDamping / (2 * Math.sqrt(120 * stiffness)), 0.05, { rel: 1e-14 }); // measured 0
    const doubled = equivalentLinearDamping(
      start.linearDamping,
      start.quadraticDamping,
      Math.sqrt(stiffness / 120),
      10 * DEGREE,
    );
    expectClose(doubled, 2 * start.linearDamping, { rel: 1e-13 }); // measured 0
    const withFin = usualRollStart({ ...of, fin: { length: 1.2, root: 0.3, tip: 0.8 } });
    let strips = 0;
    for (let i = 0; i < 1000; i++) {
      const r = 0.3 + (0.5 * (i + 0.5)) / 1000;
      strips += ((0.5 * 1025 * 1.2 * 1.2 * 0.5) / 1000) * r ** 3;
    }
    expectClose(withFin.quadraticDamping - start.quadraticDamping, strips, { rel: 1e-6 }); // measured 1.7e-7
  });
});
