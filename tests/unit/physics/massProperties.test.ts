import { describe, expect, it } from 'vitest';
import { compileRig } from '../../../src/core/physics/compile';
import { starCentre, starInertia } from '../../../src/core/physics/conserved';
import { hipPositions, placeKnee } from '../../../src/core/physics/legGeometry';
import {
  boxInertia,
  combineBodies,
  inertiaAbout,
  rigPieces,
  rodInertia,
} from '../../../src/core/physics/massProperties';
import { DEMONSTRATIONS, type Rig, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

const compiled = (rig: Rig) => {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map((r) => r.sentence).join('\n'));
  return outcome.compiled;
};
const sentences = (rig: Rig): string => {
  const outcome = compileRig(rig);
  return outcome.kind === 'refused' ? outcome.refusals.map((r) => r.sentence).join('\n') : '';
};

describe('mass properties by composition', () => {
  it('make one box of two halves', () => {
    const half = (x: number) => ({ mass: 2, com: [x, 0, 1] as const, inertia: boxInertia(2, 0.5, 0.3, 0.2) });
    const whole = combineBodies([half(0.25), half(-0.25)]);
    expectClose(whole.mass, 4, { rel: 1e-15 });
    expectClose([...whole.com], [0, 0, 1], { abs: 1e-15 });
    expectClose([...whole.inertia], [...boxInertia(4, 1, 0.3, 0.2)], { rel: 1e-14, abs: 1e-16 });
  });
  it('give a rod m L^2 / 12 across and nothing along itself', () => {
    expectClose([...rodInertia(3, [0, 0, 0], [0, 0, 2])], [1, 1, 0, 0, 0, 0], { rel: 1e-14, abs: 1e-15 });
  });
  it('move to another point and back by the parallel-axis theorem', () => {
    const body = { mass: 5, com: [0.1, -0.2, 0.3] as const, inertia: boxInertia(5, 0.2, 0.4, 0.1) };
    expectClose(inertiaAbout(body, [0, 0, 0])[0], body.inertia[0] + 5 * (0.04 + 0.09), { rel: 1e-14 });
  });
  it('agree with the star for every demonstration rig: the same rig added up by another route', () => {
    for (const { rig } of DEMONSTRATIONS) {
      const { whole, model } = compiled(rig);
      const rest = new Float64Array(model.gimbals);
      const star = starCentre(model, rest);
      expectClose(star.mass, whole.mass, { rel: 1e-13 }, `${rig.name} mass`);
      expectClose([...star.com_B], [...whole.com], { abs: 1e-13 }, `${rig.name} centre`);
      const inertia = starInertia(model, rest, whole.com);
      expectClose([...inertia], [...whole.inertia], { rel: 1e-11, abs: 1e-13 }, `${rig.name} inertia`);
    }
  });
  it('weigh as much as its pieces', () => {
    const mass = (rig: Rig) => combineBodies(rigPieces(rig));
    const apart = mass(STRIDER);
    const sum = rigPieces(STRIDER).reduce((total, piece) => total + piece.mass, 0);
    expectClose(apart.mass, sum, { rel: 1e-14 });
  });
  it('weigh the walker at about 6 kg', () => {
    const { whole } = compiled(STRIDER);
    expect(whole.mass).toBeGreaterThan(5.5);
    expect(whole.mass).toBeLessThan(6.5);
    expectClose([whole.com[1]], [0], { abs: 1e-12 });
  });
});

describe('legs', () => {
  it('keep their link lengths and bend forward', () => {
    const knee = new Float64Array(3);
    placeKnee([0, 0.05, 0.3], [0.02, 0.06, 0], 0.16, 0.17, knee);
    expectClose(Math.hypot(knee[0]!, knee[1]! - 0.05, knee[2]! - 0.3), 0.16, { rel: 1e-13 });
    expectClose(Math.hypot(knee[0]! - 0.02, knee[1]! - 0.06, knee[2]!), 0.17, { rel: 1e-13 });
    expect(knee[0]).toBeGreaterThan(0.02);
  });
  it('stand left before right, front before back', () => {
    if (STRIDER.body.kind !== 'legged') throw new Error('legged');
    const hips = hipPositions({ ...STRIDER.body, legs: 4, hips: { width: 0.2, pitch: 0.4, height: 0.3 } });
    expect(hips).toEqual([
      [0.2, 0.1, 0.3],
      [0.2, -0.1, 0.3],
      [-0.2, 0.1, 0.3],
      [-0.2, -0.1, 0.3],
    ]);
  });
});

describe('the gate refuses parts that cannot stand together', () => {
  const gyro = STRIDER.array.gyros[0]!;
  const withGyro = (change: object): Rig => ({ ...STRIDER, array: { gyros: [{ ...gyro, ...change }] } });
  const legged = STRIDER.body.kind === 'legged' ? STRIDER.body : undefined;
  const cases: readonly [string, Rig, RegExp][] = [
    [
      'hips too high',
      { ...STRIDER, body: { ...legged!, hips: { ...legged!.hips, height: 0.5 } } },
      /body\.hips\.height: the hips at 500 mm are 500 mm from the feet, and thigh and shank reach 320 mm/,
    ],
    [
      'an axis of no length',
      withGyro({ gimbalAxis: [0, 0, 0] }),
      /array\.gyros\[0\]\.gimbalAxis: has no length/,
    ],
    [
      'a wheel spun about its gimbal axis',
      withGyro({ spinAxis: [0, 1, 0] }),
      /array\.gyros\[0\]\.spinAxis: is 0° from the gimbal axis/,
    ],
    [
      'gears without a leader',
      withGyro({ drive: { kind: 'geared', leader: 0, ratio: -1 } }),
      /drive\.leader: names gyro 0, which has no servo/,
    ],
    ['gears of no ratio', withGyro({ drive: { kind: 'geared', leader: 1, ratio: 0 } }), /drive\.ratio: is 0/],
    [
      'a rim inside out',
      withGyro({
        wheel: {
          ...gyro.wheel,
          parts: [
            {
              kind: 'rim',
              outerRadius: 0.03,
              innerRadius: 0.04,
              width: 0.01,
              material: 'brass C36000',
              offset: 0,
            },
          ],
        },
      }),
      /array\.gyros\[0\]\.wheel\..*(inner|outer)Radius/,
    ],
    [
      'a walker that floats',
      {
        ...STRIDER,
        footing: { kind: 'float', density: 1025, addedInertia: 0, linearDamping: 0, quadraticDamping: 0 },
      },
      /"float" needs a hull/,
    ],
    [
      'a hull with feet',
      { ...DEMONSTRATIONS[2]!.rig, footing: { kind: 'firm', friction: 0.5, margin: 0 } },
      /"firm" needs feet/,
    ],
    [
      'a hull too heavy for its water',
      {
        ...DEMONSTRATIONS[2]!.rig,
        payloads: [{ name: 'Anvil', mass: 90000, size: [1, 1, 1], position: [0, 0, 1] }],
      },
      /body\.section: the rig weighs .* sinks under more than/,
    ],
  ];
  it.each(cases)('%s', (_name, rig, expected) => {
    expect(sentences(rig)).toMatch(expected);
  });
});
