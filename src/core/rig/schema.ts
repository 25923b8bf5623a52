/** The rig as one document. From this definition come the TypeScript type, the validator, the JSON Schema and the fields on the screen. */
import * as v from 'valibot';
import { BodySchema, FootingSchema, PayloadSchema } from './bodies';
import { type Document, direction, name, position, quantity } from './fields';
import { JobsSchema } from './jobs';
import {
  BearingSchema,
  DriveSchema,
  GimbalSchema,
  HousingSchema,
  MotorSchema,
  SpinSchema,
  WheelSchema,
} from './parts';

export const RIG_FORMAT = 'tiltwright-rig';
export const RIG_VERSION = 1;

export const GyroSchema = v.strictObject({
  name,
  position: position('Gimbal centre'),
  gimbalAxis: direction('Gimbal axis'),
  spinAxis: direction('Spin axis at rest'),
  wheel: WheelSchema,
  speed: quantity('Wheel speed', 'spinRate', 0, 12000),
  sense: v.picklist([1, -1]),
  tilt: v.strictObject({
    min: quantity('Tilt limit below', 'angle', -Math.PI, 0),
    max: quantity('Tilt limit above', 'angle', 0, Math.PI),
  }),
  gimbal: GimbalSchema,
  drive: DriveSchema,
  spin: SpinSchema,
  motor: MotorSchema,
  bearing: BearingSchema,
  housing: HousingSchema,
});

export const PowerSchema = v.strictObject({
  cells: v.pipe(quantity('Cells in series', 'count', 1, 200), v.integer()),
  cellVoltage: quantity('Nominal cell voltage', 'voltage', 0.5, 5),
  capacity: quantity('Battery capacity', 'charge', 30, 1e7),
  resistance: quantity('Battery resistance', 'resistance', 0, 5),
  otherPower: quantity('Power of everything else', 'power', 0, 1e5),
});

export const EstimatorSchema = v.variant('kind', [
  v.strictObject({
    kind: v.literal('complementary'),
    timeConstant: quantity('Complementary filter time constant', 'time', 0.01, 100),
  }),
  v.strictObject({ kind: v.literal('kalman') }),
]);

export const SensingSchema = v.strictObject({
  gyroNoise: quantity('Rate noise density', 'rateNoise', 0, 0.1),
  gyroBias: quantity('Rate bias', 'angularRate', -1, 1),
  gyroDrift: quantity('Rate bias instability', 'angularRate', 0, 0.1),
  gyroRange: quantity('Rate range', 'angularRate', 0.1, 200),
  gyroResolution: quantity('Rate resolution', 'angularRate', 0, 0.1),
  accelNoise: quantity('Acceleration noise density', 'accelerationNoise', 0, 1),
  accelBias: quantity('Acceleration bias', 'acceleration', -10, 10),
  height: quantity('Sensor height above ground', 'length', -5, 20),
  loopRate: quantity('Loop rate', 'frequency', 10, 20000),
  loopDelay: quantity('Loop delay', 'time', 0, 0.5),
  loopJitter: quantity('Loop jitter', 'time', 0, 0.1),
  estimator: EstimatorSchema,
});

const gain = (label: string) => quantity(label, 'ratio', -1e6, 1e6);

/** The law in the firmware. Units of each gain are written where it is used (control/controllers). */
export const ControlSchema = v.variant('kind', [
  v.strictObject({ kind: v.literal('computed') }),
  v.strictObject({
    kind: v.literal('feedback'),
    lean: gain('Gain on lean'),
    leanRate: gain('Gain on lean rate'),
    tilt: gain('Gain on tilt'),
    tiltRate: gain('Gain on tilt rate'),
    trim: gain('Gain on tilt gathered'),
  }),
  v.strictObject({ kind: v.literal('pidTilt'), kp: gain('P'), ki: gain('I'), kd: gain('D') }),
  v.strictObject({ kind: v.literal('pidTiltRate'), kp: gain('P'), ki: gain('I'), kd: gain('D') }),
  v.strictObject({ kind: v.literal('passive') }),
  v.strictObject({
    kind: v.literal('reactionWheel'),
    lean: gain('Gain on lean'),
    leanRate: gain('Gain on lean rate'),
    speed: gain('Gain on wheel speed'),
  }),
]);

export const RigSchema = v.strictObject({
  format: v.literal(RIG_FORMAT),
  version: v.literal(RIG_VERSION),
  name,
  body: BodySchema,
  footing: FootingSchema,
  payloads: v.pipe(v.array(PayloadSchema), v.maxLength(64)),
  array: v.strictObject({ gyros: v.pipe(v.array(GyroSchema), v.maxLength(64)) }),
  power: PowerSchema,
  sensing: SensingSchema,
  control: ControlSchema,
  jobs: JobsSchema,
});

export type Rig = Document<typeof RigSchema>;
export type Gyro = Rig['array']['gyros'][number];
export type Power = Rig['power'];
export type Sensing = Rig['sensing'];
export type Estimator = Sensing['estimator'];
export type Control = Rig['control'];
