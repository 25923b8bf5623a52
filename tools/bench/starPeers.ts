/** The bench rig in other engines, wheels as real spinning bodies. Each runs a time in steps and gives roll and tilts. */
import RAPIER from '@dimforge/rapier3d-compat';
import { Body, HingeConstraint, Quaternion, Vec3, World } from 'cannon-es';
import { loadMujocoStar, openMujoco } from '../../tests/support/mujocoStar';
import { benchStar, benchStart } from './starRig';

/** One engine: runs the rig for `seconds` in `steps`, and says where it ended and how long stepping alone took. */
export type Engine = (
  gyros: number,
  seconds: number,
  steps: number,
) => { angles: number[]; milliseconds: number };

type Q = { x: number; y: number; z: number; w: number };
/** Angle of a turn about one axis, from the quaternion of b seen from a. */
function relativeAngle(a: Q, b: Q, axis: 'x' | 'y'): number {
  const w = a.w * b.w + a.x * b.x + a.y * b.y + a.z * b.z;
  const x = a.w * b.x - a.x * b.w - a.y * b.z + a.z * b.y;
  const y = a.w * b.y - a.y * b.w - a.z * b.x + a.x * b.z;
  return 2 * Math.atan2(axis === 'x' ? x : y, w);
}

export async function openMujocoEngine(): Promise<Engine> {
  const mj = await openMujoco();
  return (gyros, seconds, steps) => {
    const start = benchStart(gyros);
    const { model, data } = loadMujocoStar(mj, benchStar(gyros), start.tilt!, seconds / steps);
    data.qpos.set([0, ...start.tilt!.flatMap((t) => [t, 0])]);
    data.qvel.set([start.baseSpeeds![0]!, ...start.wheelSpeed!.flatMap((w) => [0, w])]);
    const before = performance.now();
    for (let k = 0; k < steps; k++) mj.mj_step(model, data);
    const milliseconds = performance.now() - before;
    const q = data.qpos as Float64Array;
    const angles = [q[0]!, ...start.tilt!.map((_, i) => q[1 + 2 * i]!)];
    data.delete();
    model.delete();
    return { angles, milliseconds };
  };
}

export async function openRapierEngine(): Promise<Engine> {
  await RAPIER.init();
  const still = { x: 0, y: 0, z: 0, w: 1 };
  const vector = ([x, y, z]: readonly number[]) => ({ x: x!, y: y!, z: z! });
  return (gyros, seconds, steps) => {
    const star = benchStar(gyros);
    const start = benchStart(gyros);
    const roll = start.baseSpeeds![0]!;
    const world = new RAPIER.World({ x: 0, y: 0, z: -9.81 });
    world.timestep = seconds / steps;
    const addBody = (
      at: readonly number[],
      turn: Q,
      mass: number,
      com: readonly number[],
      I: readonly number[],
    ) => {
      const body = world.createRigidBody(
        RAPIER.RigidBodyDesc.dynamic()
          .setTranslation(at[0]!, at[1]!, at[2]!)
          .setRotation(turn)
          .setCanSleep(false)
          .setAdditionalMassProperties(mass, vector(com), vector(I), still),
      );
      body.setLinvel({ x: 0, y: -roll * at[2]!, z: roll * at[1]! }, true);
      return body;
    };
    const ground = world.createRigidBody(RAPIER.RigidBodyDesc.fixed());
    const base = addBody([0, 0, 0], still, star.base.mass, star.base.com, star.base.inertia);
    base.setAngvel({ x: roll, y: 0, z: 0 }, true);
    const tie = (
      a: InstanceType<typeof RAPIER.RigidBody>,
      b: typeof a,
      at: readonly number[],
      axis: readonly number[],
    ) =>
      world.createImpulseJoint(
        RAPIER.JointData.revolute(vector(at), vector([0, 0, 0]), vector(axis)),
        a,
        b,
        true,
      );
    tie(ground, base, [0, 0, 0], [1, 0, 0]);
    const frames = star.gyros.map((gyro, i) => {
      const sense = gyro.gimbalAxis[1];
      const half = (sense * start.tilt![i]!) / 2;
      const turn = { x: 0, y: Math.sin(half), z: 0, w: Math.cos(half) };
      const { frame, wheel } = gyro;
      const body = addBody(gyro.position, turn, frame.mass, frame.com, frame.inertia);
      body.setAngvel({ x: roll, y: 0, z: 0 }, true);
      tie(base, body, gyro.position, [0, 1, 0]);
      const inertia = [wheel.transverseInertia, wheel.transverseInertia, wheel.axialInertia];
      const rotor = addBody(gyro.position, turn, wheel.mass, [0, 0, 0], inertia);
      const speed = sense * start.wheelSpeed![i]!;
      rotor.setAngvel({ x: roll + speed * Math.sin(2 * half), y: 0, z: speed * Math.cos(2 * half) }, true);
      tie(body, rotor, [0, 0, 0], [0, 0, 1]);
      return body;
    });
    const before = performance.now();
    for (let k = 0; k < steps; k++) world.step();
    const milliseconds = performance.now() - before;
    const angles = [
      relativeAngle(still, base.rotation(), 'x'),
      ...frames.map(
        (f, i) => star.gyros[i]!.gimbalAxis[1] * relativeAngle(base.rotation(), f.rotation(), 'y'),
      ),
    ];
    world.free();
    return { angles, milliseconds };
  };
}

export function openCannonEngine(): Engine {
  const vector = ([x, y, z]: readonly number[]): Vec3 => new Vec3(x!, y!, z!);
  return (gyros, seconds, steps) => {
    const star = benchStar(gyros);
    const start = benchStart(gyros);
    const roll = start.baseSpeeds![0]!;
    const world = new World({ gravity: new Vec3(0, 0, -9.81) });
    const addBody = (at: readonly number[], turn: Quaternion, mass: number, I: readonly number[]): Body => {
      const body = new Body({
        mass,
        position: vector(at),
        quaternion: turn,
        linearDamping: 0,
        angularDamping: 0,
      });
      body.inertia.set(I[0]!, I[1]!, I[2]!);
      body.invInertia.set(1 / I[0]!, 1 / I[1]!, 1 / I[2]!);
      body.velocity.set(0, -roll * at[2]!, roll * at[1]!);
      body.angularVelocity.set(roll, 0, 0);
      body.updateInertiaWorld(true);
      world.addBody(body);
      return body;
    };
    const ground = new Body({ mass: 0 });
    world.addBody(ground);
    const com = star.base.com;
    const base = addBody(com, new Quaternion(), star.base.mass, star.base.inertia);
    const tie = (
      a: Body,
      b: Body,
      pivotA: readonly number[],
      pivotB: readonly number[],
      axis: readonly number[],
    ): void => {
      world.addConstraint(
        new HingeConstraint(a, b, {
          pivotA: vector(pivotA),
          pivotB: vector(pivotB),
          axisA: vector(axis),
          axisB: vector(axis),
          collideConnected: false,
        }),
      );
    };
    tie(ground, base, [0, 0, 0], [0, 0, -com[2]], [1, 0, 0]);
    const frames = star.gyros.map((gyro, i) => {
      const sense = gyro.gimbalAxis[1];
      const tilt = sense * start.tilt![i]!;
      const turn = new Quaternion().setFromAxisAngle(new Vec3(0, 1, 0), tilt);
      const body = addBody(gyro.position, turn, gyro.frame.mass, gyro.frame.inertia);
      tie(base, body, [gyro.position[0], gyro.position[1], gyro.position[2] - com[2]], [0, 0, 0], [0, 1, 0]);
      const { transverseInertia: Jt, axialInertia: Js, mass } = gyro.wheel;
      const rotor = addBody(gyro.position, turn.clone(), mass, [Jt, Jt, Js]);
      const speed = sense * start.wheelSpeed![i]!;
      rotor.angularVelocity.set(roll + speed * Math.sin(tilt), 0, speed * Math.cos(tilt));
      tie(body, rotor, [0, 0, 0], [0, 0, 0], [0, 0, 1]);
      return body;
    });
    const step = seconds / steps;
    const before = performance.now();
    for (let k = 0; k < steps; k++) world.step(step);
    const milliseconds = performance.now() - before;
    const angles = [
      relativeAngle(ground.quaternion, base.quaternion, 'x'),
      ...frames.map(
        (f, i) => star.gyros[i]!.gimbalAxis[1] * relativeAngle(base.quaternion, f.quaternion, 'y'),
      ),
    ];
    return { angles, milliseconds };
  };
}
