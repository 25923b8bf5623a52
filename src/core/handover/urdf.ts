/** The rig as a robot description. Source: the URDF XML specification (ROS wiki, urdf/XML), from memory. */
import {
  addSymmetric,
  type CompiledRig,
  carrierPieces,
  combineBodies,
  cross3,
  dot3,
  hipPositions,
  legLabels,
  legPieces,
  norm3,
  outerRadiusOf,
  outerSymmetric,
  type RigidBody,
  restFeet,
  STANDARD_GRAVITY,
  scale3,
  stanceWidthOf,
  subtract3,
  unit3,
  type Vec3,
} from '../physics';
import type { Gyro, LeggedBody, Rig } from '../rig';
import { footThickness, kneeOf, linkRadius } from './partShapes';
import { escapeXml, identifierFor, makeUnique } from './text';
import { box, cylinder, joint, link, type Visual } from './urdfXml';

const from = (body: RigidBody, origin: Vec3): RigidBody => ({ ...body, com: subtract3(body.com, origin) });

/** Links and joints of one leg. Its joints bend in the leg's own plane. */
function legParts(rig: Rig, body: LeggedBody, weight: number, leg: number): readonly string[] {
  const hip = hipPositions(body)[leg] as Vec3;
  const sole = restFeet(body, stanceWidthOf(rig, body))[leg] as Vec3;
  const label = legLabels(body.legs)[leg] as string;
  const name = identifierFor(label, 'leg');
  const knee = kneeOf(body, hip, sole);
  const [thigh, shank, foot] = legPieces(body, hip, sole, label) as unknown as [
    RigidBody,
    RigidBody,
    RigidBody,
  ];
  const t = unit3(subtract3(knee, hip));
  const s = unit3(subtract3(sole, knee));
  const normal = cross3(t, s);
  const axis: Vec3 = norm3(normal) > 1e-9 ? unit3(normal) : [0, 1, 0];
  const bend = Math.atan2(norm3(normal), dot3(t, s));
  const rod = (length: number, along: Vec3): Visual =>
    cylinder(linkRadius(body), length, scale3(along, length / 2), along);
  const limit = (lower: number, upper: number, length: number) => ({
    lower,
    upper,
    effort: weight * length,
    velocity: Math.sqrt((2 * STANDARD_GRAVITY) / length),
  });
  const quarter = Math.PI / 2;
  const thick = footThickness(body);
  return [
    link(`${name}_thigh`, from(thigh, hip), [rod(body.thigh.length, t)]),
    link(`${name}_shank`, from(shank, knee), [rod(body.shank.length, s)]),
    link(`${name}_foot`, from(foot, sole), [
      box(body.foot.length, body.foot.width, thick, [0, 0, thick / 2]),
    ]),
    joint({
      name: `${name}_hip`,
      kind: 'revolute',
      parent: 'body',
      child: `${name}_thigh`,
      at: hip,
      axis,
      limit: limit(-quarter, quarter, body.thigh.length),
    }),
    joint({
      name: `${name}_knee`,
      kind: 'revolute',
      parent: `${name}_thigh`,
      child: `${name}_shank`,
      at: subtract3(knee, hip),
      axis,
      limit: limit(-bend, Math.PI - bend, body.shank.length),
    }),
    joint({
      name: `${name}_ankle`,
      kind: 'revolute',
      parent: `${name}_shank`,
      child: `${name}_foot`,
      at: subtract3(sole, knee),
      axis,
      limit: limit(-quarter, quarter, body.foot.length),
    }),
  ];
}

const LEG_NOTE =
  'The rig names no leg drives. Effort of a leg joint is the weight of the rig times the length of the link it moves, velocity the rate at which that link would pass the vertical when let go from level: put in those of your own drives. Hips and ankles are given a quarter turn each way; knees go from straight to folded. Joints bend in the plane of the leg.';

function bodyLink(rig: Rig): string {
  const { body } = rig;
  const cargo = rig.payloads.map(({ size, position }) => box(...size, position));
  switch (body.kind) {
    case 'legged': {
      const pieces = carrierPieces(rig).filter(({ group }) => group !== 'leg');
      const { torso } = body;
      const trunk = box(torso.length, torso.width, torso.height, [0, 0, body.hips.height + torso.rise]);
      return link('body', combineBodies(pieces), [trunk, ...cargo]);
    }
    case 'inline': {
      const { frame, tyre, wheelbase } = body;
      const crown = Math.max(0.05 * tyre.radius, Math.min(tyre.crownRadius, 0.45 * tyre.radius));
      const roads = [1, -1].map((end) =>
        cylinder(tyre.radius, 2 * crown, [(end * wheelbase) / 2, 0, tyre.radius], [0, 1, 0]),
      );
      const trunk = box(frame.length, frame.width, frame.height, [0, 0, frame.centreHeight]);
      return link('body', combineBodies(carrierPieces(rig)), [trunk, ...roads, ...cargo]);
    }
    case 'hull': {
      const { section, length, keel } = body;
      const trunk = box(length, section.beam, section.depth, [0, 0, section.depth / 2]);
      const fin =
        keel.kind === 'fin' ? [box(keel.length, keel.thickness, keel.depth, [0, 0, -keel.depth / 2])] : [];
      return link('body', combineBodies(carrierPieces(rig)), [trunk, ...fin, ...cargo]);
    }
  }
}

/** How a gimbal turns, by what drives it. */
function gimbalJoint(rig: Rig, gyro: Gyro, names: readonly string[], index: number): string {
  const name = names[index] as string;
  const { drive, tilt, gimbal } = gyro;
  const base = { name: `${name}_tilt`, parent: 'body', child: `${name}_gimbal`, at: gyro.position };
  if (drive.kind === 'locked') return joint({ ...base, kind: 'fixed' });
  const turning = {
    ...base,
    kind: 'revolute' as const,
    axis: unit3(gyro.gimbalAxis),
    damping: gimbal.friction + (drive.kind === 'free' ? drive.damping : 0),
    friction: gimbal.stiction,
  };
  const range = { lower: tilt.min, upper: tilt.max };
  switch (drive.kind) {
    case 'servo': {
      const { stallTorque: effort, noLoadSpeed: velocity } = drive.servo;
      return joint({ ...turning, limit: { ...range, effort, velocity } });
    }
    case 'geared': {
      const leader = rig.array.gyros[drive.leader]?.drive;
      const servo = leader?.kind === 'servo' ? leader.servo : undefined;
      const ratio = Math.abs(drive.ratio);
      const limit = {
        ...range,
        effort: (servo?.stallTorque ?? 0) / ratio,
        velocity: (servo?.noLoadSpeed ?? 0) * ratio,
      };
      return joint({
        ...turning,
        limit,
        mimic: { joint: `${names[drive.leader]}_tilt`, ratio: drive.ratio },
      });
    }
    case 'free':
      // Nothing drives it; no gimbal turns faster than its wheel.
      return joint({ ...turning, limit: { ...range, effort: 0, velocity: gyro.speed } });
  }
}

function gyroParts(compiled: CompiledRig, names: readonly string[], index: number): readonly string[] {
  const { rig, star } = compiled;
  const gyro = rig.array.gyros[index] as Gyro;
  const { frame, wheel, spinAxis } = star.gyros[index]!;
  const name = names[index] as string;
  const radius = Math.max(...gyro.wheel.parts.map(outerRadiusOf));
  const { transverseInertia: across, axialInertia } = wheel;
  const rotor: RigidBody = {
    mass: wheel.mass,
    com: wheel.centre,
    inertia: addSymmetric([across, across, across, 0, 0, 0], outerSymmetric(spinAxis, axialInertia - across)),
  };
  // Drawn as the plain disc of its radius and volume.
  const thickness = compiled.wheels[index]!.volume / (Math.PI * radius * radius);
  return [
    link(`${name}_gimbal`, frame, []),
    link(`${name}_wheel`, rotor, [cylinder(radius, thickness, wheel.centre, spinAxis)]),
    gimbalJoint(rig, gyro, names, index),
    joint({
      name: `${name}_spin`,
      kind: 'continuous',
      parent: `${name}_gimbal`,
      child: `${name}_wheel`,
      at: [0, 0, 0],
      axis: spinAxis,
      limit: spinLimit(rig, gyro),
    }),
  ];
}

/** What a wheel's motor gives at its current limit, and the speed the battery takes it to without load. */
function spinLimit({ power }: Rig, { motor, spin, speed }: Gyro): { effort: number; velocity: number } {
  const stall = motor.currentLimit / motor.velocityConstant;
  return {
    effort: spin.kind === 'actuated' ? Math.min(spin.torque, stall) : stall,
    velocity: Math.max(speed, motor.velocityConstant * power.cells * power.cellVoltage),
  };
}

/** Names of the gyros as links and joints carry them. */
export const gyroLinkNames = (rig: Rig): readonly string[] =>
  makeUnique(rig.array.gyros.map((gyro, i) => identifierFor(gyro.name, `gyro_${i + 1}`)));

/**
 * The robot description: link `body` (with what it carries), legs as links, and for every gyro a gimbal and a wheel.
 *
 * @param compiled   the rig
 * @param generator  the program and its version, named in a comment
 *
 * Every link's frame has the axes of the body at rest: x forward, y left, z up (REP 103); m, kg, kg*m^2, rad.
 * Masses and inertias at rest add up to those of the whole rig. O(parts).
 */
export function writeUrdf(compiled: CompiledRig, generator: string): string {
  const { rig, whole } = compiled;
  const names = gyroLinkNames(rig);
  const weight = whole.mass * STANDARD_GRAVITY;
  const { body } = rig;
  const legs =
    body.kind === 'legged' ? hipPositions(body).flatMap((_, leg) => legParts(rig, body, weight, leg)) : [];
  const comment = (text: string): string => `  <!-- ${escapeXml(text).replace(/-{2,}/g, '-')} -->`;
  return [
    '<?xml version="1.0" encoding="UTF-8"?>',
    `<robot name="${escapeXml(rig.name)}">`,
    comment(
      `Written by ${generator}. SI units; x forward, y left, z up. Velocity of a spin joint is what its motor reaches without load, not the speed it is run at: that stands in the control file.`,
    ),
    ...(legs.length > 0 ? [comment(LEG_NOTE)] : []),
    bodyLink(rig),
    ...legs,
    ...rig.array.gyros.flatMap((_, index) => gyroParts(compiled, names, index)),
    '</robot>',
    '',
  ].join('\n');
}
