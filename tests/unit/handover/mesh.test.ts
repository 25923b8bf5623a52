import { describe, expect, it } from 'vitest';
import {
  ballMesh,
  boxMesh,
  chordError,
  type Mesh,
  meshVolume,
  ringMesh,
  rodMesh,
  sidesFor,
} from '../../../src/core/handover/mesh';
import {
  finMesh,
  hullMesh,
  wheelChordError,
  wheelMesh,
  wheelPartMesh,
} from '../../../src/core/handover/partShapes';
import { writeStl } from '../../../src/core/handover/stl';
import { wheelProperties } from '../../../src/core/physics';
import { DEMONSTRATIONS, type HullBody, SKIFF, type Wheel } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

/** Every edge runs once each way: nothing open, nothing turned inside out. */
function expectClosed({ triangles }: Mesh): void {
  const edges = new Map<string, number>();
  for (let i = 0; i < triangles.length; i += 3) {
    for (const [a, b] of [
      [0, 1],
      [1, 2],
      [2, 0],
    ] as const) {
      const [from, to] = [triangles[i + a]!, triangles[i + b]!];
      const key = from < to ? `${from} ${to}` : `${to} ${from}`;
      edges.set(key, (edges.get(key) ?? 0) + (from < to ? 1 : -1));
      const seen = `${from}>${to}`;
      expect(edges.has(seen), `edge ${seen} twice the same way`).toBe(false);
      edges.set(seen, 0);
    }
  }
  for (const [edge, sum] of edges) expect(sum, `edge ${edge}`).toBe(0);
}

const STACK: Wheel = {
  name: 'Of everything',
  balanceGrade: 6.3,
  parts: [
    { kind: 'hub', radius: 0.012, bore: 0.004, length: 0.03, material: 'steel S235', offset: 0.002 },
    { kind: 'disc', radius: 0.04, bore: 0.012, thickness: 0.004, material: 'aluminium 6061-T6', offset: 0 },
    { kind: 'disc', radius: 0.02, bore: 0, thickness: 0.002, material: 'aluminium 6061-T6', offset: 0.02 },
    { kind: 'rim', outerRadius: 0.055, innerRadius: 0.04, width: 0.02, material: 'brass C36000', offset: 0 },
    { kind: 'balls', count: 24, diameter: 0.006, pitchRadius: 0.047, material: 'steel 52100', offset: 0 },
    { kind: 'bolts', count: 6, mass: 0.002, pitchRadius: 0.02, offset: 0 },
  ],
};

/** Volume of a binary STL as any reader would add it up, mm^3. */
function stlVolume(bytes: Uint8Array): number {
  const view = new DataView(bytes.buffer);
  const count = view.getUint32(80, true);
  expect(bytes.length).toBe(84 + 50 * count);
  let six = 0;
  for (let i = 0; i < count; i++) {
    const at = (k: number): number => view.getFloat32(84 + 50 * i + 12 + 4 * k, true);
    six +=
      at(0) * (at(4) * at(8) - at(5) * at(7)) +
      at(1) * (at(5) * at(6) - at(3) * at(8)) +
      at(2) * (at(3) * at(7) - at(4) * at(6));
  }
  return six / 6;
}

const volumeOf = (wheel: Wheel): number => {
  const outcome = wheelProperties(wheel.parts);
  if (outcome.kind === 'refused') throw new Error(outcome.faults.map(({ field }) => field).join());
  return outcome.wheel.volume;
};

describe('surfaces', () => {
  it('are closed, and hold the volume of what they stand for', () => {
    const cases: readonly (readonly [Mesh, number])[] = [
      [boxMesh(0.2, 0.3, 0.5), 0.03],
      [ringMesh(0.02, 0.05, 0.01, 60), Math.PI * (0.05 ** 2 - 0.02 ** 2) * 0.01],
      [ringMesh(0, 0.05, 0.01, 17), Math.PI * 0.05 ** 2 * 0.01],
      [ballMesh(0.003, 18), (4 / 3) * Math.PI * 0.003 ** 3],
      [rodMesh([0.1, 0.2, 0.3], [0.1, 0.1, -0.2], 0.01, 20), Math.PI * 1e-4 * Math.hypot(0.1, 0.5)],
      [wheelMesh(STACK), volumeOf(STACK)],
    ];
    for (const [mesh, volume] of cases) {
      expectClosed(mesh);
      expectClose(meshVolume(mesh), volume, { rel: 1e-12 }); // measured 1.5e-14
    }
  });

  it('keep round parts as near to round as they say', () => {
    for (const [radius, error] of [
      [0.05, 2e-5],
      [0.5, 2e-5],
      [0.01, 1e-4],
    ] as const) {
      const sides = sidesFor(radius, error);
      const { positions } = ringMesh(0, radius, 0.01, sides);
      let most = 0;
      for (let i = 0; i < sides; i++) {
        const [x0, y0] = [positions[3 * i]!, positions[3 * i + 1]!];
        const next = 3 * ((i + 1) % sides);
        const [x1, y1] = [positions[next]!, positions[next + 1]!];
        most = Math.max(most, Math.abs(Math.hypot(x0, y0) - radius));
        most = Math.max(most, Math.abs(Math.hypot((x0 + x1) / 2, (y0 + y1) / 2) - radius));
      }
      expectClose(most, chordError(radius, sides), { rel: 1e-9 }); // measured 5.6e-12
      expect(most).toBeLessThanOrEqual(error * 1.02); // the bound is the first term of a series: measured 1.005 at 16 sides
    }
  });

  it('of every wheel part has that part’s own volume', () => {
    for (const part of STACK.parts) {
      const alone = part.kind === 'balls' || part.kind === 'bolts' ? [STACK.parts[3]!, part] : [part];
      const volume =
        volumeOf({ ...STACK, parts: alone }) -
        (alone.length > 1 ? volumeOf({ ...STACK, parts: [alone[0]!] }) : 0);
      expectClose(meshVolume(wheelPartMesh(part)), volume, { rel: 1e-12 }); // measured 1.2e-14
    }
  });
});

describe('STL', () => {
  it('of every demonstration wheel holds its volume, in millimetres', () => {
    for (const { wheel } of [...DEMONSTRATIONS.flatMap(({ rig }) => rig.array.gyros), { wheel: STACK }]) {
      const bytes = writeStl(wheelMesh(wheel), 'wheel');
      expectClose(stlVolume(bytes), volumeOf(wheel) * 1e9, { rel: 1e-6 }); // measured 2.0e-8: the corners are float32
      expect(wheelChordError(wheel)).toBeLessThanOrEqual(2.04e-5); // measured 2.0e-5 m
    }
  });

  it('of a hull holds its section times its length, and the fin', () => {
    const body = SKIFF.body as HullBody;
    const fin = finMesh(body);
    const { section } = body;
    // Section by closed form: a box less what the V or the two bilge corners leave out.
    const left =
      section.kind === 'deadrise'
        ? (section.beam / 2) ** 2 * Math.tan(section.deadrise)
        : 2 * (1 - Math.PI / 4) * section.bilgeRadius ** 2;
    const volume = (section.beam * section.depth - left) * body.length + (fin ? meshVolume(fin) : 0);
    expectClosed(hullMesh(body));
    expectClose(stlVolume(writeStl(hullMesh(body), 'hull')), volume * 1e9, { rel: 2e-5 }); // measured 6.2e-6: bilge chords
  });

  it('has unit normals that agree with the order of the corners, and does not pass for text', () => {
    const bytes = writeStl(boxMesh(0.1, 0.2, 0.3), 'solid ünits');
    const view = new DataView(bytes.buffer);
    expect(String.fromCharCode(...bytes.slice(0, 5))).not.toBe('solid');
    const normals = Array.from({ length: 12 }, (_, i) =>
      [0, 1, 2].map((k) => view.getFloat32(84 + 50 * i + 4 * k, true)),
    );
    for (const normal of normals) expectClose(Math.hypot(...normal), 1, { abs: 1e-6 }); // measured 0
    for (const axis of [0, 1, 2]) expect(normals.reduce((sum, normal) => sum + normal[axis]!, 0)).toBe(0);
  });
});
