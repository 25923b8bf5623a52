/** Random valid stars from a seed, for property tests and cross-checks. */
import type { StarFooting } from '../../../src/core/physics/footing';
import type { StarStart } from '../../../src/core/physics/freeMotion';
import type { Sym3, Vec3 } from '../../../src/core/physics/spatial';
import type { StarDescription, StarDrive, StarGyro, StarSpin } from '../../../src/core/physics/starModel';

/** Mulberry32: a small seeded generator, uniform on [0, 1). */
export function createRandom(seed: number): () => number {
  let a = seed >>> 0;
  return () => {
    a = (a + 0x6d2b79f5) >>> 0;
    let t = a;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

export type Random = () => number;
export const between = (random: Random, low: number, high: number): number => low + (high - low) * random();
export const pick = <T>(random: Random, from: readonly T[]): T => from[Math.floor(random() * from.length)]!;

export const randomVector = (random: Random, size: number): Vec3 => [
  between(random, -size, size),
  between(random, -size, size),
  between(random, -size, size),
];

/** A direction away from zero length. */
export function randomDirection(random: Random): Vec3 {
  for (;;) {
    const v = randomVector(random, 1);
    const n = Math.hypot(...v);
    if (n > 0.2 && n <= 1) return v;
  }
}

/** A possible inertia: that of a few point masses. */
export function randomInertia(random: Random, mass: number, size: number): Sym3 {
  const I: [number, number, number, number, number, number] = [0, 0, 0, 0, 0, 0];
  for (let k = 0; k < 6; k++) {
    const [x, y, z] = randomVector(random, size);
    const m = mass / 6;
    I[0] += m * (y * y + z * z);
    I[1] += m * (x * x + z * z);
    I[2] += m * (x * x + y * y);
    I[3] -= m * x * y;
    I[4] -= m * x * z;
    I[5] -= m * y * z;
  }
  return I;
}

export interface StarChoice {
  readonly gyros: number;
  readonly footing: StarFooting['kind'];
  readonly drives: readonly StarDrive['kind'][];
  readonly spins: readonly StarSpin[];
  /** Ball and all-freedom variants of rocker and float. */
  readonly isSpatial?: boolean;
}

export function randomGyro(random: Random, drive: StarDrive['kind'], spin: StarSpin): StarGyro {
  const frameMass = between(random, 0.05, 0.4);
  const wheelMass = between(random, 0.1, 0.8);
  const radius = between(random, 0.03, 0.07);
  const axialInertia = wheelMass * radius * radius * between(random, 0.5, 0.95);
  const transverseInertia = axialInertia * between(random, 0.52, 0.9);
  const drives: Record<StarDrive['kind'], StarDrive> = {
    servo: { kind: 'servo', input: 'torque', reflectedInertia: between(random, 0, 1e-4) },
    free: {
      kind: 'free',
      stiffness: between(random, 0, 2),
      restTilt: between(random, -0.3, 0.3),
      damping: between(random, 0, 0.02),
    },
    locked: { kind: 'locked' },
  };
  return {
    position: randomVector(random, 0.2),
    gimbalAxis: randomDirection(random),
    spinAxis: randomDirection(random),
    frame: {
      mass: frameMass,
      com: randomVector(random, 0.02),
      inertia: randomInertia(random, frameMass, 0.05),
    },
    wheel: { mass: wheelMass, axialInertia, transverseInertia, centre: randomVector(random, 0.02) },
    drive: drives[drive],
    spin,
  };
}

export function randomFooting(random: Random, kind: StarFooting['kind'], isSpatial: boolean): StarFooting {
  switch (kind) {
    case 'firm':
      return {
        kind,
        support: [
          [-0.1, -0.1],
          [0.1, -0.1],
          [0.1, 0.1],
          [-0.1, 0.1],
        ],
        soleHeight: -0.2,
      };
    case 'edge':
      return { kind, point: randomVector(random, 0.2), axis: randomDirection(random) };
    case 'point':
      return { kind, point: randomVector(random, 0.2) };
    case 'rocker': {
      const angle = between(random, -Math.PI, Math.PI);
      return {
        kind,
        shape: isSpatial ? 'ball' : 'cylinder',
        centre: randomVector(random, 0.1),
        radius: between(random, 0.05, 0.4),
        axis: [Math.cos(angle), Math.sin(angle), 0],
      };
    }
    case 'float':
      return {
        kind,
        freedoms: isSpatial ? 'all' : 'roll',
        point: randomVector(random, 0.05),
        righting: { kind: 'metacentric', metacentricHeight: between(random, 0.02, 0.2) },
        addedInertia: between(random, 0, 0.05),
        linearDamping: between(random, 0, 0.1),
        quadraticDamping: between(random, 0, 0.1),
        heave: { stiffness: between(random, 100, 2000), damping: between(random, 0, 20) },
        pitch: { metacentricHeight: between(random, 0.1, 0.5), damping: between(random, 0, 0.3) },
      };
    case 'free':
      return { kind };
  }
}

export function randomStar(random: Random, choice: StarChoice): StarDescription {
  const mass = between(random, 1, 8);
  return {
    base: { mass, com: randomVector(random, 0.15), inertia: randomInertia(random, mass, 0.25) },
    gyros: Array.from({ length: choice.gyros }, () =>
      randomGyro(random, pick(random, choice.drives), pick(random, choice.spins)),
    ),
    footing: randomFooting(random, choice.footing, choice.isSpatial ?? false),
    gravity: [between(random, -2, 2), between(random, -2, 2), -9.80665],
  };
}

const poseSizes = { none: 0, angle: 1, attitude: 4, 'rolling-ball': 6, free: 7 } as const;
const speedSizes = { none: 0, angle: 1, attitude: 3, 'rolling-ball': 3, free: 6 } as const;

/** A random start: unit quaternion, moderate speeds, wheels at hundreds of rad/s. Locked gimbals stand still. */
export function randomStart(
  random: Random,
  description: StarDescription,
  pose: keyof typeof poseSizes,
  size = 1,
): StarStart {
  const numbers = (count: number, k: number): number[] =>
    Array.from({ length: count }, () => between(random, -k, k));
  const q = numbers(4, 1);
  const n = Math.hypot(...q);
  const attitude = q.map((x) => x / n);
  const poses: Record<keyof typeof poseSizes, number[]> = {
    none: [],
    angle: numbers(1, size),
    attitude,
    'rolling-ball': [...attitude, ...numbers(2, 0.1)],
    free: [...attitude, ...numbers(3, 0.1)],
  };
  const locked = description.gyros.map((g) => g.drive.kind === 'locked');
  return {
    pose: poses[pose],
    baseSpeeds: numbers(speedSizes[pose], size),
    tilt: numbers(locked.length, size),
    tiltRate: locked.map((isLocked) => (isLocked ? 0 : between(random, -size, size))),
    wheelSpeed: numbers(locked.length, 400),
  };
}
