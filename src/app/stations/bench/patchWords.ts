import type { PatchQuantity } from '../../../core/bench';

/** What a result is called where the rig has no field of its own for it. */
export const PATCH_WORDS: Readonly<Record<PatchQuantity, string>> = {
  bodyInertia: 'Body inertia.',
  rollStiffness: 'Roll stiffness.',
  metacentricHeight: 'Metacentric height.',
  naturalPeriod: 'Natural period.',
  linearDamping: 'Linear roll damping.',
  quadraticDamping: 'Quadratic roll damping.',
  dryFriction: 'Dry friction.',
  topplingRate: 'Toppling rate.',
  wheelSpinInertia: 'Spin inertia of the wheel.',
  wheelDragConstant: 'Constant drag of the wheel.',
  wheelDragLinear: 'Linear drag of the wheel.',
  wheelDragWindage: 'Windage of the wheel.',
  motorResistance: 'Motor resistance.',
  motorTorqueConstant: 'Torque constant of the motor.',
  servoDelay: 'Servo delay.',
  servoLag: 'Servo lag.',
  servoSpeedLimit: 'Servo speed limit.',
  servoBacklash: 'Servo backlash.',
  servoResolution: 'Servo resolution.',
  sensorNoiseDensity: 'Sensor noise.',
  sensorBiasInstability: 'Bias instability of the sensor.',
  sensorRandomWalk: 'Random walk of the bias.',
  arrayMomentum: 'Momentum of the array.',
  centreOfMassOffset: 'Centre of mass to the left.',
};
