/** The edits that handles make: a rig in, a rig out. Nothing here knows of pointers or pictures. */
import type { Gyro, Rig } from '../../core/rig';
import type { Point } from './bodyPlaces';

const withGyros = (rig: Rig, change: (gyro: Gyro, index: number) => Gyro): Rig => ({
  ...rig,
  array: { ...rig.array, gyros: rig.array.gyros.map(change) },
});

const withCoordinate = (p: Point, axis: number, value: number): [number, number, number] => [
  axis === 0 ? value : p[0],
  axis === 1 ? value : p[1],
  axis === 2 ? value : p[2],
];

/** Nearer than this, two coordinates count as the same, m. */
const SAME_PLACE = 1e-6;

/**
 * Moves a gyro along one body axis. When the gyros are not each on their own the layout keeps its symmetry:
 * those on the same side of the array's middle go along, those opposite go the other way, and when the one
 * that is moved lies in the middle all move together.
 */
export function moveGyro(rig: Rig, index: number, axis: number, value: number, isAlone: boolean): Rig {
  const { gyros } = rig.array;
  const moved = gyros[index];
  if (!moved) return rig;
  const by = value - moved.position[axis];
  const middle = gyros.reduce((sum, g) => sum + g.position[axis], 0) / gyros.length;
  const side = sideOf(moved.position[axis] - middle);
  return withGyros(rig, (gyro, i) => {
    if (i === index) return { ...gyro, position: withCoordinate(gyro.position, axis, value) };
    if (isAlone) return gyro;
    const share = side === 0 ? 1 : side * sideOf(gyro.position[axis] - middle);
    if (share === 0) return gyro;
    return { ...gyro, position: withCoordinate(gyro.position, axis, gyro.position[axis] + share * by) };
  });
}

const sideOf = (offset: number): number => (Math.abs(offset) < SAME_PLACE ? 0 : Math.sign(offset));

/**
 * Sets one tilt limit of a gyro. A geared pair has one limit between them: what the leader may do up, a
 * follower geared the other way round may do down. Others follow unless the gyros are each on their own.
 */
export function setTiltLimit(
  rig: Rig,
  index: number,
  end: 'min' | 'max',
  value: number,
  isAlone: boolean,
): Rig {
  const moved = rig.array.gyros[index];
  if (!moved) return rig;
  const other = end === 'min' ? 'max' : 'min';
  const directionOf = (gyro: Gyro): number =>
    gyro.drive.kind === 'geared' ? Math.sign(gyro.drive.ratio) || 1 : 1;
  const leaderOf = (gyro: Gyro, i: number): number => (gyro.drive.kind === 'geared' ? gyro.drive.leader : i);
  const leader = leaderOf(moved, index);
  return withGyros(rig, (gyro, i) => {
    const isGeared = leaderOf(gyro, i) === leader;
    if (i !== index && isAlone && !isGeared) return gyro;
    const isMirrored = directionOf(gyro) !== directionOf(moved);
    const limit = isMirrored ? { [other]: -value } : { [end]: value };
    return { ...gyro, tilt: { ...gyro.tilt, ...limit } };
  });
}

/** Turns a vector about a unit axis by an angle (Rodrigues). */
export function turnAbout(v: Point, axis: Point, angle: number): [number, number, number] {
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  const along = (v[0] * axis[0] + v[1] * axis[1] + v[2] * axis[2]) * (1 - c);
  return [
    v[0] * c + (axis[1] * v[2] - axis[2] * v[1]) * s + axis[0] * along,
    v[1] * c + (axis[2] * v[0] - axis[0] * v[2]) * s + axis[1] * along,
    v[2] * c + (axis[0] * v[1] - axis[1] * v[0]) * s + axis[2] * along,
  ];
}

const unit = (v: Point): Point => {
  const size = Math.hypot(...v) || 1;
  return [v[0] / size, v[1] / size, v[2] / size];
};

const cross = (a: Point, b: Point): Point => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

/** Unit vectors of a gimbal: its axis, the spin axis at rest made square to it, and the third one. */
export function gimbalFrame(gyro: Pick<Gyro, 'gimbalAxis' | 'spinAxis'>): { g: Point; s: Point; t: Point } {
  const g = unit(gyro.gimbalAxis);
  const along = gyro.spinAxis[0] * g[0] + gyro.spinAxis[1] * g[1] + gyro.spinAxis[2] * g[2];
  const across: Point = [
    gyro.spinAxis[0] - along * g[0],
    gyro.spinAxis[1] - along * g[1],
    gyro.spinAxis[2] - along * g[2],
  ];
  const fallback: Point = Math.abs(g[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0];
  const s = Math.hypot(...across) > 1e-6 ? unit(across) : unit(cross(cross(g, fallback), g));
  return { g, s, t: cross(g, s) };
}

/** Which way a gimbal axis is turned: about the body's vertical, or towards its own spin axis. */
export type AxisTurn = 'heading' | 'skew';

/** Angle a gimbal axis stands at, rad: heading from forward to the left, or skew above the horizontal. */
export function axisAngle(gyro: Gyro, turn: AxisTurn): number {
  const { g } = gimbalFrame(gyro);
  return turn === 'heading' ? Math.atan2(g[1], g[0]) : Math.asin(Math.min(1, Math.max(-1, g[2])));
}

/** Axis about which a turn of a gyro's axes goes, unit vector, body frame. */
export const turnAxis = (gyro: Gyro, turn: AxisTurn): Point => {
  if (turn === 'heading') return [0, 0, 1];
  const { g } = gimbalFrame(gyro);
  const level = Math.hypot(g[0], g[1]);
  // The horizontal square to the axis, so that a positive turn raises it; an upright axis falls back to its frame's.
  return level > 1e-6 ? [g[1] / level, -g[0] / level, 0] : gimbalFrame(gyro).t;
};

const tidy = (v: Point): [number, number, number] => {
  const clean = (x: number) => {
    const rounded = Math.round(x * 1e12) / 1e12;
    return rounded === 0 ? 0 : Math.min(1, Math.max(-1, rounded));
  };
  return [clean(v[0]), clean(v[1]), clean(v[2])];
};

/** Turns a gyro's gimbal and spin axes together by an angle; the others like it turn as far about their own. */
export function turnGyro(rig: Rig, index: number, turn: AxisTurn, by: number, isAlone: boolean): Rig {
  return withGyros(rig, (gyro, i) => {
    if (i !== index && isAlone) return gyro;
    const axis = turnAxis(gyro, turn);
    return {
      ...gyro,
      gimbalAxis: tidy(turnAbout(gyro.gimbalAxis, axis, by)),
      spinAxis: tidy(turnAbout(gyro.spinAxis, axis, by)),
    };
  });
}

export const movePayload = (rig: Rig, index: number, axis: number, value: number): Rig => ({
  ...rig,
  payloads: rig.payloads.map((payload, i) =>
    i === index ? { ...payload, position: withCoordinate(payload.position, axis, value) } : payload,
  ),
});
