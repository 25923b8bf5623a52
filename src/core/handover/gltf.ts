/** The 3D model as glTF 2.0 binary, written out by hand. Source: Khronos glTF 2.0 specification, sections 3 and 4. */
import type { Mat3 } from '../physics';
import type { Mesh } from './mesh';
import type { ModelNode, Tint } from './rigModel';
import { encodeUtf8 } from './text';

const FLOAT = 5126;
const UNSIGNED_INT = 5125;
const VERTICES = 34962;
const INDICES = 34963;

/** Linear base colour, how metallic, how rough. */
const SURFACES: Readonly<
  Record<Tint, readonly [r: number, g: number, b: number, metallic: number, rough: number]>
> = {
  body: [0.62, 0.64, 0.6, 0, 0.8],
  leg: [0.2, 0.23, 0.26, 0, 0.7],
  keel: [0.16, 0.18, 0.2, 0.3, 0.6],
  tyre: [0.03, 0.03, 0.035, 0, 0.9],
  payload: [0.35, 0.3, 0.18, 0, 0.8],
  gimbal: [0.11, 0.17, 0.3, 0.2, 0.5],
  metal: [0.55, 0.57, 0.58, 0.9, 0.35],
  heavy: [0.14, 0.14, 0.15, 0.9, 0.4],
  plastic: [0.7, 0.66, 0.55, 0, 0.7],
};

/** Corners with a normal each, a face's own: the parts are turned and flat, not moulded. */
interface Facets {
  readonly positions: Float32Array;
  readonly normals: Float32Array;
  readonly indices: Uint32Array;
}

const FACE = ['x', 'y', 'z'] as const;

/** Faces whose normals agree share corners; triangles that float32 makes flat are left out. */
function facetsOf({ positions, triangles }: Mesh): Facets {
  const places = new Map<string, number>();
  const outPositions: number[] = [];
  const outNormals: number[] = [];
  const indices: number[] = [];
  for (let i = 0; i < triangles.length; i += 3) {
    const corners = [0, 1, 2].map((k) =>
      FACE.map((_, axis) => Math.fround(positions[3 * triangles[i + k]! + axis]!)),
    ) as [number[], number[], number[]];
    const normal = normalOf(...corners);
    if (!normal) continue;
    for (const corner of corners) {
      const key = `${corner.join()} ${normal.map((value) => value.toFixed(5)).join()}`;
      let place = places.get(key);
      if (place === undefined) {
        place = outPositions.length / 3;
        places.set(key, place);
        outPositions.push(...corner);
        outNormals.push(...normal);
      }
      indices.push(place);
    }
  }
  return {
    positions: Float32Array.from(outPositions),
    normals: Float32Array.from(outNormals),
    indices: Uint32Array.from(indices),
  };
}

function normalOf(a: number[], b: number[], c: number[]): readonly number[] | undefined {
  const u = FACE.map((_, k) => b[k]! - a[k]!);
  const v = FACE.map((_, k) => c[k]! - a[k]!);
  const normal = [
    u[1]! * v[2]! - u[2]! * v[1]!,
    u[2]! * v[0]! - u[0]! * v[2]!,
    u[0]! * v[1]! - u[1]! * v[0]!,
  ];
  const length = Math.sqrt(normal[0]! ** 2 + normal[1]! ** 2 + normal[2]! ** 2);
  return length > 0 ? normal.map((value) => value / length) : undefined;
}

/** Unit quaternion x, y, z, w of a rotation matrix. Source: Shepperd, J. Guidance and Control 1 (1978) 223. */
export function quaternionXyzw(m: Mat3): readonly [number, number, number, number] {
  const trace = m[0] + m[4] + m[8];
  const w = Math.sqrt(Math.max(0, 1 + trace)) / 2;
  const x = Math.sqrt(Math.max(0, 1 + 2 * m[0] - trace)) / 2;
  const y = Math.sqrt(Math.max(0, 1 + 2 * m[4] - trace)) / 2;
  const z = Math.sqrt(Math.max(0, 1 + 2 * m[8] - trace)) / 2;
  const most = Math.max(w, x, y, z);
  if (most === w) return [(m[7] - m[5]) / (4 * w), (m[2] - m[6]) / (4 * w), (m[3] - m[1]) / (4 * w), w];
  if (most === x) return [x, (m[1] + m[3]) / (4 * x), (m[2] + m[6]) / (4 * x), (m[7] - m[5]) / (4 * x)];
  if (most === y) return [(m[1] + m[3]) / (4 * y), y, (m[5] + m[7]) / (4 * y), (m[2] - m[6]) / (4 * y)];
  return [(m[2] + m[6]) / (4 * z), (m[5] + m[7]) / (4 * z), z, (m[3] - m[1]) / (4 * z)];
}

/** Collects what goes into the one buffer, and the lists that point into it. */
class Writer {
  readonly chunks: Uint8Array[] = [];
  readonly views: object[] = [];
  readonly accessors: object[] = [];
  readonly meshes: object[] = [];
  readonly nodes: object[] = [];
  /** Those in use: a file names no others. */
  readonly tints: Tint[] = [];
  private length = 0;

  get byteLength(): number {
    return this.length;
  }

  private addView(data: Float32Array | Uint32Array, target: number): number {
    const bytes = new Uint8Array(data.buffer, data.byteOffset, data.byteLength);
    this.views.push({ buffer: 0, byteOffset: this.length, byteLength: bytes.length, target });
    this.chunks.push(bytes);
    this.length += bytes.length;
    return this.views.length - 1;
  }

  private addVectors(data: Float32Array, hasBounds: boolean): number {
    const bounds = hasBounds ? boundsOf(data) : {};
    const bufferView = this.addView(data, VERTICES);
    this.accessors.push({
      bufferView,
      componentType: FLOAT,
      count: data.length / 3,
      type: 'VEC3',
      ...bounds,
    });
    return this.accessors.length - 1;
  }

  addMesh(node: ModelNode): number {
    const primitives = node.shapes.map(({ mesh, tint }) => {
      const { positions, normals, indices } = facetsOf(mesh);
      const attributes = {
        POSITION: this.addVectors(positions, true),
        NORMAL: this.addVectors(normals, false),
      };
      const bufferView = this.addView(indices, INDICES);
      this.accessors.push({ bufferView, componentType: UNSIGNED_INT, count: indices.length, type: 'SCALAR' });
      return { attributes, indices: this.accessors.length - 1, material: this.materialOf(tint) };
    });
    this.meshes.push({ name: node.name, primitives });
    return this.meshes.length - 1;
  }

  private materialOf(tint: Tint): number {
    if (!this.tints.includes(tint)) this.tints.push(tint);
    return this.tints.indexOf(tint);
  }

  /** Children first: a node names their places. */
  addNode(node: ModelNode): number {
    const children = node.children.map((child) => this.addNode(child));
    const mesh = node.shapes.length > 0 ? { mesh: this.addMesh(node) } : {};
    this.nodes.push({
      name: node.name,
      translation: [...node.place],
      rotation: quaternionXyzw(node.turn),
      ...mesh,
      ...(children.length > 0 ? { children } : {}),
    });
    return this.nodes.length - 1;
  }
}

function boundsOf(data: Float32Array): { readonly min: readonly number[]; readonly max: readonly number[] } {
  const min = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY];
  const max = [Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY, Number.NEGATIVE_INFINITY];
  data.forEach((value, i) => {
    min[i % 3] = Math.min(min[i % 3]!, value);
    max[i % 3] = Math.max(max[i % 3]!, value);
  });
  return { min, max };
}

/**
 * The rig as glTF 2.0 binary (.glb).
 *
 * @param root       body frame, z up, m
 * @param generator  the program and its version, named in the file
 *
 * The top node turns our axes (x forward, y left, z up) into those of glTF (z forward, x left, y up); every
 * node below it keeps the rig's own axes. O(triangles).
 */
export function writeGlb(root: ModelNode, generator: string): Uint8Array {
  const writer = new Writer();
  const top = writer.addNode(root);
  writer.nodes.push({ name: 'Axes', rotation: [-0.5, -0.5, -0.5, 0.5], children: [top] });
  const json = {
    asset: { version: '2.0', generator },
    scene: 0,
    scenes: [{ name: root.name, nodes: [writer.nodes.length - 1] }],
    nodes: writer.nodes,
    meshes: writer.meshes,
    materials: writer.tints.map((name) => {
      const [r, g, b, metallicFactor, roughnessFactor] = SURFACES[name];
      return {
        name,
        pbrMetallicRoughness: { baseColorFactor: [r, g, b, 1], metallicFactor, roughnessFactor },
      };
    }),
    accessors: writer.accessors,
    bufferViews: writer.views,
    buffers: [{ byteLength: writer.byteLength }],
  };
  return packGlb(encodeUtf8(JSON.stringify(json)), writer.chunks, writer.byteLength);
}

function packGlb(json: Uint8Array, chunks: readonly Uint8Array[], binaryLength: number): Uint8Array {
  const jsonLength = 4 * Math.ceil(json.length / 4);
  const bytes = new Uint8Array(12 + 8 + jsonLength + 8 + binaryLength);
  const view = new DataView(bytes.buffer);
  const words = [0x46546c67, 2, bytes.length, jsonLength, 0x4e4f534a];
  words.forEach((word, i) => {
    view.setUint32(4 * i, word, true);
  });
  bytes.fill(0x20, 20, 20 + jsonLength);
  bytes.set(json, 20);
  let at = 20 + jsonLength;
  view.setUint32(at, binaryLength, true);
  view.setUint32(at + 4, 0x004e4942, true);
  at += 8;
  for (const chunk of chunks) {
    bytes.set(chunk, at);
    at += chunk.length;
  }
  return bytes;
}
