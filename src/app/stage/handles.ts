/** What can be taken hold of on the selected part, and what each grip writes into the rig. */
import { hipPositions } from '../../core/physics';
import {
  type Gyro,
  GyroSchema,
  HullBodySchema,
  InlineBodySchema,
  LeggedBodySchema,
  PayloadSchema,
  type QuantityInfo,
  quantityInfo,
  type Rig,
} from '../../core/rig';
import type { Selection } from '../state/session';
import { boxDiagonal, footThickness, type Point, rigBox, torsoCentre, wheelExtent } from './bodyPlaces';
import { lengthStep } from './dragMaths';
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
  withLegged,
} from './partEdits';

/** Which pair of keys moves a handle: left and right, up and down, or page up and page down. */
export type HandleKeys = 'across' | 'up' | 'along' | 'none';

interface HandleCommon {
  readonly id: string;
  readonly info: QuantityInfo;
  readonly keys: HandleKeys;
  /** The value a drag or key changes, SI. */
  readonly value: number;
  /** The rig with another value; the value has been snapped and kept in range. */
  readonly write: (rig: Rig, value: number) => Rig;
  /** What values snap to, SI. */
  readonly step: number;
}

export interface SlideHandle extends HandleCommon {
  readonly kind: 'slide';
  /** m, in the frame of the part: the body's, or the sole's for a foot. */
  readonly at: Point;
  /** Unit vector in the same frame: the way the value grows. */
  readonly axis: Point;
  /** Change of the value for a metre of drag: 2 for a width whose far side moves as well. */
  readonly gain: number;
}

export interface TurnHandle extends HandleCommon {
  readonly kind: 'turn';
  readonly centre: Point;
  /** Unit vector the angle is right-handed about. */
  readonly normal: Point;
  /** Unit vector at angle zero, square to the normal. */
  readonly zero: Point;
  readonly radius: number;
  /** True when the grip stands at `value` itself; else it stands at `zero` and drags turn from there. */
  readonly isAbsolute: boolean;
}

export type Handle = SlideHandle | TurnHandle;

export interface HandleSet {
  /** Frame the handles live in. */
  readonly frame: 'body' | 'foot';
  readonly handles: readonly Handle[];
}

const DEGREE = Math.PI / 180;
const NO_HANDLES: HandleSet = { frame: 'body', handles: [] };
const AXES: readonly Point[] = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];
const AXIS_KEYS: readonly HandleKeys[] = ['along', 'across', 'up'];

const infoOf = (schema: Parameters<typeof quantityInfo>[0]): QuantityInfo => {
  const info = quantityInfo(schema);
  if (!info) throw new Error('A handle was given a schema that is not a quantity.');
  return info;
};

/** Everything that can be dragged on what is selected; none for things that are not there. */
export function handlesOf(rig: Rig, selection: Selection, isEachOnItsOwn: boolean): HandleSet {
  const step = lengthStep(boxDiagonal(rigBox(rig)));
  switch (selection.kind) {
    case 'none':
      return NO_HANDLES;
    case 'body':
      return { frame: 'body', handles: bodyHandles(rig, step) };
    case 'foot':
      return { frame: 'foot', handles: footHandles(rig, selection.index, step) };
    case 'hip':
      return { frame: 'body', handles: hipHandles(rig, step) };
    case 'gyro': {
      const gyro = rig.array.gyros[selection.index];
      if (!gyro) return NO_HANDLES;
      const places = gyroPlaceHandles(gyro, selection.index, isEachOnItsOwn, step);
      const turns = gyroTurnHandles(gyro, selection.index, isEachOnItsOwn);
      return { frame: 'body', handles: [...places, ...turns] };
    }
    case 'payload':
      return { frame: 'body', handles: payloadHandles(rig, selection.index, step) };
  }
}

const slide = (
  id: string,
  info: QuantityInfo,
  axis: number,
  at: Point,
  gain: number,
  value: number,
  step: number,
  write: SlideHandle['write'],
): SlideHandle => ({
  kind: 'slide',
  id,
  info,
  keys: AXIS_KEYS[axis],
  axis: AXES[axis],
  at,
  gain,
  value,
  step,
  write,
});

function bodyHandles(rig: Rig, step: number): readonly Handle[] {
  const { body } = rig;
  switch (body.kind) {
    case 'legged': {
      const { torso } = body;
      const [x, y, z] = torsoCentre(body);
      const schema = LeggedBodySchema.entries.torso.entries;
      const set =
        (key: 'length' | 'width' | 'height') =>
        (r: Rig, value: number): Rig =>
          withLegged(r, (b) => ({ ...b, torso: { ...b.torso, [key]: value } }));
      return [
        slide(
          'torso length',
          infoOf(schema.length),
          0,
          [x + torso.length / 2, y, z],
          2,
          torso.length,
          step,
          set('length'),
        ),
        slide(
          'torso width',
          infoOf(schema.width),
          1,
          [x, y + torso.width / 2, z],
          2,
          torso.width,
          step,
          set('width'),
        ),
        slide(
          'torso height',
          infoOf(schema.height),
          2,
          [x, y, z + torso.height / 2],
          2,
          torso.height,
          step,
          set('height'),
        ),
      ];
    }
    case 'hull': {
      const { section, length } = body;
      const schema = HullBodySchema.entries;
      // Both kinds of section have the same ranges for beam and depth.
      const sectionSchema = schema.section.options[0].entries;
      const set =
        (key: 'beam' | 'depth') =>
        (r: Rig, value: number): Rig =>
          r.body.kind === 'hull'
            ? { ...r, body: { ...r.body, section: { ...r.body.section, [key]: value } } }
            : r;
      const setLength = (r: Rig, value: number): Rig =>
        r.body.kind === 'hull' ? { ...r, body: { ...r.body, length: value } } : r;
      const deck = section.depth;
      return [
        slide('hull length', infoOf(schema.length), 0, [length / 2, 0, deck], 2, length, step, setLength),
        slide(
          'beam',
          infoOf(sectionSchema.beam),
          1,
          [0, section.beam / 2, deck],
          2,
          section.beam,
          step,
          set('beam'),
        ),
        slide(
          'depth',
          infoOf(sectionSchema.depth),
          2,
          [length / 2, section.beam / 2, deck],
          1,
          deck,
          step,
          set('depth'),
        ),
      ];
    }
    case 'inline': {
      const { frame, wheelbase, tyre } = body;
      const schema = InlineBodySchema.entries;
      const set =
        (key: 'width' | 'height') =>
        (r: Rig, value: number): Rig =>
          r.body.kind === 'inline'
            ? { ...r, body: { ...r.body, frame: { ...r.body.frame, [key]: value } } }
            : r;
      const setBase = (r: Rig, value: number): Rig =>
        r.body.kind === 'inline' ? { ...r, body: { ...r.body, wheelbase: value } } : r;
      const z = frame.centreHeight;
      const entries = schema.frame.entries;
      return [
        slide(
          'wheelbase',
          infoOf(schema.wheelbase),
          0,
          [wheelbase / 2, 0, tyre.radius],
          2,
          wheelbase,
          step,
          setBase,
        ),
        slide(
          'frame width',
          infoOf(entries.width),
          1,
          [0, frame.width / 2, z],
          2,
          frame.width,
          step,
          set('width'),
        ),
        slide(
          'frame height',
          infoOf(entries.height),
          2,
          [0, 0, z + frame.height / 2],
          2,
          frame.height,
          step,
          set('height'),
        ),
      ];
    }
  }
}

function footHandles(rig: Rig, index: number, step: number): readonly Handle[] {
  const { body } = rig;
  if (body.kind !== 'legged' || index >= body.legs) return [];
  const { foot } = body;
  const schema = LeggedBodySchema.entries.foot.entries;
  const top = footThickness(body) / 2;
  const side = index % 2 === 0 ? 1 : -1;
  const set =
    (key: 'length' | 'width') =>
    (r: Rig, value: number): Rig =>
      withLegged(r, (b) => ({ ...b, foot: { ...b.foot, [key]: value } }));
  const width = slide(
    'foot width',
    infoOf(schema.width),
    1,
    [0, (side * foot.width) / 2, top],
    2,
    foot.width,
    step,
    set('width'),
  );
  return [
    slide(
      'foot length',
      infoOf(schema.length),
      0,
      [foot.length / 2, 0, top],
      2,
      foot.length,
      step,
      set('length'),
    ),
    { ...width, axis: [0, side, 0] },
  ];
}

function hipHandles(rig: Rig, step: number): readonly Handle[] {
  const { body } = rig;
  if (body.kind !== 'legged') return [];
  const schema = LeggedBodySchema.entries.hips.entries;
  const first = hipPositions(body)[0];
  const set =
    (key: 'width' | 'height' | 'pitch') =>
    (r: Rig, value: number): Rig =>
      withLegged(r, (b) => ({ ...b, hips: { ...b.hips, [key]: value } }));
  const { width, height, pitch } = body.hips;
  const handles: Handle[] = [
    slide('hip width', infoOf(schema.width), 1, first, 2, width, step, set('width')),
    slide('hip height', infoOf(schema.height), 2, [first[0], 0, height], 1, height, step, set('height')),
  ];
  if (body.legs > 2) {
    const gain = 2 / (body.legs / 2 - 1);
    handles.push(
      slide('hip pitch', infoOf(schema.pitch), 0, [first[0], 0, height], gain, pitch, step, set('pitch')),
    );
  }
  return handles;
}

/** Grips for place stand clear of the wheel by this many of its radii. */
const CLEAR = 1.75;

function gyroPlaceHandles(gyro: Gyro, index: number, isAlone: boolean, step: number): readonly Handle[] {
  const { radius } = wheelExtent(gyro.wheel.parts);
  const p = gyro.position;
  return AXES.map((axis, i) =>
    slide(
      `gimbal ${'xyz'[i]}`,
      infoOf(GyroSchema.entries.position.items[i as 0 | 1 | 2]),
      i,
      [p[0] + axis[0] * CLEAR * radius, p[1] + axis[1] * CLEAR * radius, p[2] + axis[2] * CLEAR * radius],
      1,
      p[i],
      step,
      (rig, value) => moveGyro(rig, index, i, value, isAlone),
    ),
  );
}

const axisInfo = (label: string): QuantityInfo => ({
  label,
  dimension: 'angle',
  min: -Math.PI,
  max: Math.PI,
});

/** Where the protractor stands, from the middle of the wheel along the gimbal axis, in wheel radii. */
export const PROTRACTOR_STANDS = 1.42;
export const PROTRACTOR_RADIUS = 1.05;
const LOWEST_TILT = -Math.PI;

function gyroTurnHandles(gyro: Gyro, index: number, isAlone: boolean): readonly Handle[] {
  const { radius } = wheelExtent(gyro.wheel.parts);
  const { g, s } = gimbalFrame(gyro);
  const p = gyro.position;
  const along = (distance: number): Point => [
    p[0] + g[0] * distance,
    p[1] + g[1] * distance,
    p[2] + g[2] * distance,
  ];
  const tiltEntries = GyroSchema.entries.tilt.entries;
  const limits = (['min', 'max'] as const).map(
    (end): TurnHandle => ({
      kind: 'turn',
      id: `tilt ${end}`,
      info: infoOf(tiltEntries[end]),
      keys: 'none',
      value: gyro.tilt[end],
      step: DEGREE,
      write: (rig, value) => setTiltLimit(rig, index, end, Math.max(LOWEST_TILT, value), isAlone),
      centre: along(PROTRACTOR_STANDS * radius),
      normal: g,
      zero: s,
      radius: 1.32 * PROTRACTOR_RADIUS * radius,
      isAbsolute: true,
    }),
  );
  const turns = (['heading', 'skew'] as const)
    .filter((turn) => turn === 'skew' || Math.hypot(g[0], g[1]) > 1e-6)
    .map((turn) => axisHandle(gyro, index, turn, isAlone, radius));
  return gyro.drive.kind === 'locked' ? turns : [...limits, ...turns];
}

function axisHandle(gyro: Gyro, index: number, turn: AxisTurn, isAlone: boolean, radius: number): TurnHandle {
  const { g } = gimbalFrame(gyro);
  const normal = turnAxis(gyro, turn);
  // The grip for heading stands behind the gimbal axis, the one for skew at the far end of it, so that neither hides the other.
  const level = Math.hypot(g[0], g[1]) || 1;
  const zero: Point = turn === 'heading' ? [-g[0] / level, -g[1] / level, 0] : [-g[0], -g[1], -g[2]];
  const offset = turn === 'skew' ? turnAbout(zero, normal, 0.6) : turnAbout(zero, normal, 0.6);
  const value = axisAngle(gyro, turn);
  return {
    kind: 'turn',
    id: `gimbal ${turn}`,
    info: axisInfo(
      turn === 'heading' ? 'Gimbal axis, from forward to the left' : 'Gimbal axis above the level',
    ),
    keys: 'none',
    value,
    step: 5 * DEGREE,
    write: (rig, next) => {
      const now = rig.array.gyros[index];
      return now ? turnGyro(rig, index, turn, next - axisAngle(now, turn), isAlone) : rig;
    },
    centre: gyro.position,
    normal,
    zero: offset,
    radius: 2.1 * radius,
    isAbsolute: false,
  };
}

function payloadHandles(rig: Rig, index: number, step: number): readonly Handle[] {
  const payload = rig.payloads[index];
  if (!payload) return [];
  const { position: p, size } = payload;
  return AXES.map((axis, i) =>
    slide(
      `payload ${'xyz'[i]}`,
      infoOf(PayloadSchema.entries.position.items[i as 0 | 1 | 2]),
      i,
      [p[0] + (axis[0] * size[0]) / 2, p[1] + (axis[1] * size[1]) / 2, p[2] + (axis[2] * size[2]) / 2],
      1,
      p[i],
      step,
      (r, value) => movePayload(r, index, i, value),
    ),
  );
}

/** Parts in the order the keyboard goes through them. */
export function selectableParts(rig: Rig): readonly Selection[] {
  const legs = rig.body.kind === 'legged' ? rig.body.legs : 0;
  return [
    { kind: 'body', index: 0 },
    ...(legs > 0 ? [{ kind: 'hip', index: 0 } as const] : []),
    ...Array.from({ length: legs }, (_, index) => ({ kind: 'foot', index }) as const),
    ...rig.array.gyros.map((_, index) => ({ kind: 'gyro', index }) as const),
    ...rig.payloads.map((_, index) => ({ kind: 'payload', index }) as const),
  ];
}

const FOOT_NAMES: Readonly<Record<number, readonly string[]>> = {
  2: ['Left foot', 'Right foot'],
  4: ['Front left foot', 'Front right foot', 'Back left foot', 'Back right foot'],
  6: [
    'Front left foot',
    'Front right foot',
    'Middle left foot',
    'Middle right foot',
    'Back left foot',
    'Back right foot',
  ],
};

/** What a selected part is called. */
export function partName(rig: Rig, selection: Selection): string {
  switch (selection.kind) {
    case 'none':
      return 'Nothing selected';
    case 'body':
      return rig.body.kind === 'legged' ? 'Torso' : rig.body.kind === 'hull' ? 'Hull' : 'Frame';
    case 'hip':
      return 'Hips';
    case 'foot':
      return (rig.body.kind === 'legged' && FOOT_NAMES[rig.body.legs]?.[selection.index]) || 'Foot';
    case 'gyro':
      return rig.array.gyros[selection.index]?.name ?? 'Gyro';
    case 'payload':
      return rig.payloads[selection.index]?.name ?? 'Payload';
  }
}
