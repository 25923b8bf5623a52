import { Body, Box, Plane, Vec3, World } from 'cannon-es';
import { describe, expect, it } from 'vitest';
import { compileStar, simulateExactly, starInertia } from '../../../src/core/physics';
import { boxInertiaMatrix, boxShape, type YardBox } from '../../../src/yard';
import { createContactWorld } from '../../../src/yard/contactWorld';
import { MomentumBody } from '../../../src/yard/momentumBody';
import { RigBody } from '../../../src/yard/rigBody';
import { rigShapes } from '../../../src/yard/rigShapes';
import { expectClose } from '../../support/closeTo';
import { ALL_OFF, compiledOf, TOP_RIG, yardOf } from '../../support/yardCases';

const step = 0.001;

/** Steps a world whose bodies are carried by their momentum. */
function run(world: World, steps: number, dt = step): void {
  for (let k = 0; k < steps; k++) {
    for (const body of world.bodies) if (body instanceof MomentumBody) body.prepare(dt);
    world.step(dt);
  }
}

const emptyWorld = (): World => {
  const world = createContactWorld({ weight: 10, frictionOf: () => 0.6 });
  world.gravity.set(0, 0, 0);
  return world;
};

/** A rig alone in space, its wheels turning. */
function rigInSpace(rate: readonly [number, number, number]): { world: World; body: RigBody } {
  const compiled = compiledOf(TOP_RIG);
  const world = emptyWorld();
  const base = new Float64Array(16);
  base.set(compiled.model.base);
  const body = new RigBody(
    { model: compiled.model, shapes: rigShapes(compiled), free: [null], base, feet: new Float64Array(6) },
    world.gravity,
  );
  body.place([0, 0, 0], [1, 0, 0, 0], [0, 0, 0], rate, compiled.speeds);
  world.addBody(body);
  return { world, body };
}

describe('bodies carried by their momentum', () => {
  it('have the inertia that was set, read back from how they turn, and keep it when a shape is added', () => {
    const compiled = compiledOf(TOP_RIG);
    const [xx, yy, zz, xy, xz, yz] = starInertia(compiled.model, [0], compiled.whole.com);
    const inertia = [xx, xy, xz, xy, yy, yz, xz, yz, zz];
    const { body } = rigInSpace([0, 0, 0]);
    body.addShape(new Box(new Vec3(3, 2, 1)));
    expectClose(body.inertia_B, inertia, { rel: 1e-12, abs: 1e-15 });
    for (let axis = 0; axis < 3; axis++) {
      const still = rigInSpace([0, 0, 0]);
      still.body.spin.fill(0);
      still.body.place([0, 0, 0], [1, 0, 0, 0], [0, 0, 0], [0, 0, 0], [0]);
      still.body.addShape(new Box(new Vec3(3, 2, 1)));
      const torque = [0, 0, 0];
      torque[axis] = 0.01;
      still.body.torque.set(torque[0] as number, torque[1] as number, torque[2] as number);
      run(still.world, 1);
      const w = still.body.rate_B;
      const gained = [0, 1, 2].map(
        (i) =>
          inertia.slice(3 * i, 3 * i + 3).reduce((sum, value, j) => sum + value * (w[j] as number), 0) / step,
      );
      expectClose(gained, torque, { abs: 1e-9 }); // measured 1.4e-10
    }
    // What cannon-es would have given the same shapes: the box around them.
    const plain = new Body({ mass: compiled.whole.mass });
    for (const { shape } of rigShapes(compiled)) plain.addShape(shape);
    expect(Math.abs(plain.inertia.x - xx) / xx).toBeGreaterThan(0.2);
  });

  it('tumble in space with their angular momentum kept, spinning wheel and all', () => {
    const { world, body } = rigInSpace([0.4, 1.1, -0.7]);
    const before = Float64Array.from(body.momentum_W);
    run(world, 5000);
    const kept = new Float64Array(3);
    const R = body.R_WB;
    for (let i = 0; i < 3; i++) {
      let own = body.inner_B[i] as number;
      for (let j = 0; j < 3; j++) own += (body.inertia_B[3 * i + j] as number) * (body.rate_B[j] as number);
      for (let j = 0; j < 3; j++) kept[j] = (kept[j] as number) + (R[3 * j + i] as number) * own;
    }
    const size = Math.hypot(...before);
    expectClose(kept, before, { abs: 1e-12 * size }); // measured 1.3e-16 of its size after 5 s
  });

  it('turn as the star does in space, with an error that falls with the square of the step', () => {
    const compiled = compiledOf(TOP_RIG);
    const free = compileStar({ ...compiled.star, footing: { kind: 'free' }, gravity: [0, 0, 0] });
    const com = compiled.whole.com;
    const rate = [0.4, 1.1, -0.7] as const;
    const exact = simulateExactly(
      free.description,
      {
        pose: [1, 0, 0, 0, 0, 0, 0],
        baseSpeeds: [...rate, 0, 0, 0],
        wheelSpeed: Array.from(compiled.speeds),
      },
      1,
      1,
    );
    expect(com[2]).toBeGreaterThan(0.1);
    const far = (dt: number): number => {
      const { world, body } = rigInSpace(rate);
      run(world, Math.round(1 / dt), dt);
      const at = free.baseSpeedAt;
      return Math.hypot(...[0, 1, 2].map((k) => (body.rate_B[k] as number) - (exact.last[at + k] as number)));
    };
    const whole = far(0.002);
    expect(whole).toBeLessThan(2e-4); // measured 8.2e-5 rad/s of 1.4
    expectClose(whole / far(0.001), 4, { rel: 0.01 }); // measured 3.99994
  });

  it('does what plain cannon-es does not: a tumbling box there loses its momentum', () => {
    const box: YardBox = { size: [0.3, 0.2, 0.1], place: [0, 0, 0], attitude: [1, 0, 0, 0], mass: 3 };
    const plain = new World();
    const body = new Body({ mass: 3, shape: boxShape(box), linearDamping: 0, angularDamping: 0 });
    body.angularVelocity.set(3, 4, 2);
    plain.addBody(body);
    const ours = emptyWorld();
    const kept = new MomentumBody({ mass: 3, shape: boxShape(box) });
    kept.angularVelocity.set(3, 4, 2);
    kept.setMassProperties(3, boxInertiaMatrix(box));
    ours.addBody(kept);
    const momentumOf = ({ quaternion, angularVelocity, inertia }: Body): Vec3 => {
      const w = quaternion.inverse().vmult(angularVelocity);
      return quaternion.vmult(new Vec3(w.x * inertia.x, w.y * inertia.y, w.z * inertia.z));
    };
    const before = momentumOf(body);
    for (let k = 0; k < 2000; k++) plain.step(step);
    run(ours, 2000);
    expect(momentumOf(kept).vsub(before).length()).toBeLessThan(1e-12 * 2000 * before.length());
    expect(momentumOf(body).vsub(before).length()).toBeGreaterThan(0.2 * before.length()); // measured 0.47
  });
});

describe('contacts', () => {
  const block: YardBox = { size: [0.1, 0.08, 0.06], place: [0, 0, 0.4], attitude: [1, 0, 0, 0], mass: 0.3 };

  function blockOn(slope: number, friction: number, start: readonly [number, number, number]) {
    const world = createContactWorld({ weight: 3, frictionOf: () => friction });
    const ground = new Body({ mass: 0, shape: new Plane() });
    ground.quaternion.setFromAxisAngle(new Vec3(0, 1, 0), -slope);
    world.addBody(ground);
    const body = new MomentumBody({ mass: block.mass, shape: boxShape(block) });
    body.quaternion.copy(ground.quaternion);
    ground.quaternion.vmult(new Vec3(...start), body.position);
    body.setMassProperties(block.mass, boxInertiaMatrix(block));
    world.addBody(body);
    return { world, body, along: ground.quaternion.vmult(new Vec3(1, 0, 0)) };
  }

  it('lets a dropped block come to rest on its side', () => {
    const yard = yardOf(TOP_RIG, { switches: ALL_OFF });
    yard.drop({ ...block, place: [0.6, 0.6, 0.3], attitude: [0.98, 0.1, 0.15, 0.08] });
    yard.run(3000);
    const { body } = yard.objects[0] as (typeof yard.objects)[number];
    expect(body.velocity.length()).toBeLessThan(1e-4);
    expect(body.angularVelocity.length()).toBeLessThan(1e-3);
    const nearest = Math.min(...block.size.map((side) => Math.abs(body.position.z - side / 2)));
    expect(nearest).toBeLessThan(2e-5);
  });

  it('holds a block on a slope a little less than the angle of friction', () => {
    const { world, body } = blockOn(Math.atan(0.6) - 0.02, 0.6, [0, 0, 0.03]);
    run(world, 200);
    const before = body.position.clone();
    run(world, 1000);
    expect(body.position.vsub(before).length()).toBeLessThan(1e-5); // measured 4.6e-6 m
  });

  it('lets it slide a little above, as fast as friction says', () => {
    const slope = Math.atan(0.6) + 0.02;
    const { world, body, along } = blockOn(slope, 0.6, [0, 0, 0.03]);
    run(world, 200);
    const before = body.velocity.dot(along);
    run(world, 1000);
    const wanted = -9.80665 * (Math.sin(slope) - 0.6 * Math.cos(slope));
    expectClose(body.velocity.dot(along) - before, wanted, { rel: 0.001 }); // measured 1.5e-9
  });
});
