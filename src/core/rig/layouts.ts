import type { Gyro } from './schema';

export const LAYOUTS = ['single', 'scissored pair', 'two pairs', 'pyramid', 'reaction wheel'] as const;
export type Layout = (typeof LAYOUTS)[number];

type Vector = readonly [number, number, number];

/** Where and how a layout is put on a body. */
export interface LayoutPlace {
  /** Middle of the array, m, body frame. */
  readonly centre: Vector;
  /** Distance between the two gimbals of a pair, or across a pyramid, m. */
  readonly spacing: number;
  /** Skew of a pyramid's gimbal axes from the vertical, rad. */
  readonly skew: number;
}

const place = (gyro: Gyro, changes: Partial<Gyro>): Gyro => ({ ...gyro, ...changes });

const at = (centre: Vector, x: number, y: number, z = 0): [number, number, number] => [
  centre[0] + x,
  centre[1] + y,
  centre[2] + z,
];

/**
 * Fills an array with gyros in a usual layout, all alike to the pattern given.
 *
 * The spin axes of a roll pair stand upright at rest, turning opposite ways, the gimbal axes across the
 * body (y), so that tilting them by opposite angles pushes in roll and the yaw and pitch parts cancel.
 * A pyramid has four gimbal axes leaning out by the skew, as in Wie, Space Vehicle Dynamics and Control, ch. 7.
 */
export function layOut(layout: Layout, pattern: Gyro, where: LayoutPlace): readonly Gyro[] {
  const { centre, spacing } = where;
  const half = spacing / 2;
  const servo = pattern.drive.kind === 'servo' ? pattern.drive : undefined;
  const leaderDrive = servo ?? pattern.drive;
  const follow = (leader: number): Gyro['drive'] =>
    servo ? { kind: 'geared', leader, ratio: -1 } : pattern.drive;
  const held = { kind: 'held' } as const;
  switch (layout) {
    case 'single':
      return [
        place(pattern, {
          name: 'Wheel',
          position: at(centre, 0, 0),
          gimbalAxis: [0, 1, 0],
          spinAxis: [0, 0, 1],
          sense: 1,
          drive: leaderDrive,
          spin: held,
        }),
      ];
    case 'scissored pair':
      return rollPair(pattern, centre, half, leaderDrive, follow(0));
    case 'two pairs': {
      const roll = rollPair(pattern, at(centre, 0, 0), half, leaderDrive, follow(0));
      const pitch = [1, -1].map((side, index) =>
        place(pattern, {
          name: side > 0 ? 'Pitch left' : 'Pitch right',
          position: at(centre, 0, side * half),
          gimbalAxis: [1, 0, 0],
          spinAxis: [0, 0, 1],
          sense: side > 0 ? 1 : -1,
          drive: index === 0 ? leaderDrive : follow(2),
          spin: held,
        }),
      );
      return [...roll, ...pitch];
    }
    case 'pyramid': {
      const sin = Math.sin(where.skew);
      const cos = Math.cos(where.skew);
      // Each spin axis at rest lies so that h = sum of the columns printed by Wie for tilt = 0.
      const faces: readonly (readonly [Vector, Vector, string])[] = [
        [[sin, 0, cos], [0, 1, 0], 'Front'],
        [[0, sin, cos], [-1, 0, 0], 'Left'],
        [[-sin, 0, cos], [0, -1, 0], 'Back'],
        [[0, -sin, cos], [1, 0, 0], 'Right'],
      ];
      return faces.map(([gimbalAxis, spinAxis, name]) =>
        place(pattern, {
          name,
          position: at(
            centre,
            Math.sign(Math.round(gimbalAxis[0] * 1e9)) * half,
            Math.sign(Math.round(gimbalAxis[1] * 1e9)) * half,
          ),
          gimbalAxis: [...gimbalAxis],
          spinAxis: [...spinAxis],
          sense: 1,
          drive: leaderDrive,
          spin: held,
        }),
      );
    }
    case 'reaction wheel':
      return [
        place(pattern, {
          name: 'Reaction wheel',
          position: at(centre, 0, 0),
          gimbalAxis: [0, 1, 0],
          spinAxis: [1, 0, 0],
          speed: 0,
          sense: 1,
          drive: { kind: 'locked' },
          spin: { kind: 'actuated', torque: stallTorque(pattern) },
        }),
      ];
  }
}

function rollPair(
  pattern: Gyro,
  centre: Vector,
  half: number,
  leader: Gyro['drive'],
  follower: Gyro['drive'],
): readonly Gyro[] {
  return [1, -1].map((side, index) =>
    place(pattern, {
      name: side > 0 ? 'Front' : 'Back',
      position: at(centre, side * half, 0),
      gimbalAxis: [0, 1, 0],
      spinAxis: [0, 0, 1],
      sense: side > 0 ? 1 : -1,
      drive: index === 0 ? leader : follower,
      spin: { kind: 'held' },
    }),
  );
}

/** Torque of the pattern's motor at its controller's current limit, N·m. */
const stallTorque = (gyro: Gyro): number => gyro.motor.currentLimit / gyro.motor.velocityConstant;

/** Which layout an array was filled in from, judged by its axes; undefined when it has been changed beyond them. */
export function recogniseLayout(gyros: readonly Gyro[]): Layout | undefined {
  const along = (axis: Vector, i: number) => Math.abs(axis[i] as number) > 0.999;
  if (gyros.length === 1) {
    const only = gyros[0] as Gyro;
    if (only.drive.kind === 'locked' && only.spin.kind === 'actuated') return 'reaction wheel';
    return along(only.gimbalAxis, 1) ? 'single' : undefined;
  }
  if (gyros.length === 2) return gyros.every((g) => along(g.gimbalAxis, 1)) ? 'scissored pair' : undefined;
  if (gyros.length !== 4) return undefined;
  if (gyros.every((g, i) => along(g.gimbalAxis, i < 2 ? 1 : 0))) return 'two pairs';
  return gyros.every((g) => g.sense === 1 && Math.abs(g.gimbalAxis[2]) < 0.999) ? 'pyramid' : undefined;
}
