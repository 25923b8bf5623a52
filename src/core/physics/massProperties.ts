/** What everything weighs and where: the rig taken apart into rigid pieces, and pieces put together again. */
import type { Body, Gyro, HullBody, InlineBody, LeggedBody, Payload, Rig } from '../rig';
import { sectionOutline } from './hullSection';
import { hipPositions, placeKnee, restFeet } from './legGeometry';
import {
  add3,
  addSymmetric,
  cross3,
  dot3,
  outerSymmetric,
  pointInertia,
  rotate3,
  rotateSymmetric,
  rotationAbout,
  type Sym3,
  scale3,
  subtract3,
  unit3,
  type Vec3,
} from './spatial';
import type { RigidBody } from './starModel';
import { type WheelProperties, wheelProperties } from './wheelProperties';

export type PieceGroup =
  | 'torso'
  | 'leg'
  | 'shell'
  | 'keel'
  | 'frame'
  | 'tyre'
  | 'payload'
  | 'gimbal'
  | 'wheel';

/** One rigid piece of the rig, body frame. */
export interface Piece extends RigidBody {
  readonly label: string;
  readonly group: PieceGroup;
}

const noInertia: Sym3 = [0, 0, 0, 0, 0, 0];

/** Inertia of a solid box about its centre, kg*m^2. Source: standard tables. */
export const boxInertia = (mass: number, x: number, y: number, z: number): Sym3 => [
  (mass * (y * y + z * z)) / 12,
  (mass * (x * x + z * z)) / 12,
  (mass * (x * x + y * y)) / 12,
  0,
  0,
  0,
];

/** Inertia of a thin rod between two points about its centre, kg*m^2: m (L^2 1 - L L^T) / 12. */
export function rodInertia(mass: number, from: Vec3, to: Vec3): Sym3 {
  return pointInertia(mass / 12, subtract3(to, from));
}

/**
 * Puts rigid bodies together: total mass, common centre, inertia about that centre by the parallel-axis theorem.
 * Bodies of no mass add their inertia only. A sum of no mass has its centre at the origin.
 */
export function combineBodies(bodies: readonly RigidBody[]): RigidBody {
  let mass = 0;
  let moment: Vec3 = [0, 0, 0];
  for (const body of bodies) {
    mass += body.mass;
    moment = add3(moment, scale3(body.com, body.mass));
  }
  const com = mass > 0 ? scale3(moment, 1 / mass) : ([0, 0, 0] as const);
  let inertia = noInertia;
  for (const body of bodies) {
    inertia = addSymmetric(
      inertia,
      addSymmetric(body.inertia, pointInertia(body.mass, subtract3(body.com, com))),
    );
  }
  return { mass, com, inertia };
}

/** Inertia of a body about another point than its centre, same axes, kg*m^2. */
export const inertiaAbout = (body: RigidBody, point: Vec3): Sym3 =>
  addSymmetric(body.inertia, pointInertia(body.mass, subtract3(body.com, point)));

export const payloadPiece = (payload: Payload): Piece => ({
  label: payload.name,
  group: 'payload',
  mass: payload.mass,
  com: payload.position,
  inertia: boxInertia(payload.mass, ...payload.size),
});

/**
 * Pieces of one leg, from its hip to its sole; foot flat.
 *
 * @param hip   m, body frame
 * @param foot  m, body frame, middle of the sole
 */
export function legPieces(body: LeggedBody, hip: Vec3, foot: Vec3, label: string): readonly Piece[] {
  const kneeAt = new Float64Array(3);
  placeKnee(hip, foot, body.thigh.length, body.shank.length, kneeAt);
  const knee: Vec3 = [kneeAt[0] as number, kneeAt[1] as number, kneeAt[2] as number];
  const rod = (part: string, mass: number, from: Vec3, to: Vec3): Piece => ({
    label: `${label} ${part}`,
    group: 'leg',
    mass,
    com: scale3(add3(from, to), 0.5),
    inertia: rodInertia(mass, from, to),
  });
  return [
    rod('thigh', body.thigh.mass, hip, knee),
    rod('shank', body.shank.mass, knee, foot),
    {
      label: `${label} foot`,
      group: 'leg',
      mass: body.foot.mass,
      com: foot,
      inertia: boxInertia(body.foot.mass, body.foot.length, body.foot.width, 0),
    },
  ];
}

/** Torso of a legged body as a solid box, body frame. */
export const torsoPiece = (body: LeggedBody): Piece => ({
  label: 'Torso',
  group: 'torso',
  mass: body.torso.mass,
  com: [0, 0, body.hips.height + body.torso.rise],
  inertia: boxInertia(body.torso.mass, body.torso.length, body.torso.width, body.torso.height),
});

/** Names of the legs, in leg order. */
export function legLabels(legs: number): readonly string[] {
  const rows = legs === 2 ? [''] : legs === 4 ? ['Front ', 'Rear '] : ['Front ', 'Middle ', 'Rear '];
  return rows.flatMap((row) => (row === '' ? ['Left', 'Right'] : [`${row}left`, `${row}right`]));
}

/** Stance width a legged rig stands at: its gait's, or straight under the hips. */
export const stanceWidthOf = (rig: Rig, body: LeggedBody): number =>
  rig.jobs.gait.kind === 'pattern' ? rig.jobs.gait.stanceWidth : body.hips.width;

function leggedPieces(rig: Rig, body: LeggedBody): readonly Piece[] {
  const hips = hipPositions(body);
  const feet = restFeet(body, stanceWidthOf(rig, body));
  const labels = legLabels(body.legs);
  const legs = hips.flatMap((hip, i) => legPieces(body, hip, feet[i] as Vec3, labels[i] as string));
  return [torsoPiece(body), ...legs];
}

/** A shell of even weight around its section, and along its length. */
function hullPieces(body: HullBody): readonly Piece[] {
  const outline = sectionOutline(body.section);
  let perimeter = 0;
  for (let i = 0; i + 1 < outline.length; i++) perimeter += segmentLength(outline, i);
  const strips: RigidBody[] = [];
  for (let i = 0; i + 1 < outline.length; i++) {
    const [y0, z0] = outline[i] as readonly [number, number];
    const [y1, z1] = outline[i + 1] as readonly [number, number];
    const mass = (body.shellMass * segmentLength(outline, i)) / perimeter;
    const across = rodInertia(mass, [0, y0, z0], [0, y1, z1]);
    const alongIt = rodInertia(mass, [-body.length / 2, 0, 0], [body.length / 2, 0, 0]);
    strips.push({ mass, com: [0, (y0 + y1) / 2, (z0 + z1) / 2], inertia: addSymmetric(across, alongIt) });
  }
  const shell: Piece = { ...combineBodies(strips), label: 'Shell', group: 'shell' };
  if (body.keel.kind === 'none') return [shell];
  const { depth, length, thickness, mass } = body.keel;
  const keel: Piece = {
    label: 'Keel',
    group: 'keel',
    mass,
    com: [0, 0, -depth / 2],
    inertia: boxInertia(mass, length, thickness, depth),
  };
  return [shell, keel];
}

function segmentLength(outline: readonly (readonly [number, number])[], i: number): number {
  const [y0, z0] = outline[i] as readonly [number, number];
  const [y1, z1] = outline[i + 1] as readonly [number, number];
  return Math.sqrt((y1 - y0) ** 2 + (z1 - z0) ** 2);
}

function inlinePieces(body: InlineBody): readonly Piece[] {
  const { frame, tyre, wheelbase } = body;
  const tyrePiece = (label: string, x: number): Piece => ({
    label,
    group: 'tyre',
    mass: tyre.mass,
    com: [x, 0, tyre.radius],
    inertia: [
      (tyre.mass * tyre.radius ** 2) / 2,
      tyre.mass * tyre.radius ** 2,
      (tyre.mass * tyre.radius ** 2) / 2,
      0,
      0,
      0,
    ],
  });
  return [
    {
      label: 'Frame',
      group: 'frame',
      mass: frame.mass,
      com: [0, 0, frame.centreHeight],
      inertia: boxInertia(frame.mass, frame.length, frame.width, frame.height),
    },
    tyrePiece('Front tyre', wheelbase / 2),
    tyrePiece('Rear tyre', -wheelbase / 2),
  ];
}

function bodyPieces(rig: Rig, body: Body): readonly Piece[] {
  switch (body.kind) {
    case 'legged':
      return leggedPieces(rig, body);
    case 'hull':
      return hullPieces(body);
    case 'inline':
      return inlinePieces(body);
  }
}

/** A gyro's frame about its own centre of mass, from the gyro's position, gimbal at rest; body axes. */
export function gimbalFrame(gyro: Gyro): RigidBody {
  const g = unit3(gyro.gimbalAxis);
  const s = acrossAxis(gyro.spinAxis, g);
  const third = cross3(s, g);
  const [aboutSpin, aboutGimbal, aboutThird] = gyro.gimbal.inertia;
  const inertia = addSymmetric(
    addSymmetric(outerSymmetric(s, aboutSpin), outerSymmetric(g, aboutGimbal)),
    outerSymmetric(third, aboutThird),
  );
  const com: Vec3 = gyro.drive.kind === 'free' ? gyro.drive.centreOffset : [0, 0, 0];
  return { mass: gyro.gimbal.mass, com, inertia };
}

/** The unit direction of `a` less its part along `axis`; any direction across the axis where nothing is left. */
function acrossAxis(a: Vec3, axis: Vec3): Vec3 {
  const rest = subtract3(a, scale3(axis, dot3(a, axis)));
  if (dot3(rest, rest) > 1e-12) return unit3(rest);
  return unit3(cross3(axis, Math.abs(axis[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0]));
}

/** A wheel's mass properties where it stands, gimbal tilted; body axes. */
export function wheelPiece(gyro: Gyro, wheel: WheelProperties, tilt: number): RigidBody {
  const turn = rotationAbout(unit3(gyro.gimbalAxis), tilt);
  const s = unit3(gyro.spinAxis);
  const { mass, spinInertia, transverseInertia } = wheel;
  const atRest = addSymmetric(
    [transverseInertia, transverseInertia, transverseInertia, 0, 0, 0],
    outerSymmetric(s, spinInertia - transverseInertia),
  );
  const com = add3(gyro.position, rotate3(turn, scale3(s, wheel.centre)));
  return { mass, com, inertia: rotateSymmetric(turn, atRest) };
}

function gyroPieces(gyro: Gyro): readonly Piece[] {
  const outcome = wheelProperties(gyro.wheel.parts);
  const frame = gimbalFrame(gyro);
  const framePiece: Piece = {
    ...frame,
    com: add3(gyro.position, frame.com),
    label: `${gyro.name} gimbal`,
    group: 'gimbal',
  };
  if (outcome.kind === 'refused') return [framePiece];
  return [framePiece, { ...wheelPiece(gyro, outcome.wheel, 0), label: `${gyro.name} wheel`, group: 'wheel' }];
}

/** Everything but the gyros: body and payloads, legs standing at rest, as pieces. */
export const carrierPieces = (rig: Rig): readonly Piece[] => [
  ...bodyPieces(rig, rig.body),
  ...rig.payloads.map(payloadPiece),
];

/** The whole rig as pieces, gimbals and legs at rest. */
export const rigPieces = (rig: Rig): readonly Piece[] => [
  ...carrierPieces(rig),
  ...rig.array.gyros.flatMap(gyroPieces),
];
