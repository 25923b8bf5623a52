/** Grips on the body, its hips and feet. */
import { hipPositions } from '../../core/physics';
import {
  type HullBody,
  HullBodySchema,
  type InlineBody,
  InlineBodySchema,
  type LeggedBody,
  LeggedBodySchema,
  type Rig,
} from '../../core/rig';
import { footThickness, torsoCentre } from './bodyPlaces';
import { type Handle, slideHandle } from './handleTypes';

const onLegged =
  (change: (body: LeggedBody, value: number) => LeggedBody) =>
  (rig: Rig, value: number): Rig =>
    rig.body.kind === 'legged' ? { ...rig, body: change(rig.body, value) } : rig;

const onHull =
  (change: (body: HullBody, value: number) => HullBody) =>
  (rig: Rig, value: number): Rig =>
    rig.body.kind === 'hull' ? { ...rig, body: change(rig.body, value) } : rig;

const onInline =
  (change: (body: InlineBody, value: number) => InlineBody) =>
  (rig: Rig, value: number): Rig =>
    rig.body.kind === 'inline' ? { ...rig, body: change(rig.body, value) } : rig;

/** A side of a box moves as its far side does: twice the drag. */
const BOTH_SIDES = 2;

export function bodyHandles(rig: Rig, step: number): readonly Handle[] {
  switch (rig.body.kind) {
    case 'legged':
      return torsoHandles(rig.body, step);
    case 'hull':
      return hullHandles(rig.body, step);
    case 'inline':
      return frameHandles(rig.body, step);
  }
}

function torsoHandles(body: LeggedBody, step: number): readonly Handle[] {
  const [x, y, z] = torsoCentre(body);
  const { length, width, height } = body.torso;
  const schema = LeggedBodySchema.entries.torso.entries;
  const set = (key: 'length' | 'width' | 'height') =>
    onLegged((b, value) => ({ ...b, torso: { ...b.torso, [key]: value } }));
  const common = { step, gain: BOTH_SIDES };
  return [
    slideHandle(schema.length, 0, {
      ...common,
      id: 'torso length',
      at: [x + length / 2, y, z],
      value: length,
      write: set('length'),
    }),
    slideHandle(schema.width, 1, {
      ...common,
      id: 'torso width',
      at: [x, y + width / 2, z],
      value: width,
      write: set('width'),
    }),
    slideHandle(schema.height, 2, {
      ...common,
      id: 'torso height',
      at: [x, y, z + height / 2],
      value: height,
      write: set('height'),
    }),
  ];
}

function hullHandles({ section, length }: HullBody, step: number): readonly Handle[] {
  const schema = HullBodySchema.entries;
  // Both kinds of section have the same ranges for beam and depth.
  const sectionSchema = schema.section.options[0].entries;
  const set = (key: 'beam' | 'depth') =>
    onHull((b, value) => ({ ...b, section: { ...b.section, [key]: value } }));
  const { beam, depth } = section;
  return [
    slideHandle(schema.length, 0, {
      step,
      gain: BOTH_SIDES,
      id: 'hull length',
      at: [length / 2, 0, depth / 2],
      value: length,
      write: onHull((b, value) => ({ ...b, length: value })),
    }),
    slideHandle(sectionSchema.beam, 1, {
      step,
      gain: BOTH_SIDES,
      id: 'beam',
      at: [0, beam / 2, depth],
      value: beam,
      write: set('beam'),
    }),
    slideHandle(sectionSchema.depth, 2, {
      step,
      id: 'depth',
      at: [length / 2, beam / 2, depth],
      value: depth,
      write: set('depth'),
    }),
  ];
}

function frameHandles({ frame, wheelbase, tyre }: InlineBody, step: number): readonly Handle[] {
  const schema = InlineBodySchema.entries;
  const set = (key: 'width' | 'height') =>
    onInline((b, value) => ({ ...b, frame: { ...b.frame, [key]: value } }));
  const z = frame.centreHeight;
  const common = { step, gain: BOTH_SIDES };
  return [
    slideHandle(schema.wheelbase, 0, {
      ...common,
      id: 'wheelbase',
      at: [wheelbase / 2, 0, tyre.radius],
      clear: tyre.radius,
      value: wheelbase,
      write: onInline((b, value) => ({ ...b, wheelbase: value })),
    }),
    slideHandle(schema.frame.entries.width, 1, {
      ...common,
      id: 'frame width',
      at: [0, frame.width / 2, z],
      value: frame.width,
      write: set('width'),
    }),
    slideHandle(schema.frame.entries.height, 2, {
      ...common,
      id: 'frame height',
      at: [0, 0, z + frame.height / 2],
      value: frame.height,
      write: set('height'),
    }),
  ];
}

/** In the frame of the sole. */
export function footHandles(rig: Rig, index: number, step: number): readonly Handle[] {
  const { body } = rig;
  if (body.kind !== 'legged' || index >= body.legs) return [];
  const { length, width } = body.foot;
  const schema = LeggedBodySchema.entries.foot.entries;
  const top = footThickness(body) / 2;
  const side = index % 2 === 0 ? 1 : -1;
  const set = (key: 'length' | 'width') =>
    onLegged((b, value) => ({ ...b, foot: { ...b.foot, [key]: value } }));
  const common = { step, gain: BOTH_SIDES };
  return [
    slideHandle(schema.length, 0, {
      ...common,
      id: 'foot length',
      at: [0, 0, top],
      clear: length / 2,
      leastPixels: 26,
      value: length,
      write: set('length'),
    }),
    slideHandle(schema.width, 1, {
      ...common,
      id: 'foot width',
      at: [0, 0, top],
      axis: [0, side, 0],
      clear: width / 2,
      leastPixels: 26,
      value: width,
      write: set('width'),
    }),
  ];
}

export function hipHandles(rig: Rig, step: number): readonly Handle[] {
  const { body } = rig;
  if (body.kind !== 'legged') return [];
  const schema = LeggedBodySchema.entries.hips.entries;
  const { width, height, pitch } = body.hips;
  const [x, y] = hipPositions(body)[0] ?? [0, 0];
  const set = (key: 'width' | 'height' | 'pitch') =>
    onLegged((b, value) => ({ ...b, hips: { ...b.hips, [key]: value } }));
  const handles: Handle[] = [
    slideHandle(schema.width, 1, {
      id: 'hip width',
      at: [x, 0, height],
      clear: y,
      leastPixels: 30,
      gain: BOTH_SIDES,
      value: width,
      step,
      write: set('width'),
    }),
    slideHandle(schema.height, 2, {
      id: 'hip height',
      at: [x, 0, height],
      leastPixels: 26,
      value: height,
      step,
      write: set('height'),
    }),
  ];
  if (body.legs > 2) {
    handles.push(
      slideHandle(schema.pitch, 0, {
        id: 'hip pitch',
        at: [x, 0, height],
        leastPixels: 26,
        // The front pair stands half of all the pitches before the middle.
        gain: 2 / (body.legs / 2 - 1),
        value: pitch,
        step,
        write: set('pitch'),
      }),
    );
  }
  return handles;
}
