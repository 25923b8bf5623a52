/** The rig at rest as a tree of named shapes: what the 3D model and the rig's picture are made of. */
import {
  add3,
  cross3,
  dot3,
  hipPositions,
  legLabels,
  type Mat3,
  outerRadiusOf,
  restFeet,
  rotateBack3,
  scale3,
  stanceWidthOf,
  subtract3,
  unit3,
  type Vec3,
} from '../physics';
import type { Gyro, InlineBody, LeggedBody, Rig } from '../rig';
import { boxMesh, type Mesh, moveMesh, placeMesh, ringMesh, rodMesh, sidesFor, turnZTo } from './mesh';
import { finMesh, footThickness, hullMesh, kneeOf, linkRadius, wheelPartMesh } from './partShapes';

export type Tint = 'body' | 'leg' | 'keel' | 'tyre' | 'payload' | 'gimbal' | 'metal' | 'heavy' | 'plastic';

export interface ModelShape {
  readonly mesh: Mesh;
  readonly tint: Tint;
}

/** A named frame with shapes in it. Turn and place are from its parent, at rest. */
export interface ModelNode {
  readonly name: string;
  readonly place: Vec3;
  readonly turn: Mat3;
  readonly shapes: readonly ModelShape[];
  readonly children: readonly ModelNode[];
}

export const NO_TURN: Mat3 = [1, 0, 0, 0, 1, 0, 0, 0, 1];
const ORIGIN: Vec3 = [0, 0, 0];

const node = (
  name: string,
  shapes: readonly ModelShape[],
  children: readonly ModelNode[] = [],
  place: Vec3 = ORIGIN,
  turn: Mat3 = NO_TURN,
): ModelNode => ({ name, place, turn, shapes, children });

const columns = (x: Vec3, y: Vec3, z: Vec3): Mat3 => [x[0], y[0], z[0], x[1], y[1], z[1], x[2], y[2], z[2]];

/** A gyro's axes in the body frame: along the gimbal axis, along the spin as near as it comes across it, and the third. */
export function gyroAxes(gyro: Gyro): { readonly gimbal: Vec3; readonly spin: Vec3; readonly third: Vec3 } {
  const gimbal = unit3(gyro.gimbalAxis);
  const spinAxis = unit3(gyro.spinAxis);
  const rest = subtract3(spinAxis, scale3(gimbal, dot3(spinAxis, gimbal)));
  const across: Vec3 =
    dot3(rest, rest) > 1e-12
      ? unit3(rest)
      : unit3(cross3(gimbal, Math.abs(gimbal[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0]));
  return { gimbal, spin: across, third: cross3(gimbal, across) };
}

const wheelTint = (material: string): Tint =>
  material.includes('printed') ? 'plastic' : material.startsWith('tungsten') ? 'heavy' : 'metal';

/** The frame about a wheel, in gimbal axes: z along the gimbal axis, x along the spin axis at rest. */
function frameShape(gyro: Gyro): readonly ModelShape[] {
  const wheel = Math.max(...gyro.wheel.parts.map(outerRadiusOf));
  const inside = 1.1 * wheel;
  const bar = 0.14 * wheel;
  const reach = 2 * (inside + bar);
  const shape = (mesh: Mesh, by: Vec3): ModelShape => ({ mesh: moveMesh(mesh, by), tint: 'gimbal' });
  const middle = inside + bar / 2;
  return [
    shape(boxMesh(1.6 * bar, reach, bar), [0, 0, middle]),
    shape(boxMesh(1.6 * bar, reach, bar), [0, 0, -middle]),
    shape(boxMesh(1.6 * bar, bar, 2 * inside), [0, middle, 0]),
    shape(boxMesh(1.6 * bar, bar, 2 * inside), [0, -middle, 0]),
    shape(ringMesh(0, 0.35 * bar, 0.6 * wheel, 24), [0, 0, inside + bar + 0.3 * wheel]),
    shape(ringMesh(0, 0.35 * bar, 0.6 * wheel, 24), [0, 0, -inside - bar - 0.3 * wheel]),
  ];
}

function gyroNode(gyro: Gyro, error: number): ModelNode {
  const { gimbal, spin, third } = gyroAxes(gyro);
  const turn = columns(spin, third, gimbal);
  const axis = rotateBack3(turn, unit3(gyro.spinAxis));
  const shapes = gyro.wheel.parts.map((part) => ({
    mesh: wheelPartMesh(part, error),
    tint: part.kind === 'bolts' ? ('metal' as const) : wheelTint(part.material),
  }));
  const wheel = node(`${gyro.name} wheel`, shapes, [], ORIGIN, turnZTo(axis));
  return node(`${gyro.name} gimbal`, frameShape(gyro), [wheel], gyro.position, turn);
}

function leggedNodes(rig: Rig, body: LeggedBody): readonly ModelNode[] {
  const { torso, foot } = body;
  const thick = footThickness(body);
  const radius = linkRadius(body);
  const feet = restFeet(body, stanceWidthOf(rig, body));
  const labels = legLabels(body.legs);
  const legs = hipPositions(body).map((hip, i) => {
    const sole = feet[i] as Vec3;
    const knee = kneeOf(body, hip, sole);
    const shin = unit3(subtract3(knee, sole));
    // The drawn shank ends inside the foot, its lower edge above the ground.
    const height = thick / 2 + radius * Math.sqrt(Math.max(0, 1 - shin[2] * shin[2]));
    const ankle = add3(sole, scale3(shin, height / shin[2]));
    const from = (mesh: Mesh, origin: Vec3): ModelShape => ({
      mesh: moveMesh(mesh, scale3(origin, -1)),
      tint: 'leg',
    });
    const plate = moveMesh(boxMesh(foot.length, foot.width, thick), [sole[0], sole[1], thick / 2]);
    const footNode = node(`${labels[i]} foot`, [from(plate, sole)], [], subtract3(sole, knee));
    const shankShape = from(rodMesh(knee, ankle, radius, 24), knee);
    const shank = node(`${labels[i]} shank`, [shankShape], [footNode], subtract3(knee, hip));
    return node(`${labels[i]} thigh`, [from(rodMesh(hip, knee, 1.2 * radius, 24), hip)], [shank], hip);
  });
  const trunk: ModelShape = {
    mesh: moveMesh(boxMesh(torso.length, torso.width, torso.height), [0, 0, body.hips.height + torso.rise]),
    tint: 'body',
  };
  return [node('Torso', [trunk]), ...legs];
}

function inlineNodes(body: InlineBody): readonly ModelNode[] {
  const { frame, tyre, wheelbase } = body;
  const trunk = moveMesh(boxMesh(frame.length, frame.width, frame.height), [0, 0, frame.centreHeight]);
  const crown = Math.min(tyre.crownRadius, 0.45 * tyre.radius) || 0.05 * tyre.radius;
  const sides = sidesFor(tyre.radius, 1e-4);
  const across = turnZTo([0, 1, 0]);
  const road = (name: string, x: number): ModelNode => {
    const mesh = placeMesh(ringMesh(tyre.radius - 2 * crown, tyre.radius, 2 * crown, sides), across, ORIGIN);
    return node(name, [{ mesh, tint: 'tyre' }], [], [x, 0, tyre.radius]);
  };
  return [
    node('Frame', [{ mesh: trunk, tint: 'body' }]),
    road('Front road wheel', wheelbase / 2),
    road('Rear road wheel', -wheelbase / 2),
  ];
}

function bodyNodes(rig: Rig): readonly ModelNode[] {
  const { body } = rig;
  switch (body.kind) {
    case 'legged':
      return leggedNodes(rig, body);
    case 'inline':
      return inlineNodes(body);
    case 'hull': {
      const fin = finMesh(body);
      const shell = hullMesh({ ...body, keel: { kind: 'none' } });
      const hull = node('Hull', [{ mesh: shell, tint: 'body' }]);
      return fin ? [hull, node('Keel', [{ mesh: fin, tint: 'keel' }])] : [hull];
    }
  }
}

/**
 * The whole rig at rest: body frame, x forward, y left, z up; lengths in m.
 *
 * @param error  m, how far round surfaces of wheels may be off
 *
 * What the rig gives no shape for (feet, legs, gimbal frames) is drawn in proportion to what it does give.
 */
export function modelRig(rig: Rig, error = 1e-4): ModelNode {
  const cargo = rig.payloads.map((payload) =>
    node(payload.name, [{ mesh: boxMesh(...payload.size), tint: 'payload' }], [], payload.position),
  );
  const gyros = rig.array.gyros.map((gyro) => gyroNode(gyro, error));
  return node(rig.name, [], [...bodyNodes(rig), ...cargo, ...gyros]);
}
