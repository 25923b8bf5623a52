/** A wheel as its stack of parts makes it. Lengths in m. */
import {
  BoxGeometry,
  BufferAttribute,
  BufferGeometry,
  Color,
  CylinderGeometry,
  Float32BufferAttribute,
  IcosahedronGeometry,
  Matrix4,
} from 'three';
import type { WheelPart } from '../../core/rig';
import { boltRadius, wheelExtent } from './bodyPlaces';
import { MATERIAL_TINTS } from './materialTints';
import { copies, merged } from './shapes';

/** A point of a profile: distance from the axis, and place along it. */
type ProfilePoint = readonly [r: number, z: number];

/**
 * Turns a profile about the z axis, each straight part of it with an edge of its own, so that a turned part looks
 * turned and not moulded.
 */
function revolve(profile: readonly ProfilePoint[], segments: number): BufferGeometry {
  const position: number[] = [];
  const normal: number[] = [];
  const index: number[] = [];
  for (let k = 0; k + 1 < profile.length; k++) {
    const [r0, z0] = profile[k];
    const [r1, z1] = profile[k + 1];
    const length = Math.hypot(r1 - r0, z1 - z0) || 1;
    const nr = (z1 - z0) / length;
    const nz = -(r1 - r0) / length;
    const base = position.length / 3;
    for (let i = 0; i <= segments; i++) {
      const angle = (2 * Math.PI * i) / segments;
      const c = Math.cos(angle);
      const s = Math.sin(angle);
      position.push(r0 * c, r0 * s, z0, r1 * c, r1 * s, z1);
      normal.push(nr * c, nr * s, nz, nr * c, nr * s, nz);
      if (i < segments) {
        const a = base + 2 * i;
        index.push(a, a + 2, a + 1, a + 1, a + 2, a + 3);
      }
    }
  }
  const geometry = new BufferGeometry();
  geometry.setAttribute('position', new Float32BufferAttribute(position, 3));
  geometry.setAttribute('normal', new Float32BufferAttribute(normal, 3));
  geometry.setIndex(index);
  return geometry;
}

/** A ring with its outer edges broken, as a turned part has them. */
function ring(inner: number, outer: number, length: number, segments: number): BufferGeometry {
  const half = length / 2;
  const chamfer = Math.min(0.06 * length, 0.12 * (outer - inner), 0.02 * outer);
  const profile: ProfilePoint[] = [
    [inner, -half],
    [outer - chamfer, -half],
    [outer, -half + chamfer],
    [outer, half - chamfer],
    [outer - chamfer, half],
    [inner, half],
  ];
  if (inner > 0) profile.push([inner, -half]);
  return revolve(profile, segments);
}

/** Gives every corner of a geometry one colour and strips what merging cannot use. */
function tinted(geometry: BufferGeometry, colour: Color): BufferGeometry {
  const plain = geometry.index ? geometry.toNonIndexed() : geometry;
  if (plain !== geometry) geometry.dispose();
  plain.deleteAttribute('uv');
  const count = plain.getAttribute('position').count;
  const colours = new Float32Array(3 * count);
  for (let i = 0; i < count; i++) colour.toArray(colours, 3 * i);
  plain.setAttribute('color', new BufferAttribute(colours, 3));
  return plain;
}

const around = (count: number, radius: number, z: number): readonly Matrix4[] =>
  Array.from({ length: count }, (_, i) => {
    const angle = (2 * Math.PI * i) / count;
    return new Matrix4().makeRotationZ(angle).multiply(new Matrix4().makeTranslation(radius, 0, z));
  });

function wheelPart(part: WheelPart, segments: number): BufferGeometry {
  switch (part.kind) {
    case 'disc':
      return ring(part.bore, part.radius, part.thickness, segments).translate(0, 0, part.offset);
    case 'rim':
      return ring(part.innerRadius, part.outerRadius, part.width, segments).translate(0, 0, part.offset);
    case 'hub':
      return ring(part.bore, part.radius, part.length, Math.round(segments / 2)).translate(0, 0, part.offset);
    case 'balls':
      return copies(
        new IcosahedronGeometry(part.diameter / 2, part.count > 48 ? 1 : 2),
        around(part.count, part.pitchRadius, part.offset),
      );
    case 'bolts': {
      const shank = boltRadius(part.mass);
      const head = new CylinderGeometry(1.7 * shank, 1.7 * shank, 1.3 * shank, 6).translate(
        0,
        1.85 * shank,
        0,
      );
      const bar = new CylinderGeometry(shank, shank, 5 * shank, 10);
      const bolt = merged([head.toNonIndexed(), bar.toNonIndexed()]).rotateX(Math.PI / 2);
      head.dispose();
      bar.dispose();
      return copies(bolt, around(part.count, part.pitchRadius, part.offset));
    }
  }
}

const INK = new Color('#20282e');

/**
 * A wheel from its stack of parts in true proportion, spin axis along z, as one geometry coloured by material,
 * with a painted mark across both faces that shows it turning.
 */
export function wheelGeometry(parts: readonly WheelPart[], segments: number): BufferGeometry {
  const shapes = parts.map((part) => {
    const material = 'material' in part ? part.material : 'steel 4140 annealed';
    return tinted(wheelPart(part, segments), new Color(MATERIAL_TINTS[material]));
  });
  const { radius, above, below } = wheelExtent(parts);
  const shaft = new CylinderGeometry(0.05 * radius, 0.05 * radius, above - below + 0.4 * radius, 10);
  shapes.push(
    tinted(
      shaft.rotateX(Math.PI / 2).translate(0, 0, (above + below) / 2),
      new Color(MATERIAL_TINTS['stainless 304']),
    ),
  );
  const stripe = new BoxGeometry(0.34 * radius, 0.055 * radius, rimDepth(parts) + 0.012 * radius);
  shapes.push(tinted(stripe.translate(0.835 * radius, 0, rimMiddle(parts)), INK));
  return merged(shapes);
}

const outermost = (parts: readonly WheelPart[]): WheelPart =>
  parts.reduce(
    (far, part) => (wheelExtent([part]).radius > wheelExtent([far]).radius ? part : far),
    parts[0],
  );

const rimMiddle = (parts: readonly WheelPart[]): number => outermost(parts).offset;

const rimDepth = (parts: readonly WheelPart[]): number => {
  const part = outermost(parts);
  const { above, below } = wheelExtent([{ ...part, offset: 0 }]);
  return above - below;
};
