import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  ballRingStress,
  boredDiscStress,
  solidDiscStress,
  thinRingLimitSpeed,
} from '../../../src/core/physics/discStress';
import { wheelBurst } from '../../../src/core/physics/wheelBurst';
import { wheelProperties } from '../../../src/core/physics/wheelProperties';
import { USUAL_SPEED_SQUARED_FACTOR, wheelStress } from '../../../src/core/physics/wheelStress';
import { BENCH_WHEEL, MATERIAL_NAMES, MATERIALS, type WheelPart } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { solveRotatingDisc } from '../../support/rotatingDisc';

const RPM = (2 * Math.PI) / 60;

const stressOf = (...of: Parameters<typeof wheelStress>) => {
  const outcome = wheelStress(...of);
  if (outcome.kind !== 'stressed') throw new Error(JSON.stringify(outcome.faults));
  return outcome.stress;
};

const disc = (changes: Partial<Extract<WheelPart, { kind: 'disc' }>> = {}): WheelPart => ({
  kind: 'disc',
  radius: 0.06,
  bore: 0.005,
  thickness: 0.01,
  material: 'aluminium 6061-T6',
  offset: 0,
  ...changes,
});

const brassRim: WheelPart = {
  kind: 'rim',
  outerRadius: 0.07,
  innerRadius: 0.06,
  width: 0.02,
  material: 'brass C36000',
  offset: 0,
};

describe('stress of a wheel', () => {
  it('a disc alone is the closed form, at the factor stated on speed squared', () => {
    const { density, poissonRatio, minimumAllowable } = MATERIALS['aluminium 6061-T6'];
    const speed = 10000 * RPM;
    const bored = stressOf([disc()], speed, 2);
    const peak = boredDiscStress(density, poissonRatio, speed, 0.005, 0.06, 0.005).hoop;
    expectClose(bored.lines[0]!.stress, peak, { rel: 1e-13 }); // measured 0
    expectClose(bored.safeSpeed, speed * Math.sqrt(minimumAllowable / (2 * peak)), { rel: 1e-13 }); // measured 0
    expectClose(bored.spare, 1 - (2 * peak) / minimumAllowable, { rel: 1e-12 }); // measured 0
    const solid = stressOf([disc({ bore: 0 })], speed, 1);
    const centre = solidDiscStress(density, poissonRatio, speed, 0.06, 0).hoop;
    expectClose(solid.lines[0]!.stress, centre, { rel: 1e-13 }); // measured 2.1e-16
    expect(USUAL_SPEED_SQUARED_FACTOR).toBe(2);
  });

  it('a rim on a web is the boundary-value solution, joint and growth included', () => {
    const parts = [disc(), brassRim];
    const at = stressOf(parts, 1);
    const web = {
      inner: 0.005,
      outer: 0.06,
      thickness: 0.01,
      edgePull: 0,
      ...MATERIALS['aluminium 6061-T6'],
    };
    const rim = { inner: 0.06, outer: 0.07, thickness: 0.02, edgePull: 0, ...MATERIALS['brass C36000'] };
    const samples = solveRotatingDisc([web, rim]);
    const bore = samples[0]!;
    const joint = samples.find((s) => s.band === 1)!;
    expectClose(at.lines.find((line) => line.part === 0)!.stress, bore.hoop, { rel: 1e-8 }); // measured 6e-13
    expectClose(at.joints[0]!.tension, joint.radial, { rel: 1e-8 }); // measured 9.8e-14
    expectClose([at.boreGrowth, at.rimGrowth], [bore.growth, samples.at(-1)!.growth], { rel: 1e-8 }); // measured 6e-13
  });

  it('discs that lie side by side stand each alone', () => {
    const speed = 9000 * RPM;
    const stack = stressOf(
      [disc(), disc({ offset: 0.01, radius: 0.04 }), disc({ offset: 0.02, material: 'steel S235' })],
      speed,
    );
    const alone = [disc(), disc({ radius: 0.04 }), disc({ material: 'steel S235' })].map((part) =>
      stressOf([part], speed),
    );
    for (const [part, one] of alone.entries()) {
      expectClose(stack.lines.find((line) => line.part === part)!.safeSpeed, one.safeSpeed, { rel: 1e-14 }); // measured 0
    }
    expectClose(stack.safeSpeed, Math.min(...alone.map((one) => one.safeSpeed)), { rel: 1e-14 }); // measured 0
  });

  it('balls load the wall outside them, with nothing but the wall to hold them', () => {
    const row: WheelPart = {
      kind: 'balls',
      count: 24,
      diameter: 0.01,
      pitchRadius: 0.06,
      material: 'steel 52100',
      offset: 0,
    };
    const rim: WheelPart = {
      ...brassRim,
      innerRadius: 0.05,
      outerRadius: 0.075,
      material: 'aluminium 7075-T6',
    };
    const speed = 8000 * RPM;
    const at = stressOf([rim, row], speed);
    const groove = at.lines.find((line) => line.place === 'groove wall')!;
    const { density, poissonRatio } = MATERIALS['aluminium 7075-T6'];
    const mass = (24 * 7810 * Math.PI * 0.01 ** 3) / 6;
    const s = ballRingStress(density, poissonRatio, speed, 0.065, 0.075, 0.02, mass, 0.06, 0.065);
    const mises = Math.sqrt(s.hoop ** 2 - s.hoop * s.radial + s.radial ** 2);
    expectClose(groove.stress, mises, { rel: 1e-13 }); // measured 1.3e-16
    expectClose(at.contacts[0]!.force, (mass / 24) * 0.06 * speed ** 2, { rel: 1e-13 }); // measured 1.7e-16
    const lighter = stressOf([rim], speed);
    expect(at.safeSpeed).toBeLessThan(lighter.safeSpeed);
    expect(wheelStress([disc(), row], speed)).toMatchObject({
      kind: 'refused',
      faults: [{ field: 'parts[1].pitchRadius', value: 0.06 }],
    });
  });

  it('a bolt circle costs speed: its pull and the edge of its holes', () => {
    const bolts: WheelPart = { kind: 'bolts', count: 6, mass: 0.004, pitchRadius: 0.03, offset: 0 };
    const plain = stressOf([disc()], 1000);
    const drilled = stressOf([disc(), bolts], 1000);
    expect(drilled.safeSpeed).toBeLessThan(plain.safeSpeed);
    const hole = drilled.lines.find((line) => line.place === 'hole edge')!;
    const { density, poissonRatio } = MATERIALS['aluminium 6061-T6'];
    const field = boredDiscStress(density, poissonRatio, 1000, 0.005, 0.06, 0.03);
    expect(hole.stress).toBeGreaterThan(3 * field.hoop - field.radial);
    expect(hole.stress).toBeLessThan(1.2 * (3 * field.hoop - field.radial));
  });

  it('a printed wheel has a range of safe speeds, across-layer weakness at its low end', () => {
    const at = stressOf([disc({ material: 'PLA printed' })], 500, 2);
    expect(at.isPrinted).toBe(true);
    const [low, high] = at.lines[0]!.safeSpeedRange;
    expectClose(at.safeSpeed, low, { rel: 1e-15 }); // measured 0
    expectClose((high / low) ** 2, 60 / (45 * 0.4), { rel: 1e-12 }); // measured 1.3e-16
  });

  it('stress rises with speed, as its square, and safe speed does not depend on it', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.02, max: 0.4, noNaN: true }),
        fc.double({ min: 0, max: 0.9, noNaN: true }),
        fc.constantFrom(...MATERIAL_NAMES),
        fc.constantFrom(...MATERIAL_NAMES),
        fc.double({ min: 1, max: 2000, noNaN: true }),
        fc.double({ min: 1.001, max: 3, noNaN: true }),
        (radius, boreRatio, webMaterial, rimMaterial, speed, more) => {
          const parts: WheelPart[] = [
            disc({ radius, bore: radius * boreRatio, material: webMaterial }),
            {
              ...brassRim,
              innerRadius: radius,
              outerRadius: radius * 1.2,
              material: rimMaterial,
            } as WheelPart,
          ];
          const slow = stressOf(parts, speed);
          const fast = stressOf(parts, speed * more);
          for (let i = 0; i < slow.lines.length; i++) {
            expect(fast.lines[i]!.stress).toBeGreaterThan(slow.lines[i]!.stress);
            expectClose(fast.lines[i]!.stress / slow.lines[i]!.stress, more ** 2, { rel: 1e-12 }); // measured 4.2e-16
          }
          expectClose(fast.safeSpeed, slow.safeSpeed, { rel: 1e-14 }); // measured 0
          expect(fast.spare).toBeLessThan(slow.spare);
          expect(fast.rimGrowth).toBeGreaterThan(slow.rimGrowth);
        },
      ),
      { seed: 20260003 },
    );
  });

  it('flies apart later than it yields: a ductile disc bursts when its mean hoop stress is the ultimate', () => {
    const { density, ultimate } = MATERIALS['aluminium 6061-T6'];
    const at = stressOf([disc()], 100, 1);
    const mean = (density * (0.06 ** 2 + 0.06 * 0.005 + 0.005 ** 2)) / 3;
    expectClose(at.burstSpeed, Math.sqrt(ultimate / mean), { rel: 1e-13 }); // measured 1.9e-16
    expect(at.burstSpeed).toBeGreaterThan(at.safeSpeed);
    const thin: WheelPart = { ...brassRim, innerRadius: 0.0699 };
    const ring = stressOf([thin], 100, 1);
    const brass = MATERIALS['brass C36000'];
    expectClose(ring.burstSpeed * 0.07, thinRingLimitSpeed(brass.ultimate, brass.density), { rel: 1e-3 }); // measured 7.1e-4
  });

  it('tells what a burst would throw: 1 kg at 12,000 rpm is 1421 J, its own weight thrown 145 m up', () => {
    const thickness = 1 / (2700 * Math.PI * 0.06 ** 2);
    const outcome = wheelProperties([disc({ bore: 0, thickness })]);
    if (outcome.kind !== 'wheel') throw new Error('refused');
    const burst = wheelBurst(outcome.wheel, 12000 * RPM);
    expectClose(burst.energy, 1421.22303376, { rel: 1e-11 }); // measured 2.2e-12
    expectClose(burst.throwHeight, 1421.22303376 / 9.80665, { rel: 1e-11 }); // measured 2.2e-12
    expectClose(burst.flightEnergy / burst.energy, 6 / Math.PI ** 2, { rel: 1e-12 }); // measured 0
  });

  it('clears the wheel the bench rigs start with at its own speed', () => {
    const at = stressOf(BENCH_WHEEL.parts, 8000 * RPM);
    expect(at.spare).toBeGreaterThan(0);
    expect(at.joints).toHaveLength(2);
  });
});
