import type { Mesh } from './mesh';
import { encodeUtf8 } from './text';

const HEADER = 80;
const FACET = 50;
const METRES_TO_MM = 1000;

/**
 * A mesh as binary STL in millimetres, which is what programs that read STL take it for.
 *
 * @param mesh   closed, m
 * @param title  stands in the header, cut at 80 bytes; never begins with "solid", which would mark a text file
 *
 * O(triangles). Source: the StereoLithography interface's binary form, from memory.
 */
export function writeStl({ positions, triangles }: Mesh, title: string): Uint8Array {
  const count = triangles.length / 3;
  const bytes = new Uint8Array(HEADER + 4 + FACET * count);
  bytes.set(encodeUtf8(`mm; ${title.replace(/[^ -~]/g, '?')}`).subarray(0, HEADER));
  const view = new DataView(bytes.buffer);
  view.setUint32(HEADER, count, true);
  const corner = new Float64Array(9);
  let at = HEADER + 4;
  for (let i = 0; i < triangles.length; i += 3) {
    for (let k = 0; k < 9; k++) {
      corner[k] = METRES_TO_MM * positions[3 * triangles[i + Math.floor(k / 3)]! + (k % 3)]!;
    }
    const normal = facetNormal(corner);
    for (let k = 0; k < 3; k++) view.setFloat32(at + 4 * k, normal[k]!, true);
    for (let k = 0; k < 9; k++) view.setFloat32(at + 12 + 4 * k, corner[k]!, true);
    at += FACET;
  }
  return bytes;
}

/** Unit normal of a triangle given by three corners; zero for one of no size. */
function facetNormal(c: Float64Array): readonly [number, number, number] {
  const ux = c[3]! - c[0]!;
  const uy = c[4]! - c[1]!;
  const uz = c[5]! - c[2]!;
  const vx = c[6]! - c[0]!;
  const vy = c[7]! - c[1]!;
  const vz = c[8]! - c[2]!;
  const x = uy * vz - uz * vy;
  const y = uz * vx - ux * vz;
  const z = ux * vy - uy * vx;
  const length = Math.sqrt(x * x + y * y + z * z) || 1;
  return [x / length, y / length, z / length];
}
