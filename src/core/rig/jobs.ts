/** What the rig has to live through: a gait, a run of disturbances, or both. */
import * as v from 'valibot';
import { type Document, name, position, quantity, whole } from './fields';

export const GAIT_PATTERNS = ['walk', 'crawl', 'trot', 'pace', 'amble', 'bound', 'tripod'] as const;
export type GaitPattern = (typeof GAIT_PATTERNS)[number];

export const GaitSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('stand') }),
  v.strictObject({
    kind: v.literal('pattern'),
    pattern: v.picklist(GAIT_PATTERNS),
    stepTime: quantity('Step time', 'time', 0.05, 20),
    dutyFactor: quantity('Duty factor', 'ratio', 0.2, 0.98),
    stanceWidth: quantity('Stance width', 'length', 0, 5),
    stepLength: quantity('Step length', 'length', -2, 2),
    stepHeight: quantity('Step height', 'length', 0, 1),
    dwell: quantity('Dwell with all feet down', 'time', 0, 20),
    sway: quantity('Hip sway to each side', 'length', 0, 1),
    swayPhase: quantity('Sway ahead of the steps', 'angle', -Math.PI, Math.PI),
  }),
  v.strictObject({
    kind: v.literal('keyframes'),
    times: v.pipe(v.array(quantity('Keyframe time', 'time', 0, 600)), v.minLength(2), v.maxLength(2000)),
    /** feet[k] is each foot's x, y, z at times[k], one after another, left before right and front before back. */
    feet: v.array(v.array(quantity('Foot coordinate', 'length', -50, 50))),
  }),
]);

const time = quantity('Starts at', 'time', 0, 3600);
const duration = quantity('Lasts', 'time', 0.001, 3600);
const height = quantity('Height above ground', 'length', -5, 20);
const heading = quantity('Direction, from forward to the left', 'angle', -Math.PI, Math.PI);
const series = (label: string, min: number, max: number) =>
  v.pipe(v.array(quantity(label, 'ratio', min, max)), v.minLength(2), v.maxLength(200_000));

export const DisturbanceSchema = v.variant('kind', [
  v.strictObject({
    kind: v.literal('shove'),
    time,
    impulse: quantity('Impulse', 'impulse', 0, 1e5),
    height,
    direction: heading,
  }),
  v.strictObject({
    kind: v.literal('sideLoad'),
    time,
    duration,
    force: quantity('Force', 'force', 0, 1e6),
    height,
    direction: heading,
  }),
  v.strictObject({
    kind: v.literal('payload'),
    time,
    duration,
    mass: quantity('Mass picked up (negative: put down)', 'mass', -1e4, 1e4),
    position: position('Where it is held'),
  }),
  v.strictObject({
    kind: v.literal('slope'),
    time,
    duration,
    angle: quantity('Slope', 'angle', 0, 0.8),
    direction: heading,
  }),
  v.strictObject({
    kind: v.literal('turn'),
    time,
    duration,
    speed: quantity('Road speed', 'speed', 0, 60),
    radius: quantity('Turn radius (negative: to the right)', 'length', -1e4, 1e4),
  }),
  v.strictObject({
    kind: v.literal('shake'),
    time,
    interval: quantity('Time between samples', 'time', 1e-4, 1),
    acceleration: series('Floor acceleration to the left (m/s²)', -200, 200),
  }),
  v.strictObject({
    kind: v.literal('waves'),
    time,
    duration,
    height: quantity('Wave height', 'length', 0, 30),
    period: quantity('Wave period', 'time', 0.2, 40),
    heading: quantity('Heading to the waves (180° is head sea)', 'angle', 0, 2 * Math.PI),
  }),
  v.strictObject({
    kind: v.literal('sea'),
    time,
    duration,
    significantHeight: quantity('Significant wave height', 'length', 0, 20),
    peakPeriod: quantity('Peak period', 'time', 0.3, 30),
    spectrum: v.picklist(['bretschneider', 'jonswap']),
    heading: quantity('Heading to the waves (180° is head sea)', 'angle', 0, 2 * Math.PI),
    speed: quantity('Speed through the water', 'speed', 0, 40),
    seed: whole('Seed', 0, 2_147_483_647),
  }),
  v.strictObject({
    kind: v.literal('recorded'),
    time,
    interval: quantity('Time between samples', 'time', 1e-4, 10),
    moment: series('Recorded roll moment (N·m)', -1e7, 1e7),
  }),
]);

export const JobsSchema = v.strictObject({
  name,
  gait: GaitSchema,
  sequence: v.pipe(v.array(DisturbanceSchema), v.maxLength(200)),
  duration: quantity('Length of the run', 'time', 0.5, 3600),
});

export type Gait = Document<typeof GaitSchema>;
export type PatternGait = Extract<Gait, { kind: 'pattern' }>;
export type Disturbance = Document<typeof DisturbanceSchema>;
export type Jobs = Document<typeof JobsSchema>;
