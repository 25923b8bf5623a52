import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { wheelProperties } from '../../../src/core/physics/wheelProperties';
import { MATERIAL_NAMES, MATERIALS, type WheelPart } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const weigh = (parts: readonly WheelPart[]) => {
  const outcome = wheelProperties(parts);
  if (outcome.kind !== 'wheel') throw new Error(JSON.stringify(outcome.faults));
  return outcome.wheel;
};

const disc = (changes: Partial<Extract<WheelPart, { kind: 'disc' }>> = {}): WheelPart => ({
  kind: 'disc',
  radius: 0.06,
  bore: 0,
  thickness: 0.01,
  material: 'aluminium 6061-T6',
  offset: 0,
  ...changes,
});

/** Thickness that gives a ring of this mass in 6061-T6. */
const thicknessFor = (mass: number, outer: number, inner: number): number =>
  mass / (2700 * Math.PI * (outer ** 2 - inner ** 2));

describe('wheel properties', () => {
  it('gives energy and momentum of a 1 kg disc from its definition', () => {
    const wheel = weigh([disc({ thickness: thicknessFor(1, 0.06, 0) })]);
    const speed = (12000 * 2 * Math.PI) / 60;
    expectClose(wheel.mass, 1, { rel: 1e-14 }); // measured 2e-16
    expectClose(
      [wheel.spinInertia, 0.5 * wheel.spinInertia * speed ** 2, wheel.spinInertia * speed],
      [0.0018, 1421.22303376, 2.26194671058],
      { rel: 1e-11 }, // measured 2e-12, the digits given
    );
  });

  it('adds a rim and a web, standard tables of moments of inertia', () => {
    const rim: WheelPart = {
      kind: 'rim',
      outerRadius: 0.06,
      innerRadius: 0.05,
      width: thicknessFor(0.4, 0.06, 0.05),
      material: 'aluminium 6061-T6',
      offset: 0,
    };
    const wheel = weigh([rim, disc({ radius: 0.05, thickness: thicknessFor(0.1, 0.05, 0) })]);
    expectClose(
      [wheel.parts[0]!.spinInertia, wheel.parts[1]!.spinInertia, wheel.spinInertia],
      [0.00122, 0.000125, 0.001345],
      { rel: 1e-14 }, // measured 2e-16
    );
  });

  it('weighs a 10 mm ball of 52100 as 4.08930644 g, ISO 3290-1', () => {
    const wheel = weigh([
      {
        kind: 'balls',
        count: 20,
        diameter: 0.01,
        pitchRadius: 0.05,
        material: 'steel 52100',
        offset: 0.002,
      },
    ]);
    expectClose(wheel.mass / 20, 4.08930644e-3, { rel: 1e-9 }); // measured 6e-10, the digits given
    expectClose(wheel.centre, 0.002, { rel: 1e-14 }); // measured 0
  });

  it('sums ball by ball and bolt by bolt to the ring, and tells the spread of a pair', () => {
    for (const count of [2, 3, 7, 20]) {
      const wheel = weigh([
        { kind: 'balls', count, diameter: 0.008, pitchRadius: 0.04, material: 'steel 52100', offset: 0 },
        { kind: 'bolts', count, mass: 0.003, pitchRadius: 0.02, offset: 0 },
      ]);
      const ball = (7810 * Math.PI * 0.008 ** 3) / 6;
      const own = 0.4 * ball * 0.004 ** 2;
      let spin = 0;
      let aboutX = 0;
      let aboutY = 0;
      for (let i = 0; i < count; i++) {
        const angle = (2 * Math.PI * i) / count;
        for (const [mass, radius, self] of [
          [ball, 0.04, own],
          [0.003, 0.02, 0],
        ] as const) {
          spin += self + mass * radius ** 2;
          aboutX += self + mass * (radius * Math.sin(angle)) ** 2;
          aboutY += self + mass * (radius * Math.cos(angle)) ** 2;
        }
      }
      expectClose(wheel.spinInertia, spin, { rel: 1e-14 }); // measured 5e-16
      expectClose(wheel.transverseInertia, (aboutX + aboutY) / 2, { rel: 1e-14 }); // measured 3e-16
      expectClose(wheel.transverseSpread, Math.abs(aboutY - aboutX), { abs: 1e-18 }); // measured 2e-20
    }
  });

  it('cut into slices, or moved along its axis, weighs the same', () => {
    fc.assert(
      fc.property(
        fc.record({
          radius: fc.double({ min: 0.02, max: 0.5, noNaN: true }),
          boreFraction: fc.double({ min: 0, max: 0.95, noNaN: true }),
          thickness: fc.double({ min: 0.001, max: 0.2, noNaN: true }),
          cut: fc.double({ min: 0.05, max: 0.95, noNaN: true }),
          shift: fc.double({ min: -0.3, max: 0.3, noNaN: true }),
          material: fc.constantFrom(...MATERIAL_NAMES),
        }),
        ({ radius, boreFraction, thickness, cut, shift, material }) => {
          const bore = radius * boreFraction;
          const whole = weigh([disc({ radius, bore, thickness, material })]);
          const left = cut * thickness;
          const slices = weigh([
            disc({ radius, bore, thickness: left, material, offset: shift + left / 2 }),
            disc({
              radius,
              bore,
              thickness: thickness - left,
              material,
              offset: shift + (left + thickness) / 2,
            }),
          ]);
          const of = (w: typeof whole) => [w.mass, w.volume, w.spinInertia, w.transverseInertia];
          expectClose(of(slices), of(whole), { rel: 1e-13 }); // measured 5e-16
          expectClose(slices.centre, shift + thickness / 2, { abs: 1e-15, rel: 1e-12 }); // measured abs 6e-17
          expectClose(whole.mass, whole.volume * MATERIALS[material].density, { rel: 1e-14 }); // measured 0
        },
      ),
      { seed: 20260001 },
    );
  });

  it('names the field of a stack that cannot be', () => {
    const outcome = wheelProperties([
      disc({ bore: 0.07 }),
      { kind: 'balls', count: 40, diameter: 0.01, pitchRadius: 0.05, material: 'steel 52100', offset: 0 },
    ]);
    expect(outcome).toMatchObject({
      kind: 'refused',
      faults: [{ field: 'parts[0].bore' }, { field: 'parts[1].diameter' }],
    });
    expect(wheelProperties([])).toMatchObject({ kind: 'refused', faults: [{ field: 'parts' }] });
  });
});
