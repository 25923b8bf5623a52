/** What of a rig can touch the world: feet, torso, hull, tyres, wheels and payloads as simple solids. */
import { Box, ConvexPolyhedron, type Shape, Sphere, Vec3 } from 'cannon-es';
import { type CompiledRig, sectionOutline } from '../core/physics';
import type { HullBody, LeggedBody, Rig } from '../core/rig';
import type { RigShape } from './rigBody';

/** m: a sole is drawn and met as a plate of this thickness at most. */
const SOLE = 0.01;
/** m: what hangs lower than this above a pinned rig's pivot is left out, so that the pin alone holds it. */
const CLEAR = 0.02;

const box = (x: number, y: number, z: number): Box => new Box(new Vec3(x / 2, y / 2, z / 2));

/** Whether the rig is held at a line or a point of the ground instead of standing on shapes of its own. */
export const isPinned = ({ footing }: Rig): boolean => footing.kind === 'edge' || footing.kind === 'point';

/**
 * Solids of a rig, body frame. A rig pinned to the ground has none near its pivot; one on a round bottom rolls on
 * spheres of that radius, which meet a flat ground as the cylinder does.
 */
export function rigShapes(compiled: CompiledRig): readonly RigShape[] {
  const { rig } = compiled;
  const shapes = [...bodyShapes(rig), ...fittings(compiled)];
  switch (rig.footing.kind) {
    case 'firm':
    case 'float':
      return shapes;
    case 'rocker': {
      const { radius } = rig.footing;
      const apart = halfLengthOf(rig);
      const rounds = [apart, -apart].map(
        (x): RigShape => ({ shape: new Sphere(radius), place: [x, 0, radius] }),
      );
      return [...shapes.filter((shape) => isClear(shape, 0)), ...rounds];
    }
    case 'edge':
    case 'point': {
      const pivot = rig.footing.kind === 'point' ? rig.footing.position[2] : 0;
      return shapes.filter((shape) => isClear(shape, pivot));
    }
  }
}

function isClear({ shape, place, foot }: RigShape, pivot: number): boolean {
  if (foot !== undefined) return false;
  const low =
    shape instanceof Box
      ? shape.halfExtents.z
      : shape instanceof ConvexPolyhedron
        ? Math.max(...shape.vertices.map(({ z }) => -z))
        : shape.boundingSphereRadius;
  return place[2] - low > pivot + CLEAR;
}

function halfLengthOf({ body }: Rig): number {
  switch (body.kind) {
    case 'legged':
      return body.torso.length / 2;
    case 'hull':
      return body.length / 2;
    case 'inline':
      return body.wheelbase / 2;
  }
}

function bodyShapes({ body }: Rig): readonly RigShape[] {
  switch (body.kind) {
    case 'legged':
      return legged(body);
    case 'hull':
      return hull(body);
    case 'inline': {
      const { frame, tyre, wheelbase } = body;
      const crown = Math.max(tyre.crownRadius, 0.002);
      return [
        { shape: box(frame.length, frame.width, frame.height), place: [0, 0, frame.centreHeight] },
        { shape: new Sphere(crown), place: [wheelbase / 2, 0, crown] },
        { shape: new Sphere(crown), place: [-wheelbase / 2, 0, crown] },
      ];
    }
  }
}

function legged(body: LeggedBody): readonly RigShape[] {
  const { torso, foot, legs } = body;
  const thickness = Math.min(SOLE, foot.width, foot.length);
  return [
    {
      shape: box(torso.length, torso.width, torso.height),
      place: [0, 0, body.hips.height + torso.rise],
    },
    ...Array.from(
      { length: legs },
      (_, leg): RigShape => ({
        shape: box(foot.length, foot.width, thickness),
        place: [0, 0, thickness / 2],
        foot: leg,
      }),
    ),
  ];
}

/** The hull as the prism of its section, keel line at z = 0, and its fin below. */
function hull(body: HullBody): readonly RigShape[] {
  const prism: RigShape = { shape: prismOf(sectionOutline(body.section), body.length), place: [0, 0, 0] };
  if (body.keel.kind === 'none') return [prism];
  const { depth, length, thickness } = body.keel;
  return [prism, { shape: box(length, thickness, depth), place: [0, 0, -depth / 2] }];
}

/** A convex section drawn out along x: `outline` in y, z, either way round. */
function prismOf(outline: readonly (readonly [number, number])[], length: number): Shape {
  const ring = convexRing(outline);
  const n = ring.length;
  const vertices = [length / 2, -length / 2].flatMap((x) => ring.map(([y, z]) => new Vec3(x, y, z)));
  const sides = ring.map((_, k) => {
    const l = (k + 1) % n;
    return [k, n + k, n + l, l];
  });
  const front = ring.map((_, k) => k);
  const back = ring.map((_, k) => 2 * n - 1 - k);
  return new ConvexPolyhedron({ vertices, faces: [front, back, ...sides] });
}

/** Convex hull, anticlockwise seen from ahead (y to the right hand of z up). Source: Andrew's monotone chain. */
function convexRing(points: readonly (readonly [number, number])[]): readonly (readonly [number, number])[] {
  const sorted = [...points].sort((a, b) => a[0] - b[0] || a[1] - b[1]);
  const half = (list: typeof sorted): (readonly [number, number])[] => {
    const chain: (readonly [number, number])[] = [];
    for (const p of list) {
      for (; chain.length > 1; chain.pop()) {
        const a = chain[chain.length - 2];
        const b = chain[chain.length - 1];
        if ((b[0] - a[0]) * (p[1] - a[1]) - (b[1] - a[1]) * (p[0] - a[0]) > 1e-12) break;
      }
      chain.push(p);
    }
    chain.pop();
    return chain;
  };
  return [...half(sorted), ...half(sorted.reverse())];
}

/** Payloads as boxes; a gyro as the ball its wheel and gimbal sweep. */
function fittings({ rig, wheels }: CompiledRig): readonly RigShape[] {
  return [
    ...rig.payloads.map(({ size, position }): RigShape => ({ shape: box(...size), place: position })),
    ...rig.array.gyros.map(
      (gyro, i): RigShape => ({
        shape: new Sphere(wheels[i]?.outerRadius ?? 0.01),
        place: gyro.position,
      }),
    ),
  ];
}

/** m: how far the lowest point of the rig at rest is below the body's origin. */
export function depthBelowOrigin({ rig }: CompiledRig): number {
  return rig.body.kind === 'hull' && rig.body.keel.kind === 'fin' && rig.footing.kind !== 'rocker'
    ? rig.body.keel.depth
    : 0;
}
