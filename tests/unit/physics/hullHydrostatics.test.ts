import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { hullFigures, usualHullRollStart } from '../../../src/core/physics/hullFigures';
import { hullSection } from '../../../src/core/physics/hullSection';
import {
  flotation,
  type Loading,
  leastBoxMetacentre,
  rightingArms,
  sectionArea,
  wallSidedArm,
  wallSidedLoll,
} from '../../../src/core/physics/hydrostatics';
import type { HullBody, Keel, Section } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const DEGREE = Math.PI / 180;

const hullOf = (section: Section, length: number, keel: Keel = { kind: 'none' }): HullBody => ({
  kind: 'hull',
  section,
  length,
  shellMass: 100,
  keel,
});

const sectionOf = (hull: HullBody) => {
  const outcome = hullSection(hull);
  if (outcome.kind !== 'section') throw new Error(JSON.stringify(outcome.faults));
  return outcome.section;
};

const box = (beam: number, depth: number, length = 1) =>
  sectionOf(hullOf({ kind: 'bilge', beam, depth, bilgeRadius: 0 }, length));

const load = (changes: Partial<Loading>): Loading => ({
  mass: 100,
  centreHeight: 0.3,
  centreOffset: 0,
  waterDensity: 1025,
  ...changes,
});

const afloat = (...of: Parameters<typeof flotation>) => {
  const outcome = flotation(...of);
  if (outcome.kind !== 'floats') throw new Error('it sinks');
  return outcome.flotation;
};

const armsOf = (...of: Parameters<typeof rightingArms>) => {
  const outcome = rightingArms(...of);
  if (outcome.kind !== 'floats') throw new Error('it sinks');
  return outcome.arms;
};

describe('flotation', () => {
  it('floats a 65 x 12 x 8 m box barge at 4 m, Derrett & Barrass', () => {
    const barge = box(12, 8, 65);
    const at = afloat(barge, load({ mass: 3198e3, centreHeight: 4 }));
    expectClose([at.waterline, at.KB, at.BM, at.GM, at.freeboard], [4, 2, 3, 1, 4], { rel: 1e-14 }); // measured 0
    const arms = armsOf(barge, load({ mass: 3198e3, centreHeight: 4 }), 25 * DEGREE, 5);
    expectClose(arms.arm[1]!, 0.0881564126, { rel: 1e-9 }); // measured 4e-10, the digits given
    expectClose(arms.arm[5]!, 0.560461229, { rel: 1e-9 }); // measured 5.5e-10, the digits given
    expectClose(arms.arm[5]! * 3198, 1792.35501, { rel: 2e-9 }); // measured 7e-10, the digits given
    expectClose(at.GM * Math.sin(5 * DEGREE) * 3198, 278.724065, { rel: 2e-9 }); // measured 1.1e-9, the digits given
  });

  it('follows the wall-sided formula until the deck edge goes under, at 33.69 deg for that barge', () => {
    const arms = armsOf(box(12, 8, 65), load({ mass: 3198e3, centreHeight: 4 }), 60 * DEGREE, 120);
    expectClose(arms.deckImmersionAngle!, Math.atan(4 / 6), { rel: 1e-12 }); // measured 1.6e-14
    arms.angle.forEach((angle, i) => {
      const wall = wallSidedArm(1, 3, angle);
      if (angle < arms.deckImmersionAngle!)
        expectClose(arms.arm[i]!, wall, { abs: 1e-13 }); // measured 9e-16
      else expect(arms.arm[i]!).toBeLessThan(wall);
    });
  });

  it('gives the wall-sided example of Derrett & Barrass (GM 0.5, BM 3, 25 deg)', () => {
    expectClose(wallSidedArm(0.5, 3, 25 * DEGREE), 0.349152098, { rel: 2e-9 }); // measured 1.2e-9, the digits given
    expectClose(6000 * wallSidedArm(0.5, 3, 25 * DEGREE), 2094.91259, { rel: 2e-9 }); // measured 3e-10
  });

  it('finds the least KM of a box at draught B / sqrt(6), Derrett & Barrass ch. 12', () => {
    const metacentreHeight = (draught: number) => {
      const at = afloat(box(10, 9), load({ mass: 1025 * 10 * draught, centreHeight: 0 }));
      return at.KB + at.BM;
    };
    const least = leastBoxMetacentre(10);
    expectClose([least, metacentreHeight(least)], [4.0824829, 4.0824829], { rel: 2e-9 }); // measured 1.1e-9, the digits given
    expect(metacentreHeight(least * 1.01)).toBeGreaterThan(metacentreHeight(least));
    expect(metacentreHeight(least * 0.99)).toBeGreaterThan(metacentreHeight(least));
  });

  it('any box agrees with the wall-sided formula while deck and keel corners stay where they are', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.2, max: 12, noNaN: true }),
        fc.double({ min: 0.3, max: 1.2, noNaN: true }),
        fc.double({ min: 0.2, max: 0.8, noNaN: true }),
        fc.double({ min: 0, max: 1.2, noNaN: true }),
        (beam, depthRatio, fill, centre) => {
          const depth = beam * depthRatio;
          const draught = fill * depth;
          const loading = load({ mass: 1025 * 3 * beam * draught, centreHeight: centre * depth });
          const hull = box(beam, depth, 3);
          const at = afloat(hull, loading);
          expectClose([at.KB, at.BM], [draught / 2, beam ** 2 / (12 * draught)], { rel: 1e-13 }); // measured 4e-16
          const limit = Math.atan(Math.min(draught, depth - draught) / (beam / 2));
          const arms = armsOf(hull, loading, limit * 0.999, 7);
          for (let i = 0; i <= 7; i++) {
            expectClose(arms.arm[i]!, wallSidedArm(at.GM, at.BM, arms.angle[i]!), { abs: 1e-13 * beam }); // measured 6e-15 beam
          }
        },
      ),
      { seed: 20260002, numRuns: 60 },
    );
  });

  it('gives a half-round hull a metacentre at its own centre at every heel', () => {
    const radius = 0.4;
    const hull = sectionOf(hullOf({ kind: 'bilge', beam: 0.8, depth: 0.7, bilgeRadius: radius }, 2));
    const loading = load({ mass: 2 * 1025 * 0.12, centreHeight: 0.32 });
    const at = afloat(hull, loading);
    // The waterline lies in the round part, so every buoyancy force passes the circle's centre.
    expect(at.waterline).toBeLessThan(radius);
    expectClose(at.KB + at.BM, radius, { rel: 5e-5 }); // measured 1.2e-5, chords for an arc
    const arms = armsOf(hull, loading, 10 * DEGREE, 4);
    for (let i = 1; i <= 4; i++) {
      expectClose(arms.arm[i]!, (radius - 0.32) * Math.sin(arms.angle[i]!), { rel: 1e-5 }); // measured 9e-7
    }
  });

  it('gives a V hull the triangle its closed form: KB 2/3 draught, breadth 2 d cot(deadrise)', () => {
    const deadrise = 20 * DEGREE;
    const hull = sectionOf(hullOf({ kind: 'deadrise', beam: 2, depth: 1, deadrise }, 1));
    const draught = 0.3;
    const breadth = (2 * draught) / Math.tan(deadrise);
    const area = (breadth * draught) / 2;
    const at = afloat(hull, load({ mass: 1025 * area, centreHeight: 0.2 }));
    expectClose(
      [at.waterline, at.waterlineBeam, at.KB, at.BM],
      [draught, breadth, (2 / 3) * draught, breadth ** 3 / (12 * area)],
      { rel: 1e-14 }, // measured 1.5e-16
    );
  });

  it('has an arm whose slope at rest is GM, for every shape and a fin', () => {
    const shapes: readonly Section[] = [
      { kind: 'deadrise', beam: 1.5, depth: 0.6, deadrise: 12 * DEGREE },
      { kind: 'bilge', beam: 1.5, depth: 0.6, bilgeRadius: 0.3 },
    ];
    const keels: readonly Keel[] = [
      { kind: 'none' },
      { kind: 'fin', depth: 0.5, length: 1.2, thickness: 0.06, mass: 60 },
    ];
    for (const shape of shapes) {
      for (const keel of keels) {
        const hull = sectionOf(hullOf(shape, 4.2, keel));
        const loading = load({ mass: 700, centreHeight: 0.35 });
        const at = afloat(hull, loading);
        const tiny = 1e-4;
        const arms = armsOf(hull, loading, 2 * tiny, 2);
        expectClose(arms.arm[1]! / tiny, at.GM, { rel: 1e-7 }); // measured 3e-8, curvature over 1e-4 rad
        if (keel.kind === 'fin') expectClose(at.draught - at.waterline, 0.5, { rel: 1e-14 }); // measured 1e-16
      }
    }
  });

  it('keeps the fin volume when it is spread over the hull', () => {
    const plain: Section = { kind: 'bilge', beam: 1.5, depth: 0.6, bilgeRadius: 0.1 };
    const without = sectionArea(sectionOf(hullOf(plain, 4)));
    const withFin = sectionArea(
      sectionOf(hullOf(plain, 4, { kind: 'fin', depth: 0.5, length: 1.2, thickness: 0.06, mass: 60 })),
    );
    expectClose((withFin - without) * 4, 0.5 * 1.2 * 0.06, { rel: 1e-13 }); // measured 1.1e-14
  });

  it('rests a box of negative GM at the angle of loll', () => {
    const loading = load({ mass: 1025 * 2 * 0.8, centreHeight: 0.85 });
    const hull = box(2, 2);
    const at = afloat(hull, loading);
    expect(at.GM).toBeLessThan(0);
    const arms = armsOf(hull, loading, 60 * DEGREE, 60);
    expectClose(arms.lollAngle!, wallSidedLoll(at.GM, at.BM), { rel: 1e-12 }); // measured 8e-15
    expect(arms.arm[1]!).toBeLessThan(0);
  });

  it('integrates the curve to the work of heeling, and says where the arm is gone', () => {
    const hull = box(2, 1);
    const loading = load({ mass: 1025 * 2 * 0.5, centreHeight: 0.75 });
    const coarse = armsOf(hull, loading, 60 * DEGREE, 60);
    const fine = armsOf(hull, loading, 60 * DEGREE, 480);
    expectClose(coarse.area.at(-1)!, fine.area.at(-1)!, { rel: 5e-6 }); // measured 1.1e-6
    const at = coarse.vanishingAngle;
    if (at === undefined) throw new Error('the arm does not vanish');
    const there = armsOf(hull, loading, at, 1);
    expectClose(there.arm[1]!, 0, { abs: 1e-13 }); // measured 2e-15
  });

  it('says what would float where the load is too great', () => {
    const outcome = flotation(box(2, 1), load({ mass: 2051 }));
    expect(outcome.kind).toBe('sinks');
    if (outcome.kind === 'sinks') expectClose(outcome.mostMass, 2050, { rel: 1e-14 }); // measured 0
  });

  it('names the field of a section that cannot be drawn', () => {
    expect(hullSection(hullOf({ kind: 'deadrise', beam: 2, depth: 0.3, deadrise: 0.4 }, 3))).toMatchObject({
      kind: 'refused',
      faults: [{ field: 'section.deadrise', value: 0.4 }],
    });
    expect(hullSection(hullOf({ kind: 'bilge', beam: 2, depth: 1, bilgeRadius: 1.1 }, 3))).toMatchObject({
      kind: 'refused',
      faults: [{ field: 'section.bilgeRadius' }],
    });
  });
});

describe('hull figures', () => {
  it('open into the numbers they were made of, and are none for a hull that sinks', () => {
    const hull = hullOf({ kind: 'deadrise', beam: 1.5, depth: 0.6, deadrise: 12 * DEGREE }, 4.2);
    const section = sectionOf(hull);
    const loading = load({ mass: 480, centreHeight: 0.35 });
    const figures = new Map(hullFigures(section, loading, 90).map((f) => [f.id, f]));
    const of = (id: string, label: string): number =>
      figures.get(id)!.inputs.find((i) => i.label === label)!.value;
    const GM = figures.get('GM')!.value;
    expectClose(GM, of('GM', 'KB') + of('GM', 'BM') - 0.35, { rel: 1e-14 }); // measured 0
    const BM = of('BM', 'Breadth at the waterline') ** 3 / (12 * of('BM', 'Displaced section'));
    expectClose(figures.get('BM')!.value, BM, { rel: 1e-13 }); // measured 2e-16
    const period = 2 * Math.PI * Math.sqrt(90 / (480 * 9.80665 * GM));
    expectClose(figures.get('rollPeriod')!.value, period, { rel: 1e-14 }); // measured 0
    for (const f of figures.values()) {
      expect(Number.isFinite(f.value), f.id).toBe(true);
      expect(f.inputs.length * f.source.length * f.formula.length, f.id).toBeGreaterThan(0);
    }
    expect(hullFigures(section, load({ mass: 1e5 }), 90)).toEqual([]);
  });

  it('start the roll of a fin keel with its drag about the centre of mass', () => {
    const fin: Keel = { kind: 'fin', depth: 0.5, length: 1.2, thickness: 0.06, mass: 60 };
    const shape: Section = { kind: 'bilge', beam: 1.5, depth: 0.6, bilgeRadius: 0.1 };
    const loading = load({ mass: 480, centreHeight: 0.2 });
    const bare = usualHullRollStart(hullOf(shape, 4), loading, 90, 0.4);
    const finned = usualHullRollStart(hullOf(shape, 4, fin), loading, 90, 0.4);
    const plate = (0.5 * 1025 * 1.2 * 1.2 * (0.7 ** 4 - 0.2 ** 4)) / 4;
    expectClose(finned.quadraticDamping - bare.quadraticDamping, plate, { rel: 1e-12 }); // measured 0
    expectClose(finned.addedInertia, bare.addedInertia, { rel: 1e-15 }); // measured 0
  });
});
