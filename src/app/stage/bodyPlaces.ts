/** Where the parts of a body stand at rest, in the body frame (x forward, y left, z up; m). */
import type { Body, InlineBody, LeggedBody, Rig, Section, WheelPart } from '../../core/rig';

export type Point = readonly [x: number, y: number, z: number];

export interface Box {
  readonly min: Point;
  readonly max: Point;
}

/** Distance between left and right soles: the gait's stance width, or the hips' when it only stands. */
export const stanceWidth = (rig: Rig): number =>
  rig.jobs.gait.kind === 'pattern'
    ? rig.jobs.gait.stanceWidth
    : rig.body.kind === 'legged'
      ? rig.body.hips.width
      : 0;

export const torsoCentre = (body: LeggedBody): Point => [0, 0, body.hips.height + body.torso.rise];

/** How thick a foot is drawn, m: the document gives it none, so it is drawn as a plate. */
export const footThickness = (body: LeggedBody): number =>
  Math.min(
    0.16 * Math.max(body.foot.length, body.foot.width),
    0.5 * Math.min(body.foot.length, body.foot.width),
  );

/** Centres of the two road wheels, front first. */
export const roadWheelPlaces = (body: InlineBody): readonly Point[] => [
  [body.wheelbase / 2, 0, body.tyre.radius],
  [-body.wheelbase / 2, 0, body.tyre.radius],
];

const BILGE_STEPS = 10;

/**
 * Outline of a hull's section as drawn, y and z from the left deck edge down round the keel line to the right
 * deck edge. Open at the top.
 */
export function sectionOutline(section: Section): readonly (readonly [y: number, z: number])[] {
  const half = section.beam / 2;
  const left: [number, number][] = [[half, section.depth]];
  if (section.kind === 'deadrise') {
    const chine = Math.min(section.depth, half * Math.tan(section.deadrise));
    left.push([half, chine], [0, 0]);
  } else {
    const radius = Math.min(section.bilgeRadius, half, section.depth);
    if (radius > 0) {
      for (let i = 0; i <= BILGE_STEPS; i++) {
        const angle = (Math.PI / 2) * (i / BILGE_STEPS);
        left.push([half - radius + radius * Math.cos(angle), radius - radius * Math.sin(angle)]);
      }
    } else left.push([half, 0]);
    left.push([0, 0]);
  }
  const right = left
    .slice(0, -1)
    .reverse()
    .map(([y, z]): [number, number] => [-y, z]);
  return [...left, ...right];
}

/** Greatest radius and the two ends along the spin axis of a wheel, m, from the middle of its stack. */
export function wheelExtent(parts: readonly WheelPart[]): { radius: number; below: number; above: number } {
  let radius = 0.001;
  let below = 0;
  let above = 0;
  for (const part of parts) {
    const [r, half] = partExtent(part);
    radius = Math.max(radius, r);
    below = Math.min(below, part.offset - half);
    above = Math.max(above, part.offset + half);
  }
  return { radius, below, above };
}

/** Outer radius and half the length of one part of a wheel, m. */
function partExtent(part: WheelPart): readonly [radius: number, half: number] {
  switch (part.kind) {
    case 'disc':
      return [part.radius, part.thickness / 2];
    case 'rim':
      return [part.outerRadius, part.width / 2];
    case 'hub':
      return [part.radius, part.length / 2];
    case 'balls':
      return [part.pitchRadius + part.diameter / 2, part.diameter / 2];
    case 'bolts': {
      const shank = boltRadius(part.mass);
      return [part.pitchRadius + 1.7 * shank, BOLT_ASPECT * shank];
    }
  }
}

/** Bolts are drawn as steel shanks this many radii long to either side. */
const BOLT_ASPECT = 2.5;
const STEEL_DENSITY = 7850;

/** Radius of a steel bolt of a mass, m, for the drawn proportions (length is 2 x BOLT_ASPECT radii). */
export const boltRadius = (mass: number): number =>
  Math.cbrt(mass / (STEEL_DENSITY * Math.PI * 2 * BOLT_ASPECT));

/** Box about a body alone. */
function bodyBox(body: Body, stance: number): Box {
  switch (body.kind) {
    case 'legged': {
      const [, , z] = torsoCentre(body);
      const hipsX = ((body.legs / 2 - 1) * body.hips.pitch) / 2;
      const x = Math.max(body.torso.length / 2, hipsX + body.foot.length / 2);
      const y = Math.max(body.torso.width / 2, (Math.max(stance, body.hips.width) + body.foot.width) / 2);
      const top = Math.max(z + body.torso.height / 2, body.hips.height);
      return { min: [-x, -y, 0], max: [x, y, top] };
    }
    case 'hull': {
      const keel = body.keel.kind === 'fin' ? body.keel.depth : 0;
      const half = body.section.beam / 2;
      return { min: [-body.length / 2, -half, -keel], max: [body.length / 2, half, body.section.depth] };
    }
    case 'inline': {
      const x = Math.max(body.wheelbase / 2 + body.tyre.radius, body.frame.length / 2);
      const y = Math.max(body.frame.width / 2, body.tyre.crownRadius);
      const top = Math.max(2 * body.tyre.radius, body.frame.centreHeight + body.frame.height / 2);
      return { min: [-x, -y, 0], max: [x, y, top] };
    }
  }
}

const grown = (box: Box, min: Point, max: Point): Box => ({
  min: [Math.min(box.min[0], min[0]), Math.min(box.min[1], min[1]), Math.min(box.min[2], min[2])],
  max: [Math.max(box.max[0], max[0]), Math.max(box.max[1], max[1]), Math.max(box.max[2], max[2])],
});

/** Box about everything that is drawn of a rig at rest, body frame. */
export function rigBox(rig: Rig): Box {
  let box = bodyBox(rig.body, stanceWidth(rig));
  for (const { position: p, size: s } of rig.payloads) {
    box = grown(
      box,
      [p[0] - s[0] / 2, p[1] - s[1] / 2, p[2] - s[2] / 2],
      [p[0] + s[0] / 2, p[1] + s[1] / 2, p[2] + s[2] / 2],
    );
  }
  for (const { position: p, wheel } of rig.array.gyros) {
    const { radius } = wheelExtent(wheel.parts);
    // The frame, its bearings and the protractor stand out by about half a radius.
    const r = 1.5 * radius;
    box = grown(box, [p[0] - r, p[1] - r, p[2] - r], [p[0] + r, p[1] + r, p[2] + r]);
  }
  return box;
}

/** Longest diagonal of a box, m: the size that arrows, handles and grid are scaled by. */
export const boxDiagonal = (box: Box): number =>
  Math.hypot(box.max[0] - box.min[0], box.max[1] - box.min[1], box.max[2] - box.min[2]);

export const boxCentre = (box: Box): Point => [
  (box.min[0] + box.max[0]) / 2,
  (box.min[1] + box.max[1]) / 2,
  (box.min[2] + box.max[2]) / 2,
];
