/** What is held upright, and how it meets the world. Body frame: origin on the ground (or the keel line) under the middle of the body at rest. */
import * as v from 'valibot';
import { type Document, name, position, quantity } from './fields';

const LinkSchema = (label: string) =>
  v.strictObject({
    length: quantity(`${label} length`, 'length', 0.01, 5),
    mass: quantity(`${label} mass`, 'mass', 0, 500),
  });

export const LeggedBodySchema = v.strictObject({
  kind: v.literal('legged'),
  legs: v.picklist([2, 4, 6]),
  torso: v.strictObject({
    length: quantity('Torso length', 'length', 0.02, 5),
    width: quantity('Torso width', 'length', 0.02, 5),
    height: quantity('Torso height', 'length', 0.02, 5),
    mass: quantity('Torso mass', 'mass', 0.01, 5000),
    rise: quantity('Torso centre above the hips', 'length', -2, 5),
  }),
  hips: v.strictObject({
    width: quantity('Distance between left and right hips', 'length', 0.01, 5),
    pitch: quantity('Distance between hip pairs', 'length', 0, 5),
    height: quantity('Hip height above ground', 'length', 0.02, 8),
  }),
  thigh: LinkSchema('Thigh'),
  shank: LinkSchema('Shank'),
  foot: v.strictObject({
    length: quantity('Foot length', 'length', 0.002, 2),
    width: quantity('Foot width', 'length', 0.002, 2),
    mass: quantity('Foot mass', 'mass', 0, 200),
  }),
});

export const SectionSchema = v.variant('kind', [
  v.strictObject({
    kind: v.literal('deadrise'),
    beam: quantity('Beam', 'length', 0.05, 30),
    depth: quantity('Depth', 'length', 0.02, 20),
    deadrise: quantity('Deadrise', 'angle', 0, 1.2),
  }),
  v.strictObject({
    kind: v.literal('bilge'),
    beam: quantity('Beam', 'length', 0.05, 30),
    depth: quantity('Depth', 'length', 0.02, 20),
    bilgeRadius: quantity('Bilge radius', 'length', 0, 15),
  }),
]);

export const KeelSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('none') }),
  v.strictObject({
    kind: v.literal('fin'),
    depth: quantity('Keel depth below the hull', 'length', 0.01, 10),
    length: quantity('Keel length', 'length', 0.01, 30),
    thickness: quantity('Keel thickness', 'length', 0.001, 2),
    mass: quantity('Keel mass', 'mass', 0, 50000),
  }),
]);

export const HullBodySchema = v.strictObject({
  kind: v.literal('hull'),
  section: SectionSchema,
  length: quantity('Hull length', 'length', 0.1, 100),
  shellMass: quantity('Shell mass', 'mass', 0.05, 1e6),
  keel: KeelSchema,
});

export const InlineBodySchema = v.strictObject({
  kind: v.literal('inline'),
  wheelbase: quantity('Wheelbase', 'length', 0.05, 5),
  frame: v.strictObject({
    length: quantity('Frame length', 'length', 0.02, 5),
    width: quantity('Frame width', 'length', 0.01, 3),
    height: quantity('Frame height', 'length', 0.02, 3),
    centreHeight: quantity('Frame centre above ground', 'length', 0.01, 4),
    mass: quantity('Frame mass', 'mass', 0.05, 5000),
  }),
  tyre: v.strictObject({
    radius: quantity('Tyre radius', 'length', 0.01, 2),
    crownRadius: quantity('Tyre crown radius', 'length', 0, 0.5),
    mass: quantity('Mass of one road wheel', 'mass', 0.005, 200),
  }),
});

export const BodySchema = v.variant('kind', [LeggedBodySchema, HullBodySchema, InlineBodySchema]);

export const PayloadSchema = v.strictObject({
  name,
  mass: quantity('Payload mass', 'mass', 0, 1e5),
  size: v.strictTuple([
    quantity('Payload length', 'length', 0.001, 20),
    quantity('Payload width', 'length', 0.001, 20),
    quantity('Payload height', 'length', 0.001, 20),
  ]),
  position: position('Payload centre'),
});

export const FootingSchema = v.variant('kind', [
  v.strictObject({
    kind: v.literal('firm'),
    friction: quantity('Friction with the ground', 'ratio', 0.02, 2),
    margin: quantity('Margin kept inside the support', 'length', 0, 0.5),
  }),
  v.strictObject({
    kind: v.literal('edge'),
    offset: quantity('Edge to the left of the middle', 'length', -5, 5),
  }),
  v.strictObject({ kind: v.literal('point'), position: position('Pivot') }),
  v.strictObject({
    kind: v.literal('rocker'),
    radius: quantity('Radius of the round bottom', 'length', 0.005, 20),
  }),
  v.strictObject({
    kind: v.literal('float'),
    density: quantity('Density of the water', 'density', 900, 1300),
    addedInertia: quantity('Added roll inertia', 'inertia', 0, 1e8),
    linearDamping: quantity('Linear roll damping', 'damping', 0, 1e8),
    quadraticDamping: quantity('Quadratic roll damping', 'quadraticDamping', 0, 1e8),
  }),
]);

export type LeggedBody = Document<typeof LeggedBodySchema>;
export type HullBody = Document<typeof HullBodySchema>;
export type InlineBody = Document<typeof InlineBodySchema>;
export type Section = Document<typeof SectionSchema>;
export type Keel = Document<typeof KeelSchema>;
export type Body = Document<typeof BodySchema>;
export type Payload = Document<typeof PayloadSchema>;
export type Footing = Document<typeof FootingSchema>;
