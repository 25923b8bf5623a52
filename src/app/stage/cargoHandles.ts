/** Grips on what the body carries: gyros and payloads. */
import { type Gyro, GyroSchema, type Payload, PayloadSchema, type QuantityInfo } from '../../core/rig';
import { type Point, wheelExtent } from './bodyPlaces';
import { AXES, type Handle, infoOf, slideHandle, type TurnHandle } from './handleTypes';
import {
  type AxisTurn,
  axisAngle,
  gimbalFrame,
  moveGyro,
  movePayload,
  setTiltLimit,
  turnAbout,
  turnAxis,
  turnGyro,
} from './partEdits';

const DEGREE = Math.PI / 180;

/** Where the protractor stands, from the middle of the wheel along the gimbal axis, and how large, in wheel radii. */
export const PROTRACTOR_STANDS = 1.42;
export const PROTRACTOR_RADIUS = 1.05;

/** Grips for place stand clear of the wheel by this many of its radii, those that turn its axis further out. */
const PLACES_STAND = 1.75;
const TURNS_STAND = 2.2;

/** CSS pixels from the middle of a small wheel at which its grips still keep clear of each other. */
const LEAST = { place: 74, limit: 58, turn: 118 } as const;

const AXIS_INDICES = [0, 1, 2] as const;

/** Everything that can be dragged on one gyro. */
export function gyroHandles(gyro: Gyro, index: number, isAlone: boolean, step: number): readonly Handle[] {
  const turns = (['heading', 'skew'] as const)
    .filter((turn) => turn === 'skew' || Math.hypot(gyro.gimbalAxis[0], gyro.gimbalAxis[1]) > 1e-6)
    .map((turn) => axisHandle(gyro, index, turn, isAlone));
  const limits = gyro.drive.kind === 'locked' ? [] : limitHandles(gyro, index, isAlone);
  return [...placeHandles(gyro, index, isAlone, step), ...limits, ...turns];
}

function placeHandles(gyro: Gyro, index: number, isAlone: boolean, step: number): readonly Handle[] {
  const { radius } = wheelExtent(gyro.wheel.parts);
  return AXIS_INDICES.map((axis) =>
    slideHandle(GyroSchema.entries.position.items[axis], axis, {
      id: `gimbal ${'xyz'[axis]}`,
      at: gyro.position,
      clear: PLACES_STAND * radius,
      leastPixels: LEAST.place,
      value: gyro.position[axis],
      step,
      write: (rig, value) => moveGyro(rig, index, axis, value, isAlone),
    }),
  );
}

function limitHandles(gyro: Gyro, index: number, isAlone: boolean): readonly TurnHandle[] {
  const { radius } = wheelExtent(gyro.wheel.parts);
  const { g, s } = gimbalFrame(gyro);
  const [x, y, z] = gyro.position;
  const stand = PROTRACTOR_STANDS * radius;
  return (['min', 'max'] as const).map((end) => ({
    kind: 'turn',
    id: `tilt ${end}`,
    info: infoOf(GyroSchema.entries.tilt.entries[end]),
    keys: 'none',
    value: gyro.tilt[end],
    step: DEGREE,
    write: (rig, value) => setTiltLimit(rig, index, end, value, isAlone),
    centre: [x + g[0] * stand, y + g[1] * stand, z + g[2] * stand],
    normal: g,
    zero: s,
    radius: 1.3 * PROTRACTOR_RADIUS * radius,
    leastPixels: LEAST.limit,
    isAbsolute: true,
  }));
}

const AXIS_INFOS: Readonly<Record<AxisTurn, QuantityInfo>> = {
  heading: {
    label: 'Gimbal axis, from forward to the left',
    dimension: 'angle',
    min: -Math.PI,
    max: Math.PI,
  },
  skew: { label: 'Gimbal axis above the level', dimension: 'angle', min: -Math.PI / 2, max: Math.PI / 2 },
};

/** How far the grips that turn an axis stand from its own far end, rad: both clear of the bearing and each other. */
const GRIP_OFFSET = 0.6;

function axisHandle(gyro: Gyro, index: number, turn: AxisTurn, isAlone: boolean): TurnHandle {
  const { radius } = wheelExtent(gyro.wheel.parts);
  const { g } = gimbalFrame(gyro);
  const normal = turnAxis(gyro, turn);
  const level = Math.hypot(g[0], g[1]) || 1;
  const far: Point = turn === 'heading' ? [-g[0] / level, -g[1] / level, 0] : [-g[0], -g[1], -g[2]];
  return {
    kind: 'turn',
    id: `gimbal ${turn}`,
    info: AXIS_INFOS[turn],
    keys: 'none',
    value: axisAngle(gyro, turn),
    step: 5 * DEGREE,
    write: (rig, next) => {
      const now = rig.array.gyros[index];
      return now ? turnGyro(rig, index, turn, next - axisAngle(now, turn), isAlone) : rig;
    },
    centre: gyro.position,
    normal,
    zero: turnAbout(far, normal, GRIP_OFFSET),
    radius: TURNS_STAND * radius,
    leastPixels: LEAST.turn,
    isAbsolute: false,
  };
}

export function payloadHandles(payload: Payload, index: number, step: number): readonly Handle[] {
  return AXES.map((_, i) => {
    const axis = AXIS_INDICES[i];
    return slideHandle(PayloadSchema.entries.position.items[axis], axis, {
      id: `payload ${'xyz'[axis]}`,
      at: payload.position,
      clear: payload.size[axis] / 2,
      leastPixels: 24,
      value: payload.position[axis],
      step,
      write: (rig, value) => movePayload(rig, index, axis, value),
    });
  });
}
