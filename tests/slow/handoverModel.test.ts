import { validateBytes } from 'gltf-validator';
import { Box3, type Mesh, type Object3D, Vector3 } from 'three';
import { GLTFLoader } from 'three/addons/loaders/GLTFLoader.js';
import { STLLoader } from 'three/addons/loaders/STLLoader.js';
import { describe, expect, it } from 'vitest';
import { compileRig } from '../../src/core/physics';
import { DEMONSTRATIONS, LAYOUTS, layOut, SKIFF, STRIDER } from '../../src/core/rig';
import { expectClose } from '../support/closeTo';
import { fileEnding, handOver } from '../support/madeHandover';

const load = async (bytes: Uint8Array): Promise<Object3D> =>
  (await new GLTFLoader().parseAsync(bytes.slice().buffer, '')).scene;

/** Volume under the positions of a loaded geometry, m^3, as it stands in the scene. */
function volumeOf(mesh: Mesh): number {
  const geometry = mesh.geometry.index ? mesh.geometry.toNonIndexed() : mesh.geometry;
  const positions = geometry.getAttribute('position');
  const [a, b, c] = [new Vector3(), new Vector3(), new Vector3()];
  let six = 0;
  for (let i = 0; i < positions.count; i += 3) {
    for (const [k, corner] of [a, b, c].entries())
      corner.fromBufferAttribute(positions, i + k).applyMatrix4(mesh.matrixWorld);
    six += a.dot(b.cross(c));
  }
  return six / 6;
}

const meshesIn = (node: Object3D): Mesh[] => {
  const meshes: Mesh[] = [];
  node.traverse((inner) => {
    if ('isMesh' in inner) meshes.push(inner as Mesh);
  });
  return meshes;
};

describe('the 3D model', () => {
  it.each(DEMONSTRATIONS.map(({ rig }) => [rig.name, rig] as const))(
    'of %s has no errors for the glTF validator',
    async (_, rig) => {
      const report = await validateBytes(fileEnding(handOver(rig), '.glb').bytes);
      const messages = report.issues.messages.map(
        ({ code, message, pointer }) => `${code} ${message} ${pointer ?? ''}`,
      );
      expect(messages).toEqual([]);
      expect(report.info.version).toBe('2.0');
    },
  );

  it.each(DEMONSTRATIONS.map(({ rig }) => [rig.name, rig] as const))(
    'of %s is loaded by three with wheels where they are, of their own volume',
    async (_, rig) => {
      const scene = await load(fileEnding(handOver(rig), '.glb').bytes);
      scene.updateMatrixWorld(true);
      const outcome = compileRig(rig);
      if (outcome.kind === 'refused') throw new Error('refused');
      rig.array.gyros.forEach((gyro, i) => {
        const wheel = scene.getObjectByName(`${gyro.name} wheel`.replaceAll(' ', '_'));
        expect(wheel, gyro.name).toBeDefined();
        const volume = meshesIn(wheel!).reduce((sum, mesh) => sum + volumeOf(mesh), 0);
        expectClose(volume, outcome.compiled.wheels[i]!.volume, { rel: 1e-6 }); // measured 2.6e-8: float32
        // Our x forward, y left, z up as glTF has them: z forward, x left, y up.
        const [x, y, z] = gyro.position;
        expectClose(wheel!.getWorldPosition(new Vector3()).toArray(), [y, z, x], { abs: 1e-9 }); // measured 0
        const axis = outcome.compiled.star.gyros[i]!.spinAxis;
        const spin = new Vector3(0, 0, 1).transformDirection(wheel!.matrixWorld);
        expectClose(spin.toArray(), [axis[1], axis[2], axis[0]], { abs: 1e-9 }); // measured 2.2e-16
      });
    },
  );

  it.each(LAYOUTS)('of a %s has no errors for the glTF validator either', async (layout) => {
    const gyros = layOut(layout, SKIFF.array.gyros[0]!, { centre: [0, 0, 0.5], spacing: 0.6, skew: 0.95 });
    const report = await validateBytes(fileEnding(handOver({ ...SKIFF, array: { gyros } }), '.glb').bytes);
    expect(report.issues.messages).toEqual([]);
  });

  it('stands on its feet, as tall as the rig', async () => {
    const box = new Box3().setFromObject(await load(fileEnding(handOver(STRIDER), '.glb').bytes));
    expectClose(box.min.y, 0, { abs: 1e-6 }); // measured 0
    expect(box.max.y).toBeGreaterThan(STRIDER.array.gyros[0]!.position[2]);
  });
});

describe('STL files', () => {
  it('are loaded by three in millimetres, with the volume of the parts', () => {
    const handover = handOver(SKIFF);
    const outcome = compileRig(SKIFF);
    if (outcome.kind === 'refused') throw new Error('refused');
    const stl = handover.files.filter(({ name }) => name.endsWith('.stl') && !name.endsWith('-section.stl'));
    expect(stl).toHaveLength(1);
    const geometry = new STLLoader().parse(stl[0]!.bytes.slice().buffer);
    const positions = geometry.getAttribute('position');
    let six = 0;
    const [a, b, c] = [new Vector3(), new Vector3(), new Vector3()];
    for (let i = 0; i < positions.count; i += 3) {
      for (const [k, corner] of [a, b, c].entries()) corner.fromBufferAttribute(positions, i + k);
      six += a.dot(b.cross(c));
    }
    expectClose(six / 6, outcome.compiled.wheels[0]!.volume * 1e9, { rel: 1e-6 }); // measured 3.1e-9
    geometry.computeBoundingBox();
    // Round within the 0.020 mm that the file says.
    expectClose(geometry.boundingBox!.max.x, 1000 * outcome.compiled.wheels[0]!.outerRadius, { abs: 0.0201 }); // measured 0.020
  });
});
