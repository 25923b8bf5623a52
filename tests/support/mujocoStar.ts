/**
 * A star described to MuJoCo (the npm package mujoco-js), an independent general-purpose engine. The wheel is a
 * real body on a real hinge there: nothing of ours is eliminated.
 */
import { EigenvalueDecomposition, Matrix } from 'ml-matrix';
import loadMujoco from 'mujoco-js';
import {
  cross3,
  rotate3,
  rotateSymmetric,
  rotationAbout,
  unit3,
  type Vec3,
} from '../../src/core/physics/spatial';
import { type StarDescription, type StarGyro, standardGravity } from '../../src/core/physics/starModel';

export type Mujoco = Awaited<ReturnType<typeof loadMujoco>>;
export const openMujoco = (): Promise<Mujoco> => loadMujoco();

const list = (values: readonly number[]): string => values.join(' ');

/** Quaternion of a rotation matrix given by columns. Source: Shepperd's method. */
function quaternionOf(c: readonly (readonly number[])[]): number[] {
  const [m00, m11, m22] = [c[0]![0]!, c[1]![1]!, c[2]![2]!];
  const squares = [1 + m00 + m11 + m22, 1 + m00 - m11 - m22, 1 - m00 + m11 - m22, 1 - m00 - m11 + m22];
  const big = squares.indexOf(Math.max(...squares));
  const [a, b, d] = [c[1]![2]! - c[2]![1]!, c[2]![0]! - c[0]![2]!, c[0]![1]! - c[1]![0]!];
  const [e, f, g] = [c[0]![1]! + c[1]![0]!, c[0]![2]! + c[2]![0]!, c[1]![2]! + c[2]![1]!];
  const q = [
    [squares[0]!, a, b, d],
    [a, squares[1]!, e, f],
    [b, e, squares[2]!, g],
    [d, f, g, squares[3]!],
  ][big]!;
  const n = Math.hypot(...q);
  return q.map((x) => x / n);
}

/**
 * Inertia as principal values and a quaternion: MuJoCo's own reading of a full inertia drops off-diagonals below
 * about 1e-12 kg*m^2, which for parts of 1e-5 kg*m^2 is seen in the seventh digit of an acceleration.
 */
function inertial(mass: number, com: Vec3, inertia: readonly number[]): string {
  const [xx, yy, zz, xy, xz, yz] = inertia as [number, number, number, number, number, number];
  const matrix = new Matrix([
    [xx, xy, xz],
    [xy, yy, yz],
    [xz, yz, zz],
  ]);
  const eigen = new EigenvalueDecomposition(matrix.mul(1e4), { assumeSymmetric: true });
  const columns = [0, 1, 2].map((k) => eigen.eigenvectorMatrix.getColumn(k));
  const [p, q] = columns as unknown as [Vec3, Vec3];
  columns[2] = [...cross3(p, q)];
  const principal = eigen.realEigenvalues.map((value) => value * 1e-4);
  return `<inertial pos="${list(com)}" mass="${mass}" diaginertia="${list(principal)}" quat="${list(quaternionOf(columns))}"/>`;
}

/** A locked gimbal has no hinge: its frame is drawn at its tilt. */
function gyroXml(gyro: StarGyro, i: number, tilt: number): string {
  const axis = unit3(gyro.gimbalAxis);
  const turn = rotationAbout(axis, gyro.drive.kind === 'locked' ? tilt : 0);
  const frame = inertial(
    gyro.frame.mass,
    rotate3(turn, gyro.frame.com),
    rotateSymmetric(turn, gyro.frame.inertia),
  );
  const spring =
    gyro.drive.kind === 'free'
      ? `stiffness="${gyro.drive.stiffness}" springref="${gyro.drive.restTilt}" damping="${gyro.drive.damping}"`
      : `armature="${gyro.drive.kind === 'servo' ? (gyro.drive.reflectedInertia ?? 0) : 0}"`;
  const hinge =
    gyro.drive.kind === 'locked'
      ? ''
      : `<joint name="tilt${i}" type="hinge" axis="${list(axis)}" ${spring}/>`;
  const { mass, axialInertia, transverseInertia, centre } = gyro.wheel;
  return `<body pos="${list(gyro.position)}">${hinge}${frame}
    <body pos="${list(rotate3(turn, centre))}" zaxis="${list(rotate3(turn, unit3(gyro.spinAxis)))}">
      <joint name="wheel${i}" type="hinge" axis="0 0 1"/>
      <inertial pos="0 0 0" mass="${mass}" diaginertia="${list([transverseInertia, transverseInertia, axialInertia])}"/>
    </body></body>`;
}

/** Base joints: what MuJoCo can say of the footing; rolling is a slide and a hinge to be tied together by the caller. */
function baseJoints(description: StarDescription): string {
  const { footing } = description;
  switch (footing.kind) {
    case 'firm':
      return '';
    case 'edge':
      return `<joint name="base" type="hinge" pos="${list(footing.point)}" axis="${list(unit3(footing.axis))}"/>`;
    case 'point':
      return `<joint name="base" type="ball" pos="${list(footing.point)}"/>`;
    case 'float':
      return `<joint name="base" type="hinge" pos="${list(footing.point)}" axis="1 0 0"/>`;
    case 'rocker': {
      const [x, y] = unit3(footing.axis);
      return footing.shape === 'ball'
        ? `<joint type="slide" axis="1 0 0"/><joint type="slide" axis="0 1 0"/>
           <joint name="base" type="ball" pos="${list(footing.centre)}"/>`
        : `<joint type="slide" axis="${list([y, -x, 0])}"/>
           <joint name="base" type="hinge" pos="${list(footing.centre)}" axis="${list([x, y, 0])}"/>`;
    }
    case 'free':
      return '<freejoint name="base"/>';
  }
}

/** The whole model as MJCF text, without geometry or contact. */
export function describeToMujoco(
  description: StarDescription,
  tilt: readonly number[],
  timeStep: number,
  integrator = 'RK4',
): string {
  const { base, gyros, gravity } = description;
  return `<mujoco><compiler angle="radian" autolimits="false"/>
    <option timestep="${timeStep}" integrator="${integrator}" gravity="${list(gravity ?? standardGravity)}">
    <flag contact="disable" constraint="disable"/></option>
    <worldbody><body name="base">${baseJoints(description)}${inertial(base.mass, base.com, base.inertia)}
    ${gyros.map((gyro, i) => gyroXml(gyro, i, tilt[i]!)).join('\n')}</body></worldbody></mujoco>`;
}

/** Loads a description. Free what comes back with `.delete()` on both. */
export function loadMujocoStar(
  mj: Mujoco,
  description: StarDescription,
  tilt: readonly number[],
  timeStep: number,
  integrator = 'RK4',
) {
  mj.FS.writeFile('/star.xml', describeToMujoco(description, tilt, timeStep, integrator));
  const model = mj.MjModel.loadFromXML('/star.xml');
  if (!model) throw new Error('MuJoCo refused the model');
  return { model, data: new mj.MjData(model) };
}
