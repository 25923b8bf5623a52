import type { BufferGeometry } from 'three';
import { describe, expect, it } from 'vitest';
import { boltRadius, rigBox, sectionOutline, wheelExtent } from '../../../src/app/stage/bodyPlaces';
import { arcLozenges, arcTube, sectorGeometry } from '../../../src/app/stage/shapes';
import { wheelGeometry } from '../../../src/app/stage/wheelShape';
import { DEMONSTRATIONS, SKIFF, STRIDER, type WheelPart } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

/** Volume enclosed by a closed surface of triangles: the sum of signed tetrahedra. */
function enclosedVolume(geometry: BufferGeometry): number {
  const plain = geometry.index ? geometry.toNonIndexed() : geometry;
  const p = plain.getAttribute('position').array;
  let volume = 0;
  for (let i = 0; i < p.length; i += 9) {
    const [ax, ay, az, bx, by, bz, cx, cy, cz] = p.slice(i, i + 9);
    volume += (ax * (by * cz - bz * cy) + ay * (bz * cx - bx * cz) + az * (bx * cy - by * cx)) / 6;
  }
  return volume;
}

describe('wheelGeometry', () => {
  const disc: WheelPart = {
    kind: 'disc',
    radius: 0.1,
    bore: 0.02,
    thickness: 0.01,
    material: 'steel S235',
    offset: 0.003,
  };

  it('is a closed shape with faces outward and the volume of its part', () => {
    const segments = 96;
    const whole = enclosedVolume(wheelGeometry([disc], segments));
    const shaftAndMark = enclosedVolume(wheelGeometry([{ ...disc, bore: 0.0999, radius: 0.1 }], segments));
    // Between the two lies the disc less a thin hoop; a polygon of 96 sides is 7.1e-4 smaller than its circle.
    const expected = Math.PI * (0.0999 ** 2 - 0.02 ** 2) * 0.01;
    expectClose(whole - shaftAndMark, expected, { rel: 5e-3 }); // measured 2e-3: sides, and the edge that is broken
  });

  it('reaches as far as the stack does and no further', () => {
    const parts: readonly WheelPart[] = [
      disc,
      { kind: 'balls', count: 12, diameter: 0.02, pitchRadius: 0.11, material: 'steel 52100', offset: 0 },
      { kind: 'bolts', count: 6, mass: 0.002, pitchRadius: 0.05, offset: 0 },
    ];
    const geometry = wheelGeometry(parts, 64);
    geometry.computeBoundingBox();
    const radius = geometry.boundingBox?.max.x ?? Number.NaN;
    expectClose(radius, 1.005 * wheelExtent(parts).radius, { rel: 1e-6 }); // measured 2e-10: the mark stands proud of the rim by 0.005
    expectClose(wheelExtent(parts).radius, 0.12, { rel: 1e-12 }); // measured 0
    expect(geometry.getAttribute('color').count).toBe(geometry.getAttribute('position').count);
  });

  it('draws a bolt of the mass it has', () => {
    const radius = boltRadius(0.01);
    expectClose(7850 * Math.PI * radius ** 2 * 5 * radius, 0.01, { rel: 1e-12 }); // measured 2e-16
  });

  it('stays within a budget of triangles on every demonstration wheel', () => {
    for (const { rig } of DEMONSTRATIONS) {
      for (const { wheel } of rig.array.gyros) {
        expect(wheelGeometry(wheel.parts, 56).getAttribute('position').count / 3).toBeLessThan(3000);
      }
    }
  });
});

describe('arcs', () => {
  it('can be shortened by their draw range', () => {
    const arc = arcTube(1, 0.1, 2, 40);
    expect(arc.geometry.index?.count).toBe(arc.perStep * arc.steps);
    const broken = arcTube(1, 0.1, 2, 40, [3, 2]);
    expect(broken.geometry.index?.count).toBe(arc.perStep * arc.steps);
    const row = arcLozenges(1, 0.1, 2, 7);
    expect(row.geometry.getAttribute('position').count).toBe(row.perStep * row.steps);
  });

  it('of a sector begin and end at their angles', () => {
    const p = sectorGeometry(1, 2, -0.5, 0.75).getAttribute('position');
    expectClose(Math.atan2(p.getY(0), p.getX(0)), -0.5, { abs: 1e-7 }); // measured 1e-8, single precision
    expectClose(Math.atan2(p.getY(p.count - 1), p.getX(p.count - 1)), 0.75, { abs: 1e-7 }); // measured 2e-8
  });
});

describe('outlines and boxes', () => {
  it('go from deck edge to deck edge through the keel line', () => {
    const round = sectionOutline({ kind: 'bilge', beam: 2, depth: 1, bilgeRadius: 0.4 });
    expect(round[0]).toEqual([1, 1]);
    expect(round.at(-1)).toEqual([-1, 1]);
    expect(round.some(([y, z]) => y === 0 && z === 0)).toBe(true);
    const v = sectionOutline({ kind: 'deadrise', beam: 2, depth: 1, deadrise: 0.2 });
    expectClose(v[1], [1, Math.tan(0.2)], { rel: 1e-12 }); // measured 0
  });

  it('hold the feet on the ground and the keel below it', () => {
    expect(rigBox(STRIDER).min[2]).toBe(0);
    const keeled = {
      ...SKIFF,
      body: { ...SKIFF.body, keel: { kind: 'fin', depth: 0.5, length: 1, thickness: 0.1, mass: 60 } },
    } as typeof SKIFF;
    expect(rigBox(keeled).min[2]).toBe(-0.5);
  });
});
