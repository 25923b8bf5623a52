/** The parts a gyro is put together from, each as data with its ranges. */
import * as v from 'valibot';
import { type Document, name, quantity, whole } from './fields';
import { MATERIAL_NAMES } from './materials';

const material = v.picklist(MATERIAL_NAMES);
const offset = quantity('Axial offset', 'length', -1, 1);

export const WheelPartSchema = v.variant('kind', [
  v.strictObject({
    kind: v.literal('disc'),
    radius: quantity('Disc radius', 'length', 0.002, 1),
    bore: quantity('Bore radius', 'length', 0, 0.5),
    thickness: quantity('Disc thickness', 'length', 0.0002, 0.5),
    material,
    offset,
  }),
  v.strictObject({
    kind: v.literal('rim'),
    outerRadius: quantity('Rim outer radius', 'length', 0.003, 1),
    innerRadius: quantity('Rim inner radius', 'length', 0.001, 1),
    width: quantity('Rim width', 'length', 0.0005, 0.5),
    material,
    offset,
  }),
  v.strictObject({
    kind: v.literal('hub'),
    radius: quantity('Hub radius', 'length', 0.002, 0.5),
    bore: quantity('Hub bore radius', 'length', 0, 0.4),
    length: quantity('Hub length', 'length', 0.001, 0.5),
    material,
    offset,
  }),
  v.strictObject({
    kind: v.literal('balls'),
    count: whole('Number of balls', 2, 400),
    diameter: quantity('Ball diameter', 'length', 0.001, 0.1),
    pitchRadius: quantity('Ball circle radius', 'length', 0.003, 1),
    material,
    offset,
  }),
  v.strictObject({
    kind: v.literal('bolts'),
    count: whole('Number of bolts', 2, 100),
    mass: quantity('Mass of one bolt', 'mass', 1e-5, 2),
    pitchRadius: quantity('Bolt circle radius', 'length', 0.002, 1),
    offset,
  }),
]);

export const WheelSchema = v.strictObject({
  name,
  parts: v.pipe(v.array(WheelPartSchema), v.minLength(1), v.maxLength(24)),
  balanceGrade: quantity('Balance grade G (mm/s)', 'ratio', 0.1, 100),
});

export const MotorSchema = v.strictObject({
  name,
  velocityConstant: quantity('Motor velocity constant', 'motorVelocity', 0.1, 3000),
  resistance: quantity('Winding resistance', 'resistance', 0.0005, 50),
  noLoadCurrent: quantity('No-load current', 'current', 0, 50),
  currentLimit: quantity('Controller current limit', 'current', 0.1, 500),
});

export const ServoSchema = v.strictObject({
  name,
  stallTorque: quantity('Servo stall torque', 'torque', 0.001, 5000),
  noLoadSpeed: quantity('Servo no-load speed', 'angularRate', 0.05, 200),
  continuousTorque: quantity('Servo continuous torque', 'torque', 0.0005, 5000),
  delay: quantity('Servo command delay', 'time', 0, 0.5),
  lag: quantity('Servo lag', 'time', 0, 1),
  backlash: quantity('Servo backlash', 'angle', 0, 0.2),
  deadBand: quantity('Servo dead band', 'angle', 0, 0.1),
  resolution: quantity('Servo resolution', 'angle', 0, 0.1),
  updateRate: quantity('Servo update rate', 'frequency', 10, 20000),
});

export const BearingSchema = v.strictObject({
  name,
  dynamicRating: quantity('Dynamic load rating C', 'force', 10, 1e6),
  staticRating: quantity('Static load rating C₀', 'force', 5, 1e6),
  bore: quantity('Bearing bore', 'length', 0.001, 0.3),
  friction: quantity('Bearing friction coefficient', 'ratio', 0, 0.05),
  span: quantity('Distance between bearings', 'length', 0.003, 1),
});

export const HousingSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('open') }),
  v.strictObject({ kind: v.literal('shrouded'), gap: quantity('Gap to the shroud', 'length', 0.0005, 0.2) }),
  v.strictObject({
    kind: v.literal('evacuated'),
    gap: quantity('Gap to the housing', 'length', 0.0005, 0.2),
    pressure: quantity('Pressure in the housing', 'pressure', 0.1, 101325),
  }),
]);

export const GimbalSchema = v.strictObject({
  mass: quantity('Gimbal frame mass', 'mass', 0, 500),
  inertia: v.strictTuple([
    quantity('Frame inertia about the spin axis', 'inertia', 0, 100),
    quantity('Frame inertia about the gimbal axis', 'inertia', 0, 100),
    quantity('Frame inertia about the third axis', 'inertia', 0, 100),
  ]),
  stiction: quantity('Gimbal stiction', 'torque', 0, 500),
  friction: quantity('Gimbal viscous friction', 'damping', 0, 500),
});

const along = (axis: string) => quantity(`Centre offset ${axis}`, 'length', -0.5, 0.5);

/** How a gimbal is moved. A `geared` gimbal follows the one named (by its place in the list) through gears. */
export const DriveSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('servo'), servo: ServoSchema }),
  v.strictObject({
    kind: v.literal('geared'),
    leader: whole('Leading gyro', 0, 63),
    ratio: quantity('Gear ratio', 'ratio', -4, 4),
  }),
  v.strictObject({
    kind: v.literal('free'),
    stiffness: quantity('Gimbal spring', 'stiffness', -1e4, 1e4),
    damping: quantity('Gimbal damper', 'damping', 0, 1e4),
    centreOffset: v.strictTuple([along('x'), along('y'), along('z')]),
  }),
  v.strictObject({ kind: v.literal('locked') }),
]);

/** What keeps the wheel turning: speed held by its motor, coasting, or the motor torque used as the actuator. */
export const SpinSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('held') }),
  v.strictObject({ kind: v.literal('coasting') }),
  v.strictObject({
    kind: v.literal('actuated'),
    torque: quantity('Motor torque available', 'torque', 0.0005, 1000),
  }),
]);

export type WheelPart = Document<typeof WheelPartSchema>;
export type Wheel = Document<typeof WheelSchema>;
export type Motor = Document<typeof MotorSchema>;
export type Servo = Document<typeof ServoSchema>;
export type Bearing = Document<typeof BearingSchema>;
export type Housing = Document<typeof HousingSchema>;
export type Gimbal = Document<typeof GimbalSchema>;
export type Drive = Document<typeof DriveSchema>;
export type Spin = Document<typeof SpinSchema>;
