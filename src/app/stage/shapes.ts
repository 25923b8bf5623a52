/** Geometries of the stage that three has no builder for. Lengths in m; whoever asks for one disposes of it. */
import {
  BufferGeometry,
  ExtrudeGeometry,
  Float32BufferAttribute,
  Matrix4,
  OctahedronGeometry,
  Path,
  Shape,
} from 'three';
import { mergeGeometries } from 'three/addons/utils/BufferGeometryUtils.js';

/** Puts shapes together into one; the parts are let go of. */
export function merged(parts: BufferGeometry[]): BufferGeometry {
  const whole = mergeGeometries(parts);
  for (const part of parts) part.dispose();
  if (!whole) throw new Error('The parts of a shape could not be merged.');
  return whole;
}

/** One shape at several places, as one; the pattern is let go of. */
export const copies = (pattern: BufferGeometry, places: readonly Matrix4[]): BufferGeometry => {
  const parts = places.map((place) => pattern.clone().applyMatrix4(place));
  pattern.dispose();
  return merged(parts);
};

/** A flat frame with rounded corners about the wheel, in the x-y plane, thickness along z; x and y are half sizes. */
export function frameGeometry(x: number, y: number, bar: number, thickness: number): BufferGeometry {
  const outline = roundedRectangle(new Shape(), x + bar, y + bar, 1.6 * bar);
  outline.holes.push(roundedRectangle(new Path(), x, y, 0.9 * bar));
  const geometry = new ExtrudeGeometry(outline, { depth: thickness, bevelEnabled: false, curveSegments: 5 });
  return geometry.translate(0, 0, -thickness / 2);
}

function roundedRectangle<P extends Path>(path: P, x: number, y: number, radius: number): P {
  const r = Math.min(radius, x, y);
  path.moveTo(-x + r, -y);
  path.lineTo(x - r, -y);
  path.absarc(x - r, -y + r, r, -Math.PI / 2, 0, false);
  path.lineTo(x, y - r);
  path.absarc(x - r, y - r, r, 0, Math.PI / 2, false);
  path.lineTo(-x + r, y);
  path.absarc(-x + r, y - r, r, Math.PI / 2, Math.PI, false);
  path.lineTo(-x, -y + r);
  path.absarc(-x + r, -y + r, r, Math.PI, 1.5 * Math.PI, false);
  return path;
}

export interface ArcTube {
  readonly geometry: BufferGeometry;
  /** Indices drawn for each step along the arc: the draw range grows by this. */
  readonly perStep: number;
  readonly steps: number;
}

/**
 * A tube bent round z from the x axis, its triangles in order along the arc, so that a draw range shortens it.
 * With `dash` (steps drawn, steps left out) it is broken.
 */
export function arcTube(
  radius: number,
  tube: number,
  arc: number,
  steps: number,
  dash?: readonly [number, number],
): ArcTube {
  const sides = 6;
  const position: number[] = [];
  const index: number[] = [];
  for (let i = 0; i <= steps; i++) {
    const angle = (arc * i) / steps;
    for (let k = 0; k < sides; k++) {
      const turn = (2 * Math.PI * k) / sides;
      const r = radius + tube * Math.cos(turn);
      position.push(r * Math.cos(angle), r * Math.sin(angle), tube * Math.sin(turn));
    }
  }
  for (let i = 0; i < steps; i++) {
    const isDrawn = !dash || i % (dash[0] + dash[1]) < dash[0];
    for (let k = 0; k < sides; k++) {
      const a = i * sides + k;
      const b = i * sides + ((k + 1) % sides);
      // A gap keeps its place in the order as triangles of no size.
      if (isDrawn) index.push(a, a + sides, b, b, a + sides, b + sides);
      else index.push(a, a, a, a, a, a);
    }
  }
  const geometry = new BufferGeometry();
  geometry.setAttribute('position', new Float32BufferAttribute(position, 3));
  geometry.setIndex(index);
  return { geometry, perStep: 6 * sides, steps };
}

/** Lozenges along an arc round z from the x axis, in order, so that a draw range shows the first few. */
export function arcLozenges(radius: number, size: number, arc: number, steps: number): ArcTube {
  const lozenge = new OctahedronGeometry(size).scale(0.62, 1, 0.62);
  const places = Array.from({ length: steps }, (_, i) =>
    new Matrix4()
      .makeRotationZ((arc * (i + 0.5)) / steps)
      .multiply(new Matrix4().makeTranslation(radius, 0, 0)),
  );
  const perStep = lozenge.getAttribute('position').count;
  return { geometry: copies(lozenge, places), perStep, steps };
}

/** A flat triangle outline in the x-y plane, pointing along y: a head not filled in. */
export function openHeadGeometry(length: number, halfWidth: number, depth: number): BufferGeometry {
  const triangle = <P extends Path>(path: P, scale: number, shift: number): P => {
    path.moveTo(-halfWidth * scale, shift);
    path.lineTo(halfWidth * scale, shift);
    path.lineTo(0, shift + length * scale);
    path.closePath();
    return path;
  };
  const shape = triangle(new Shape(), 1, 0);
  shape.holes.push(triangle(new Path(), 0.48, 0.17 * length));
  return new ExtrudeGeometry(shape, { depth, bevelEnabled: false }).translate(0, 0, -depth / 2);
}

/** A sector of a flat ring in the x-y plane between two angles from the x axis. */
export function sectorGeometry(inner: number, outer: number, from: number, to: number): BufferGeometry {
  const steps = Math.max(2, Math.ceil(Math.abs(to - from) / 0.06));
  const position: number[] = [];
  const index: number[] = [];
  for (let i = 0; i <= steps; i++) {
    const angle = from + ((to - from) * i) / steps;
    position.push(
      inner * Math.cos(angle),
      inner * Math.sin(angle),
      0,
      outer * Math.cos(angle),
      outer * Math.sin(angle),
      0,
    );
    if (i < steps) index.push(2 * i, 2 * i + 1, 2 * i + 2, 2 * i + 2, 2 * i + 1, 2 * i + 3);
  }
  const geometry = new BufferGeometry();
  geometry.setAttribute('position', new Float32BufferAttribute(position, 3));
  geometry.setIndex(index);
  return geometry;
}

/** Line segments from pairs of points. */
export function segmentsGeometry(points: readonly number[]): BufferGeometry {
  const geometry = new BufferGeometry();
  geometry.setAttribute('position', new Float32BufferAttribute(points, 3));
  return geometry;
}

/** An open sheet swept along x from -length/2 to length/2 through the points y, z of an outline. */
export function sweptSheet(outline: readonly (readonly [number, number])[], length: number): BufferGeometry {
  const position: number[] = [];
  for (let i = 0; i + 1 < outline.length; i++) {
    const [y0, z0] = outline[i];
    const [y1, z1] = outline[i + 1];
    const a = [length / 2, y0, z0];
    const b = [-length / 2, y0, z0];
    const c = [length / 2, y1, z1];
    const d = [-length / 2, y1, z1];
    position.push(...a, ...b, ...c, ...c, ...b, ...d);
  }
  const geometry = segmentsGeometry(position);
  geometry.computeVertexNormals();
  return geometry;
}
