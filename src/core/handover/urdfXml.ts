/** Links and joints as the XML of a robot description. Source: the URDF XML specification, from memory. */
import type { RigidBody, Vec3 } from '../physics';
import { escapeXml, plainNumber } from './text';

const num = (value: number): string => plainNumber(value, 12);
const triple = (v: Vec3): string => v.map(num).join(' ');

/** Roll, pitch and yaw that turn z to a direction. */
const anglesTo = (d: Vec3): string =>
  `0 ${num(Math.atan2(Math.sqrt(d[0] * d[0] + d[1] * d[1]), d[2]))} ${num(Math.atan2(d[1], d[0]))}`;

export interface Visual {
  readonly geometry: string;
  readonly at: Vec3;
  /** Where the shape's z points. */
  readonly along: Vec3;
}

const UP: Vec3 = [0, 0, 1];
export const box = (x: number, y: number, z: number, at: Vec3): Visual => ({
  geometry: `<box size="${triple([x, y, z])}"/>`,
  at,
  along: UP,
});
export const cylinder = (radius: number, length: number, at: Vec3, along: Vec3): Visual => ({
  geometry: `<cylinder radius="${num(radius)}" length="${num(length)}"/>`,
  at,
  along,
});

/** A link whose frame has the body's axes at rest; centre and shapes are seen from its own origin. */
export function link(name: string, body: RigidBody, visuals: readonly Visual[]): string {
  const [xx, yy, zz, xy, xz, yz] = body.inertia.map(num);
  const shapes = visuals.map(
    ({ geometry, at, along }) =>
      `    <visual><origin xyz="${triple(at)}" rpy="${anglesTo(along)}"/><geometry>${geometry}</geometry></visual>`,
  );
  return [
    `  <link name="${escapeXml(name)}">`,
    '    <inertial>',
    `      <origin xyz="${triple(body.com)}" rpy="0 0 0"/>`,
    `      <mass value="${num(body.mass)}"/>`,
    `      <inertia ixx="${xx}" ixy="${xy}" ixz="${xz}" iyy="${yy}" iyz="${yz}" izz="${zz}"/>`,
    '    </inertial>',
    ...shapes,
    '  </link>',
  ].join('\n');
}

export interface Joint {
  readonly name: string;
  readonly kind: 'revolute' | 'continuous' | 'fixed';
  readonly parent: string;
  readonly child: string;
  readonly at: Vec3;
  readonly axis?: Vec3;
  /** rad, rad, N*m, rad/s. */
  readonly limit?: {
    readonly lower?: number;
    readonly upper?: number;
    readonly effort: number;
    readonly velocity: number;
  };
  readonly damping?: number;
  readonly friction?: number;
  readonly mimic?: { readonly joint: string; readonly ratio: number };
}

export function joint(j: Joint): string {
  const lines = [
    `  <joint name="${escapeXml(j.name)}" type="${j.kind}">`,
    `    <parent link="${escapeXml(j.parent)}"/>`,
    `    <child link="${escapeXml(j.child)}"/>`,
    `    <origin xyz="${triple(j.at)}" rpy="0 0 0"/>`,
  ];
  if (j.axis) lines.push(`    <axis xyz="${triple(j.axis)}"/>`);
  if (j.limit) {
    const { lower, upper, effort, velocity } = j.limit;
    const range =
      lower === undefined || upper === undefined ? '' : `lower="${num(lower)}" upper="${num(upper)}" `;
    lines.push(`    <limit ${range}effort="${num(effort)}" velocity="${num(velocity)}"/>`);
  }
  if (j.damping !== undefined)
    lines.push(`    <dynamics damping="${num(j.damping)}" friction="${num(j.friction ?? 0)}"/>`);
  if (j.mimic)
    lines.push(
      `    <mimic joint="${escapeXml(j.mimic.joint)}" multiplier="${num(j.mimic.ratio)}" offset="0"/>`,
    );
  lines.push('  </joint>');
  return lines.join('\n');
}
