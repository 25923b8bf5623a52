import { Window } from 'happy-dom';
import URDFLoader, { type URDFJoint, type URDFLink, type URDFRobot } from 'urdf-loader';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { writeUrdf } from '../../../src/core/handover/urdf';
import { combineBodies, compileRig, type RigidBody } from '../../../src/core/physics';
import { DEMONSTRATIONS, layOut, PACER, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const compile = (rig: Rig) => {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map(({ sentence }) => sentence).join());
  return outcome.compiled;
};

const window = new Window();
beforeAll(() => {
  Object.assign(globalThis, {
    DOMParser: window.DOMParser,
    Document: window.Document,
    Element: window.Element,
  });
});
afterAll(async () => {
  await window.happyDOM.close();
});

function load(rig: Rig): URDFRobot {
  const loader = new URDFLoader();
  loader.parseVisual = false;
  loader.parseCollision = false;
  return loader.parse(writeUrdf(compile(rig), 'test'));
}

const numbers = (text: string | null | undefined): number[] => (text ?? '').trim().split(/\s+/).map(Number);

/** The mass properties a loaded link states, moved to where the loader stands it at rest. */
function bodyOf(link: URDFLink): RigidBody {
  link.updateWorldMatrix(true, false);
  const inertial = (link.urdfNode as Element).querySelector('inertial') as Element;
  const [x, y, z] = numbers(inertial.querySelector('origin')?.getAttribute('xyz')) as [
    number,
    number,
    number,
  ];
  const m = link.matrixWorld.elements;
  // Every frame has the body's axes at rest, so only the origin moves.
  expectClose([m[0], m[1], m[2], m[4], m[5], m[6]], [1, 0, 0, 0, 1, 0], { abs: 1e-12 }); // measured 0
  const inertia = inertial.querySelector('inertia') as Element;
  const part = (name: string): number => Number(inertia.getAttribute(name));
  return {
    mass: Number(inertial.querySelector('mass')?.getAttribute('value')),
    com: [x + m[12]!, y + m[13]!, z + m[14]!],
    inertia: [part('ixx'), part('iyy'), part('izz'), part('ixy'), part('ixz'), part('iyz')],
  };
}

describe('the robot description, read back by a URDF loader', () => {
  it.each(DEMONSTRATIONS.map(({ rig }) => [rig.name, rig] as const))('of %s adds up to the rig', (_, rig) => {
    const robot = load(rig);
    const { whole, star } = compile(rig);
    const sum = combineBodies(Object.values(robot.links).map(bodyOf));
    expectClose(sum.mass, whole.mass, { rel: 1e-11 }); // measured 6.9e-14
    expectClose(sum.com, whole.com, { abs: 1e-11 }); // measured 3e-13 m
    expectClose(sum.inertia, whole.inertia, { rel: 1e-10, abs: 1e-12 * whole.inertia[0] }); // measured 2.1e-12, and 3.9e-14 kg*m^2 beside a moment of inertia of 0.1
    rig.array.gyros.forEach((gyro, i) => {
      const name = gyro.name.toLowerCase().replaceAll(' ', '_');
      const wheel = bodyOf(robot.links[`${name}_wheel`]!);
      expectClose(wheel.mass, star.gyros[i]!.wheel.mass, { rel: 1e-11 }); // measured 1.9e-12
      const axis = star.gyros[i]!.spinAxis;
      const [xx, yy, zz, xy, xz, yz] = wheel.inertia;
      const about =
        xx * axis[0] ** 2 +
        yy * axis[1] ** 2 +
        zz * axis[2] ** 2 +
        2 * (xy * axis[0] * axis[1] + xz * axis[0] * axis[2] + yz * axis[1] * axis[2]);
      expectClose(about, star.gyros[i]!.wheel.axialInertia, { rel: 1e-11 }); // measured 5.2e-13
      const frame = bodyOf(robot.links[`${name}_gimbal`]!);
      expectClose(frame.inertia, star.gyros[i]!.frame.inertia, { rel: 1e-11, abs: 1e-18 }); // measured 0
    });
  });

  it('gives gimbals their axes, limits and gears', () => {
    const robot = load(STRIDER);
    const [front, back] = STRIDER.array.gyros;
    const tilt = robot.joints.front_tilt as URDFJoint;
    expect(tilt.jointType).toBe('revolute');
    expectClose(tilt.axis.toArray(), [...front!.gimbalAxis], { abs: 1e-12 }); // measured 0
    expectClose([tilt.limit.lower, tilt.limit.upper].map(Number), [front!.tilt.min, front!.tilt.max], {
      rel: 1e-11,
    }); // measured 5.7e-13
    expect((tilt.urdfNode as Element).querySelector('limit')?.getAttribute('effort')).toBe(
      String(front!.drive.kind === 'servo' && front!.drive.servo.stallTorque),
    );
    const mimic = (robot.joints.back_tilt!.urdfNode as Element).querySelector('mimic');
    expect(mimic?.getAttribute('joint')).toBe('front_tilt');
    expect(Number(mimic?.getAttribute('multiplier'))).toBe(
      back!.drive.kind === 'geared' ? back!.drive.ratio : Number.NaN,
    );
    // Geared the other way: the loader turns the follower with its leader.
    robot.setJointValue('front_tilt', 0.3);
    expectClose(Number(robot.joints.back_tilt?.angle), -0.3, { abs: 1e-12 }); // measured 0
    expect(robot.joints.front_spin?.jointType).toBe('continuous');
  });

  it('lets a reaction wheel turn from rest, with no more torque than is asked of it', () => {
    const gyros = layOut('reaction wheel', STRIDER.array.gyros[0]!, {
      centre: [0, 0, 0.5],
      spacing: 0,
      skew: 0,
    });
    const robot = load({ ...STRIDER, array: { gyros } });
    const { motor, spin } = gyros[0]!;
    const limit = (robot.joints.reaction_wheel_spin!.urdfNode as Element).querySelector('limit');
    const { cells, cellVoltage } = STRIDER.power;
    expectClose(Number(limit?.getAttribute('velocity')), motor.velocityConstant * cells * cellVoltage, {
      rel: 1e-11,
    }); // measured 2.8e-12
    expectClose(Number(limit?.getAttribute('effort')), spin.kind === 'actuated' ? spin.torque : 0, {
      rel: 1e-11,
    }); // measured 6.6e-13
    expect(robot.joints.reaction_wheel_tilt?.jointType).toBe('fixed');
  });

  it('keeps a leg’s links together as its knee bends, and its knee from bending backwards', () => {
    const robot = load(STRIDER);
    const foot = (): number[] => {
      robot.updateMatrixWorld(true);
      return robot.links.left_foot!.matrixWorld.elements.slice(12, 15);
    };
    const before = foot();
    const knee = robot.joints.left_knee as URDFJoint;
    robot.setJointValue('left_knee', 9);
    expectClose(Number(knee.angle), Number(knee.limit.upper), { abs: 1e-12 }); // measured 0
    robot.setJointValue('left_knee', -9);
    expectClose(Number(knee.angle), Number(knee.limit.lower), { abs: 1e-12 }); // measured 0
    // Straight: hip to sole is thigh and shank together.
    const body = STRIDER.body.kind === 'legged' ? STRIDER.body : undefined;
    const hip = [0, body!.hips.width / 2, body!.hips.height];
    const reach = Math.hypot(...foot().map((value, k) => value - hip[k]!));
    expectClose(reach, body!.thigh.length + body!.shank.length, { rel: 1e-9 }); // measured 5e-16
    expect(before).not.toEqual(foot());
  });

  it('holds its own against names that XML could not', () => {
    const gyros = PACER.array.gyros.map((gyro) => ({ ...gyro, name: 'A & "B" <é> --' }));
    const robot = load({ ...PACER, name: 'A & B <">', array: { gyros } });
    expect(robot.robotName).toBe('A & B <">');
    expect(Object.keys(robot.joints)).toEqual(expect.arrayContaining(['a_b_e_tilt', 'a_b_e_2_tilt']));
  });
});
