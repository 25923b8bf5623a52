/** The rig the engines are compared on: a body on an edge, wheels in free gimbals, neutral, coasting. */
import type { StarStart } from '../../src/core/physics/freeMotion';
import type { StarDescription, StarGyro } from '../../src/core/physics/starModel';

const axialInertia = 1.44e-3;

/** Gyro i of n: spins alternate up and down, gimbals across, stacked along x. */
function gyro(i: number, n: number): StarGyro {
  const sense = i % 2 === 0 ? 1 : -1;
  return {
    position: [0.08 * (i - (n - 1) / 2), 0, 0.25],
    gimbalAxis: [0, sense, 0],
    spinAxis: [0, 0, sense],
    frame: { mass: 0.15, com: [0, 0, 0], inertia: [3e-4, 4e-4, 3e-4, 0, 0, 0] },
    wheel: { mass: 0.5, axialInertia, transverseInertia: 0.55 * axialInertia, centre: [0, 0, 0] },
    drive: { kind: 'free', stiffness: 0, restTilt: 0, damping: 0 },
    spin: 'coasting',
  };
}

export const benchStar = (n: number): StarDescription => ({
  base: { mass: 5, com: [0, 0, 0.2], inertia: [0.06, 0.05, 0.04, 0, 0, 0] },
  gyros: Array.from({ length: n }, (_, i) => gyro(i, n)),
  footing: { kind: 'edge', point: [0, 0, 0], axis: [1, 0, 0] },
  gravity: [0, 0, -9.81],
});

export const benchStart = (n: number): StarStart => ({
  pose: [0],
  baseSpeeds: [0.4],
  tilt: Array.from({ length: n }, () => 0.1),
  wheelSpeed: Array.from({ length: n }, () => 800),
});
