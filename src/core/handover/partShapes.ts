/** The rig's parts as closed surfaces, in the frames their mass properties are in. Lengths in m. */
import { partProperties, placeKnee, sectionOutline, type Vec3 } from '../physics';
import type { HullBody, LeggedBody, Wheel, WheelPart } from '../rig';
import {
  ballMesh,
  boxMesh,
  chordError,
  joinMeshes,
  type Mesh,
  moveMesh,
  prismMesh,
  ringMesh,
  sidesFor,
} from './mesh';

/** m, how far a round surface may be off in a file to cut or print from. */
export const FINE = 2e-5;

/** A bolt is given by its mass alone; it is drawn five diameters long. */
const BOLT_SLIMNESS = 5;

/** Radius of the pin with a bolt's volume, m. */
const pinRadius = (volume: number): number => Math.cbrt(volume / (2 * Math.PI * BOLT_SLIMNESS));

function around(mesh: Mesh, count: number, radius: number, height: number): Mesh {
  return joinMeshes(
    Array.from({ length: count }, (_, i) => {
      const angle = (2 * Math.PI * i) / count;
      return moveMesh(mesh, [radius * Math.cos(angle), radius * Math.sin(angle), height]);
    }),
  );
}

/** A part of a wheel about the z axis, in the wheel's own frame; its volume is that of the part. */
export function wheelPartMesh(part: WheelPart, error = FINE): Mesh {
  const ring = (inner: number, outer: number, length: number): Mesh =>
    moveMesh(ringMesh(inner, outer, length, sidesFor(outer, error)), [0, 0, part.offset]);
  switch (part.kind) {
    case 'disc':
      return ring(part.bore, part.radius, part.thickness);
    case 'hub':
      return ring(part.bore, part.radius, part.length);
    case 'rim':
      return ring(part.innerRadius, part.outerRadius, part.width);
    case 'balls': {
      const ball = ballMesh(part.diameter / 2, Math.min(32, sidesFor(part.diameter / 2, error)));
      return around(ball, part.count, part.pitchRadius, part.offset);
    }
    case 'bolts': {
      const radius = pinRadius(partProperties(part).volume / part.count);
      const pin = ringMesh(0, radius, 2 * BOLT_SLIMNESS * radius, Math.min(24, sidesFor(radius, error)));
      return around(pin, part.count, part.pitchRadius, part.offset);
    }
  }
}

/** A whole wheel about the z axis: each part a closed surface of its own, so that touching parts stay parts. */
export const wheelMesh = (wheel: Wheel, error = FINE): Mesh =>
  joinMeshes(wheel.parts.map((part) => wheelPartMesh(part, error)));

/** m, the most by which the round surfaces of a wheel's mesh are off, over its discs, rims and hubs. */
export function wheelChordError(wheel: Wheel, error = FINE): number {
  const offs = wheel.parts.map((part) => {
    if (part.kind === 'balls' || part.kind === 'bolts') return 0;
    const outer = part.kind === 'rim' ? part.outerRadius : part.radius;
    return chordError(outer, sidesFor(outer, error));
  });
  return Math.max(...offs);
}

/** A hull as its section drawn out over its length, deck closed, fin apart; body frame. */
export function hullMesh(body: HullBody): Mesh {
  const shell = prismMesh(sectionOutline(body.section), body.length);
  const fin = finMesh(body);
  return fin ? joinMeshes([shell, fin]) : shell;
}

/** The fin under a hull, body frame; undefined where there is none. */
export function finMesh({ keel }: HullBody): Mesh | undefined {
  if (keel.kind === 'none') return undefined;
  return moveMesh(boxMesh(keel.length, keel.thickness, keel.depth), [0, 0, -keel.depth / 2]);
}

/** Knee of a leg from hip to sole, same frame as they are in. */
export function kneeOf(body: LeggedBody, hip: Vec3, foot: Vec3): Vec3 {
  const out = new Float64Array(3);
  placeKnee(hip, foot, body.thigh.length, body.shank.length, out);
  return [out[0]!, out[1]!, out[2]!];
}

/** How thick a foot is drawn, m: the rig gives none, so it is a plate. */
export const footThickness = ({ foot }: LeggedBody): number => 0.16 * Math.min(foot.length, foot.width * 3);

/** Radius a leg's link is drawn with, m: the rig gives none. */
export const linkRadius = ({ thigh, shank }: LeggedBody): number =>
  0.06 * Math.min(thigh.length, shank.length);
