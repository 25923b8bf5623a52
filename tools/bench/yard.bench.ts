/**
 * The yard against the star on a body that stands on an edge with a free tilting pair, pushed and let go: the largest
 * error of roll over the first second as a share of the roll's peak. Beside it cannon-es used as it comes, the wheels
 * as bodies that spin on hinges. Then what a step of the yard costs while a rig walks.
 */
import { Body, HingeConstraint, Vec3, World } from 'cannon-es';
import { type CompiledRig, simulateExactly } from '../../src/core/physics';
import { BENCH_GYRO, layOut, PACER, type Rig, STRIDER } from '../../src/core/rig';
import { AS_DRAWN, compiledOf, EDGE_RIG, yardOf } from '../../tests/support/yardCases';
import type { Row } from './row';

const PUSH_HEIGHT = 0.4;
const SAMPLES = 50;

/** N, to the left: rises and falls smoothly over a fifth of a second. */
const pushAt = (time: number): number => (time < 0.2 ? 2 * (1 - Math.cos(10 * Math.PI * time)) : 0);

const PAIR_RIG: Rig = {
  ...EDGE_RIG,
  array: {
    gyros: layOut(
      'scissored pair',
      {
        ...BENCH_GYRO,
        gimbal: { ...BENCH_GYRO.gimbal, stiction: 0, friction: 0 },
        tilt: { min: -3, max: 3 },
        drive: { kind: 'free', stiffness: 0, damping: 0, centreOffset: [0, 0, 0.02] },
      },
      { centre: [0, 0, 0.4], spacing: 0.13, skew: 0 },
    ),
  },
};

/** Roll at even times over a second, integrated to eleven digits. */
function exactRoll(compiled: CompiledRig): Float64Array {
  const gyros = compiled.star.gyros.map(({ friction: _none, ...gyro }) => gyro);
  const columns = simulateExactly(
    { ...compiled.star, gyros },
    { wheelSpeed: Array.from(compiled.speeds) },
    1,
    SAMPLES,
    1e-11,
    (time, state, effort) => {
      effort.fill(0);
      effort[4] = -PUSH_HEIGHT * pushAt(time) * Math.cos(state[0] as number);
    },
  );
  return columns.pose[0] as Float64Array;
}

interface Run {
  readonly roll: readonly number[];
  readonly milliseconds: number;
}

function runYard(step: number): Run {
  const yard = yardOf(PAIR_RIG, { doubt: AS_DRAWN, step });
  return timeRun(
    step,
    () => yard.lean,
    (time) => {
      const force = pushAt(time);
      if (force > 0) yard.push([0, force, 0], [0, 0, PUSH_HEIGHT], step);
      yard.run(1);
    },
  );
}

function timeRun(step: number, lean: () => number, advance: (time: number) => void): Run {
  const roll = [lean()];
  const steps = Math.round(1 / step);
  const start = performance.now();
  for (let k = 0; k < steps; k++) {
    advance((k + 0.5) * step);
    if (Math.floor(((k + 1) * SAMPLES) / steps) > Math.floor((k * SAMPLES) / steps)) roll.push(lean());
  }
  return { roll, milliseconds: (performance.now() - start) / steps };
}

/** cannon-es as it comes: base, gimbal frames and rotors as bodies on hinges; inertias set, the rest its own. */
function runPlain(compiled: CompiledRig, step: number): Run {
  const { star, speeds } = compiled;
  const world = new World({ gravity: new Vec3(0, 0, -9.80665) });
  const add = (mass: number, at: readonly number[], inertia: readonly number[]): Body => {
    const body = new Body({
      mass,
      position: new Vec3(at[0], at[1], at[2]),
      linearDamping: 0,
      angularDamping: 0,
    });
    body.inertia.set(inertia[0] as number, inertia[1] as number, inertia[2] as number);
    body.invInertia.set(1 / body.inertia.x, 1 / body.inertia.y, 1 / body.inertia.z);
    body.updateInertiaWorld(true);
    world.addBody(body);
    return body;
  };
  const hinge = (a: Body, b: Body, at: readonly number[], axis: readonly number[]): void => {
    const point = new Vec3(at[0], at[1], at[2]);
    const along = new Vec3(axis[0], axis[1], axis[2]);
    world.addConstraint(
      new HingeConstraint(a, b, {
        pivotA: point.vsub(a.position),
        pivotB: point.vsub(b.position),
        axisA: along,
        axisB: along,
        collideConnected: false,
        maxForce: 1e9,
      }),
    );
  };
  const ground = new Body({ mass: 0 });
  world.addBody(ground);
  const base = add(star.base.mass, star.base.com, star.base.inertia);
  hinge(ground, base, [0, 0, 0], [1, 0, 0]);
  star.gyros.forEach((gyro, i) => {
    const at = gyro.position.map((value, k) => value + (gyro.frame.com[k] as number));
    const frame = add(gyro.frame.mass, at, gyro.frame.inertia);
    hinge(base, frame, gyro.position, gyro.gimbalAxis);
    const { mass, axialInertia, transverseInertia } = gyro.wheel;
    const rotor = add(mass, gyro.position, [transverseInertia, transverseInertia, axialInertia]);
    const speed = speeds[i] as number;
    const [x, y, z] = gyro.spinAxis;
    rotor.angularVelocity.set(x * speed, y * speed, z * speed);
    hinge(frame, rotor, gyro.position, gyro.spinAxis);
  });
  const arm = new Vec3();
  const lean = (): number => 2 * Math.atan2(base.quaternion.x, base.quaternion.w);
  return timeRun(step, lean, (time) => {
    arm.set(0, 0, PUSH_HEIGHT - base.position.z);
    base.applyForce(new Vec3(0, pushAt(time), 0), arm);
    world.step(step);
  });
}

function errorOf(roll: readonly number[], exact: Float64Array): number {
  const peak = Math.max(...exact.map(Math.abs));
  return Math.max(...exact.map((value, k) => Math.abs((roll[k] as number) - value))) / peak;
}

/** ms a step, median of five runs of a second. */
function walkCost(rig: Rig): number {
  const costs = Array.from({ length: 5 }, () => {
    const yard = yardOf(rig);
    yard.run(200);
    const start = performance.now();
    yard.run(1000);
    return (performance.now() - start) / 1000;
  });
  return costs.sort((a, b) => a - b)[2] as number;
}

export async function run(): Promise<Row[]> {
  const compiled = compiledOf(PAIR_RIG);
  const exact = exactRoll(compiled);
  const yard = runYard(0.001);
  const yardError = errorOf(yard.roll, exact);
  const rows: Row[] = [
    {
      name: 'yard: error of roll over the first second, 1 ms step, of the peak',
      value: 100 * yardError,
      unit: '%',
      target: 'at most 2',
      ok: yardError <= 0.02,
    },
    { name: 'yard: peak of that roll by the star', value: Math.max(...exact.map(Math.abs)), unit: 'rad' },
    { name: 'yard: cost of its step', value: yard.milliseconds, unit: 'ms' },
  ];
  for (const [words, step] of [
    ['1/240 s', 1 / 240],
    ['1 ms', 0.001],
    ['0.1 ms', 0.0001],
  ] as const) {
    const plain = runPlain(compiled, step);
    rows.push({
      name: `cannon-es as it comes, rotors as bodies: the same error at ${words}`,
      value: 100 * errorOf(plain.roll, exact),
      unit: '%',
    });
  }
  for (const rig of [STRIDER, PACER]) {
    const cost = walkCost(rig);
    rows.push({
      name: `yard: step of 1 ms while ${rig.name} walks`,
      value: cost,
      unit: 'ms',
      target: 'below 1, or it is slower than what it shows',
      ok: cost < 1,
    });
  }
  return rows;
}
