/** Closed surfaces as triangles, of which every exported shape is made. Lengths in m. */
import { cross3, dot3, type Mat3, rotate3, unit3, type Vec3 } from '../physics';

/** A closed surface: triangles anticlockwise seen from outside. */
export interface Mesh {
  /** 3 for each point, m. */
  readonly positions: Float64Array;
  /** 3 for each triangle, places of points. */
  readonly triangles: Uint32Array;
}

type Point = readonly [number, number];

const meshOf = (positions: readonly number[], triangles: readonly number[]): Mesh => ({
  positions: Float64Array.from(positions),
  triangles: Uint32Array.from(triangles),
});

/** A box with its centre at the origin. */
export function boxMesh(x: number, y: number, z: number): Mesh {
  const outline: readonly Point[] = [
    [-y / 2, -z / 2],
    [y / 2, -z / 2],
    [y / 2, z / 2],
    [-y / 2, z / 2],
  ];
  return prismMesh(outline, x);
}

/**
 * A convex outline (y, z; anticlockwise seen from +x) drawn out along x, from -length/2 to length/2.
 *
 * O(points).
 */
export function prismMesh(outline: readonly Point[], length: number): Mesh {
  const n = outline.length;
  const positions: number[] = [];
  for (const x of [length / 2, -length / 2]) for (const [y, z] of outline) positions.push(x, y, z);
  const triangles: number[] = [];
  for (let i = 0; i < n; i++) {
    const next = (i + 1) % n;
    triangles.push(i, n + i, n + next, i, n + next, next);
    if (i > 0 && i + 1 < n) triangles.push(0, i, i + 1, n, n + i + 1, n + i);
  }
  return meshOf(positions, triangles);
}

/** Sides of a polygon that stays within `error` (m) of a circle of its area: at least 16, at most 720. */
export const sidesFor = (radius: number, error: number): number =>
  Math.min(720, Math.max(16, Math.ceil(Math.PI * Math.sqrt(radius / (3 * error)))));

/** By how much a polygon of a circle's area reaches outside it at a corner, over the radius: the most it is off. */
const cornerReach = (sides: number): number =>
  Math.sqrt((2 * Math.PI) / sides / Math.sin((2 * Math.PI) / sides));

/** m, the most by which a polygon of `sides` and the circle of the same area lie apart. */
export const chordError = (radius: number, sides: number): number => radius * (cornerReach(sides) - 1);

/**
 * A ring about z (a disc when `inner` is 0), its middle at the origin. The polygons have the area of their circles, so
 * that the volume is exact; the surface is off by `chordError`.
 */
export function ringMesh(inner: number, outer: number, length: number, sides: number): Mesh {
  const reach = cornerReach(sides);
  const positions: number[] = [];
  const ringAt = (radius: number, z: number): number => {
    const at = positions.length / 3;
    for (let i = 0; i < sides; i++) {
      const angle = (2 * Math.PI * i) / sides;
      positions.push(radius * reach * Math.cos(angle), radius * reach * Math.sin(angle), z);
    }
    return at;
  };
  const half = length / 2;
  const low = ringAt(outer, -half);
  const high = ringAt(outer, half);
  const triangles: number[] = [];
  const strip = (a: number, b: number): void => {
    for (let i = 0; i < sides; i++) {
      const next = (i + 1) % sides;
      triangles.push(a + i, a + next, b + next, a + i, b + next, b + i);
    }
  };
  strip(low, high);
  if (inner > 0) {
    const lowIn = ringAt(inner, -half);
    const highIn = ringAt(inner, half);
    strip(high, highIn);
    strip(highIn, lowIn);
    strip(lowIn, low);
    return meshOf(positions, triangles);
  }
  const bottom = positions.length / 3;
  positions.push(0, 0, -half, 0, 0, half);
  for (let i = 0; i < sides; i++) {
    const next = (i + 1) % sides;
    triangles.push(bottom, low + next, low + i, bottom + 1, high + i, high + next);
  }
  return meshOf(positions, triangles);
}

/** A ball about the origin with the volume of the true one. */
export function ballMesh(radius: number, sides: number): Mesh {
  const rows = Math.max(4, Math.round(sides / 2));
  const positions: number[] = [0, 0, 1];
  for (let row = 1; row < rows; row++) {
    const polar = (Math.PI * row) / rows;
    for (let i = 0; i < sides; i++) {
      const angle = (2 * Math.PI * i) / sides;
      positions.push(Math.sin(polar) * Math.cos(angle), Math.sin(polar) * Math.sin(angle), Math.cos(polar));
    }
  }
  const last = positions.length / 3;
  positions.push(0, 0, -1);
  const triangles: number[] = [];
  for (let i = 0; i < sides; i++) {
    const next = (i + 1) % sides;
    triangles.push(0, 1 + i, 1 + next, last, last - sides + next, last - sides + i);
    for (let row = 0; row + 2 < rows; row++) {
      const a = 1 + row * sides;
      const b = a + sides;
      triangles.push(a + i, b + i, b + next, a + i, b + next, a + next);
    }
  }
  const unit = meshOf(positions, triangles);
  const scale = radius * Math.cbrt((4 * Math.PI) / 3 / meshVolume(unit));
  return { positions: unit.positions.map((value) => value * scale), triangles: unit.triangles };
}

/** A round rod between two points. */
export function rodMesh(from: Vec3, to: Vec3, radius: number, sides: number): Mesh {
  const along: Vec3 = [to[0] - from[0], to[1] - from[1], to[2] - from[2]];
  const length = Math.sqrt(dot3(along, along));
  const middle: Vec3 = [(from[0] + to[0]) / 2, (from[1] + to[1]) / 2, (from[2] + to[2]) / 2];
  return placeMesh(ringMesh(0, radius, length, sides), turnZTo(along), middle);
}

/** A rotation that takes z to a direction. */
export function turnZTo(direction: Vec3): Mat3 {
  const z = unit3(direction);
  const x = unit3(cross3(Math.abs(z[0]) < 0.9 ? [1, 0, 0] : [0, 1, 0], z));
  const y = cross3(z, x);
  return [x[0], y[0], z[0], x[1], y[1], z[1], x[2], y[2], z[2]];
}

/** The mesh turned, then moved. */
export function placeMesh(mesh: Mesh, turn: Mat3, by: Vec3): Mesh {
  const positions = new Float64Array(mesh.positions.length);
  for (let i = 0; i < positions.length; i += 3) {
    const [x, y, z] = rotate3(turn, [mesh.positions[i]!, mesh.positions[i + 1]!, mesh.positions[i + 2]!]);
    positions.set([x + by[0], y + by[1], z + by[2]], i);
  }
  return { positions, triangles: mesh.triangles };
}

const UPRIGHT: Mat3 = [1, 0, 0, 0, 1, 0, 0, 0, 1];

export const moveMesh = (mesh: Mesh, by: Vec3): Mesh => placeMesh(mesh, UPRIGHT, by);

/** Several closed surfaces as one list of triangles; they are not united where they touch or overlap. */
export function joinMeshes(meshes: readonly Mesh[]): Mesh {
  const positions = new Float64Array(meshes.reduce((sum, mesh) => sum + mesh.positions.length, 0));
  const triangles = new Uint32Array(meshes.reduce((sum, mesh) => sum + mesh.triangles.length, 0));
  let point = 0;
  let corner = 0;
  for (const mesh of meshes) {
    positions.set(mesh.positions, 3 * point);
    triangles.set(
      mesh.triangles.map((at) => at + point),
      corner,
    );
    point += mesh.positions.length / 3;
    corner += mesh.triangles.length;
  }
  return { positions, triangles };
}

/**
 * Volume inside a closed surface, m^3.
 *
 * O(triangles). Source: divergence theorem; sum of signed tetrahedra.
 */
export function meshVolume({ positions: p, triangles }: Mesh): number {
  let six = 0;
  for (let i = 0; i < triangles.length; i += 3) {
    const a = 3 * triangles[i]!;
    const b = 3 * triangles[i + 1]!;
    const c = 3 * triangles[i + 2]!;
    six +=
      p[a]! * (p[b + 1]! * p[c + 2]! - p[b + 2]! * p[c + 1]!) +
      p[a + 1]! * (p[b + 2]! * p[c]! - p[b]! * p[c + 2]!) +
      p[a + 2]! * (p[b]! * p[c + 1]! - p[b + 1]! * p[c]!);
  }
  return six / 6;
}
