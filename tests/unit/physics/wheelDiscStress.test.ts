import { describe, expect, it } from 'vitest';
import {
  ballContact,
  ballRingStress,
  boredDiscShapeFactor,
  boredDiscStress,
  boreGrowth,
  constantStressShapeFactor,
  equivalentStress,
  holeEdgeStress,
  meanHoopStress,
  solidDiscLimitSpeed,
  solidDiscShapeFactor,
  solidDiscStress,
  THIN_RING_SHAPE_FACTOR,
  thinRingLimitSpeed,
  thinRingStress,
} from '../../../src/core/physics/discStress';
import { joinedDiscs, type Ring, ringGrowth, ringStress } from '../../../src/core/physics/joinedDiscs';
import { MATERIALS } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';
import { solveRotatingDisc } from '../../support/rotatingDisc';

const RPM = (2 * Math.PI) / 60;

const steel = { density: 7850, youngsModulus: 205e9, poissonRatio: 0.29 };
const aluminium = { density: 2700, youngsModulus: 68.9e9, poissonRatio: 0.33 };

const ring = (changes: Partial<Ring>): Ring => ({
  inner: 0.05,
  outer: 0.1,
  thickness: 0.01,
  ...steel,
  carrier: -1,
  edgePull: 0,
  borePull: 0,
  ...changes,
});

/** Greatest difference of the joined rings from the boundary-value solution, over its greatest stress. */
function differenceFromBoundaryValue(rings: readonly Ring[]): number {
  const samples = solveRotatingDisc(rings, rings[0]!.borePull);
  const fields = joinedDiscs(rings);
  let worst = 0;
  let greatest = 0;
  let worstGrowth = 0;
  for (const s of samples) {
    const mine = ringStress(rings[s.band]!, fields[s.band]!, s.radius);
    greatest = Math.max(greatest, Math.abs(s.radial), Math.abs(s.hoop));
    worst = Math.max(worst, Math.abs(mine.radial - s.radial), Math.abs(mine.hoop - s.hoop));
    const growth = ringGrowth(rings[s.band]!, fields[s.band]!, s.radius);
    worstGrowth = Math.max(worstGrowth, Math.abs(growth - s.growth) / samples.at(-1)!.growth);
  }
  return Math.max(worst / greatest, worstGrowth);
}

describe('spinning discs, closed forms', () => {
  it('thin ring: 314 MPa at 200 m/s in steel, Timoshenko & Goodier; Roark', () => {
    expectClose(thinRingStress(7850, 200), 314e6, { rel: 1e-15 }); // measured 0
  });

  it('solid disc at 12,000 rpm, Timoshenko & Goodier on rotating disks', () => {
    const speed = 12000 * RPM;
    expectClose([speed, speed * 0.06], [1256.63706144, 75.3982236862], { rel: 1e-11 }); // measured 3.2e-12
    const centre = solidDiscStress(7850, 0.3, speed, 0.06, 0);
    expectClose([centre.radial, centre.hoop], [18.4083913e6, 18.4083913e6], { rel: 5e-9 }); // measured 2.4e-9
    expectClose(solidDiscStress(7850, 0.3, speed, 0.06, 0.06).hoop, 7.80962057e6, { rel: 1e-9 }); // measured 6.4e-11
  });

  it('a pinhole doubles the peak, Timoshenko & Goodier', () => {
    const bored = boredDiscStress(7850, 0.3, 1000, 1e-7, 0.1, 1e-7).hoop;
    expectClose(bored / solidDiscStress(7850, 0.3, 1000, 0.1, 0).hoop, 2, { abs: 1e-9 }); // measured 4.2e-13
  });

  it('shape factors, Genta (1985)', () => {
    expectClose(solidDiscShapeFactor(0.3), 0.606060606, { rel: 2e-9 }); // measured 1e-10
    expectClose(boredDiscShapeFactor(0.3, 1e-9), 0.303030303, { rel: 2e-9 }); // measured 1e-10
    expectClose([THIN_RING_SHAPE_FACTOR, boredDiscShapeFactor(0.3, 1)], [0.5, 0.5], { rel: 1e-15 }); // measured 0
    expectClose([1, 5, 20].map(constantStressShapeFactor), [0.418023293, 0.966081725, 0.999999959], {
      rel: 2e-9,
    });
  });

  it('the shape factor is energy over mass over the peak stress it was derived from', () => {
    for (const ratio of [0.05, 0.3, 0.8]) {
      const inner = 0.1 * ratio;
      const peak = boredDiscStress(7850, 0.3, 500, inner, 0.1, inner).hoop;
      const energyPerMass = (500 ** 2 * (0.1 ** 2 + inner ** 2)) / 4;
      expectClose((energyPerMass * 7850) / peak, boredDiscShapeFactor(0.3, ratio), { rel: 1e-14 }); // measured 1.8e-16
    }
  });

  it('limit speeds of common materials, thin ring and solid disc', () => {
    const list = [
      [276, 2700],
      [503, 2810],
      [834, 7850],
      [310, 8500],
      [517, 17000],
    ] as const;
    expectClose(
      list.map(([stress, density]) => thinRingLimitSpeed(stress * 1e6, density)),
      [319.722102, 423.088122, 325.947907, 190.972743, 174.389692],
      { rel: 1e-8 }, // measured 4.6e-9
    );
    expectClose(
      list.map(([stress, density]) => solidDiscLimitSpeed(stress * 1e6, density, 0.33)),
      [495.559191, 655.773268, 505.208994, 296.001738, 270.298532],
      { rel: 1e-8 }, // measured 1.3e-9
    );
    expectClose(
      list.map(([stress, density]) => (stress * 1e3) / density),
      [102.222222, 179.003559, 106.242038, 36.4705882, 30.4117647],
      { rel: 5e-9 }, // measured 2.2e-9
    );
  });

  it('a bored disc becomes a thin ring and its mean hoop stress lies between', () => {
    const thin = boredDiscStress(7850, 0.3, 2000, 0.0999, 0.1, 0.0999).hoop;
    expectClose(thin, thinRingStress(7850, 2000 * 0.1), { rel: 2e-3 }); // measured 3.5e-4
    const inner = boredDiscStress(7850, 0.3, 2000, 0.04, 0.1, 0.04).hoop;
    const rim = boredDiscStress(7850, 0.3, 2000, 0.04, 0.1, 0.1).hoop;
    const mean = meanHoopStress(7850, 2000, 0.04, 0.1);
    expect(mean).toBeLessThan(inner);
    expect(mean).toBeGreaterThan(rim);
    // Equilibrium across a diameter: the mean of the hoop stress is the pull over the section.
    let sum = 0;
    const n = 2000;
    for (let i = 0; i < n; i++) {
      sum += boredDiscStress(7850, 0.3, 2000, 0.04, 0.1, 0.04 + (0.06 * (i + 0.5)) / n).hoop / n;
    }
    expectClose(sum, mean, { rel: 1e-6 }); // measured 2e-8
  });

  it('bore growth is the hoop strain at the bore', () => {
    const hoop = boredDiscStress(7850, 0.29, 1500, 0.02, 0.1, 0.02).hoop;
    expectClose(boreGrowth(7850, 0.29, 205e9, 1500, 0.02, 0.1), (0.02 * hoop) / 205e9, { rel: 1e-14 }); // measured 1.2e-16
  });

  it('von Mises and Kirsch in their plain cases', () => {
    expectClose(equivalentStress({ radial: 0, hoop: 5 }), 5, { rel: 1e-15 }); // measured 0
    expectClose(equivalentStress({ radial: 5, hoop: 5 }), 5, { rel: 1e-15 }); // measured 0
    expectClose(equivalentStress({ radial: -5, hoop: 5 }), 5 * Math.sqrt(3), { rel: 1e-15 }); // measured 2.1e-16
    expectClose(holeEdgeStress({ radial: 0, hoop: 7 }), 21, { rel: 1e-15 }); // measured 0
    expectClose(holeEdgeStress({ radial: 7, hoop: 7 }), 14, { rel: 1e-15 }); // measured 0
  });

  it('a ball on a flat wall gives Hertz: p0 = 3 F / (2 pi a^2), a^3 = 3 F R / (4 E*)', () => {
    const contact = ballContact(100, 0.01, 1e9, 1.15e11);
    const a = Math.cbrt((3 * 100 * 0.005) / (4 * 1.15e11));
    expectClose([contact.halfWidth, contact.pressure], [a, 150 / (Math.PI * a * a)], { rel: 1e-10 }); // measured 1.7e-12
    expect(ballContact(100, 0.01, 0.03, 1.15e11).pressure).toBeLessThan(contact.pressure);
  });
});

describe('spinning discs against the disc equation solved as a boundary-value problem', () => {
  it('solid disc', () => {
    // The shooting starts at a radius of 1e-6 m with the field of a solid centre; ours has no hole at all.
    const samples = solveRotatingDisc([ring({ inner: 1e-6, outer: 0.1 })]);
    for (const s of samples) {
      const exact = solidDiscStress(7850, 0.29, 1, 0.1, s.radius);
      expectClose([s.radial, s.hoop], [exact.radial, exact.hoop], { abs: 1e-9 * 7850 * 0.01 }); // measured 1.2e-9
    }
    const field = joinedDiscs([ring({ inner: 0 })])[0]!;
    const half = solidDiscStress(7850, 0.29, 1, 0.1, 0.05);
    const mine = ringStress(ring({ inner: 0 }), field, 0.05);
    expectClose([mine.radial, mine.hoop], [half.radial, half.hoop], { rel: 1e-14 }); // measured 1.5e-16
  });

  it('bored disc and thick rim', () => {
    for (const inner of [0.002, 0.03, 0.09]) {
      expectClose(differenceFromBoundaryValue([ring({ inner })]), 0, { abs: 1e-9 }); // measured 3.4e-12
      const samples = solveRotatingDisc([ring({ inner })]);
      for (const s of samples) {
        const exact = boredDiscStress(7850, 0.29, 1, inner, 0.1, s.radius);
        expectClose([s.radial, s.hoop], [exact.radial, exact.hoop], { abs: 1e-9 * samples[0]!.hoop }); // measured 2.2e-10
      }
    }
  });

  it('rim on a web on a hub, of two materials', () => {
    const rings = [
      ring({ inner: 0.005, outer: 0.015, thickness: 0.03, ...aluminium }),
      ring({ inner: 0.015, outer: 0.05, thickness: 0.005, ...aluminium, carrier: 0 }),
      ring({ inner: 0.05, outer: 0.06, thickness: 0.02, carrier: 1 }),
    ];
    expectClose(differenceFromBoundaryValue(rings), 0, { abs: 1e-9 }); // measured 1.5e-13
  });

  it('a web that bolts pull on, and a bore that balls press on', () => {
    const rings = [
      ring({ inner: 0.01, outer: 0.03, edgePull: 0.02 }),
      ring({ inner: 0.03, outer: 0.08, carrier: 0 }),
    ];
    expectClose(differenceFromBoundaryValue(rings), 0, { abs: 1e-9 }); // measured 7.1e-14
    const wall = ring({ inner: 0.05, outer: 0.06, borePull: 0.05 });
    expectClose(differenceFromBoundaryValue([wall]), 0, { abs: 1e-9 }); // measured 4e-14
    const field = joinedDiscs([wall])[0]!;
    const mine = ringStress(wall, field, 0.055);
    // 0.05 kg/rad over the wall's circumference at 0.046 m pitch.
    const mass = (0.05 * 2 * Math.PI * 0.05) / 0.046;
    const closed = ballRingStress(7850, 0.29, 1, 0.05, 0.06, 0.01, mass, 0.046, 0.055);
    expectClose([mine.radial, mine.hoop], [closed.radial, closed.hoop], { rel: 1e-12 }); // measured 4.4e-16
  });

  it('two rims side by side on one web act as one rim of twice the width', () => {
    const web = ring({ inner: 0.01, outer: 0.05, thickness: 0.02 });
    const single = ring({ inner: 0.05, outer: 0.06, thickness: 0.02, carrier: 0 });
    const half = { ...single, thickness: 0.01 };
    const together = joinedDiscs([web, single]);
    const apart = joinedDiscs([web, half, half]);
    expectClose([apart[0]!.A, apart[0]!.B], [together[0]!.A, together[0]!.B], { rel: 1e-11 }); // measured 0
    expectClose([apart[2]!.A, apart[2]!.B], [together[1]!.A, together[1]!.B], { rel: 1e-11 }); // measured 0
  });

  it('a disc cut into rings of one material is the same disc', () => {
    const whole = ring({ inner: 0.01, outer: 0.1 });
    const cut = [
      ring({ inner: 0.01, outer: 0.04 }),
      ring({ inner: 0.04, outer: 0.07, carrier: 0 }),
      ring({ inner: 0.07, outer: 0.1, carrier: 1 }),
    ];
    const [one] = joinedDiscs([whole]);
    const fields = joinedDiscs(cut);
    for (const field of fields) expectClose([field.A, field.B], [one!.A, one!.B], { rel: 1e-10 }); // measured 5.5e-15
  });

  it('a stiff light web shares a heavy rim: the rim is eased and the joint is in tension', () => {
    const web = ring({ inner: 0.01, outer: 0.05, thickness: 0.02, ...aluminium });
    const rim = ring({
      inner: 0.05,
      outer: 0.06,
      thickness: 0.02,
      density: MATERIALS['brass C36000'].density,
      carrier: 0,
    });
    const [, field] = joinedDiscs([web, rim]);
    const held = ringStress(rim, field!, 0.05);
    const alone = boredDiscStress(rim.density, rim.poissonRatio, 1, 0.05, 0.06, 0.05);
    expect(held.hoop).toBeLessThan(alone.hoop);
    expect(held.radial).toBeGreaterThan(0);
  });
});
