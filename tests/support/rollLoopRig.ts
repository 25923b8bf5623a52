/** A toppling body with a pair on perfect servos: the fast kernel's description of it and the linear one, side by side. */
import { runRollLoop } from '../../src/core/control/closedLoop';
import { buildController, type Law, type LoopModel } from '../../src/core/control/loopModel';
import type { RollTiltPlant } from '../../src/core/control/plantModels';
import type { RollActuator } from '../../src/core/control/rollActuators';
import {
  createRollLoopWork,
  createRollRecord,
  NO_DISTURBANCE,
  RECORD,
  type RollLoopModel,
  type RollOutcome,
  type RollRunStart,
} from '../../src/core/control/rollLoopModel';
import { NO_VIBRATION, type SensorModel } from '../../src/core/control/sensorModel';
import type { ServoModel } from '../../src/core/control/servoModel';

export const PERFECT_SERVO: ServoModel = {
  stallTorque: 1e6,
  noLoadSpeed: 1e6,
  torqueLimit: 1e6,
  delay: 0.006,
  lag: 0.02,
  backlash: 0,
  deadBand: 0,
  resolution: 0,
  updateRate: 0,
  gimbalInertia: 1e-3,
  rotorInertia: 0,
  tiltMin: -1.4,
  tiltMax: 1.4,
};

export const quietSensor = (sampleTime: number): SensorModel => ({
  sampleTime,
  gyroNoise: 0,
  gyroBias: 0,
  gyroDrift: 0,
  driftTime: 100,
  gyroRange: 100,
  gyroResolution: 0,
  accelNoise: 0,
  accelBias: 0,
  height: 0.2,
  gravity: 9.80665,
  vibration: NO_VIBRATION,
});

export const PLANT: RollTiltPlant = {
  actuator: 'tilt',
  inertia: 0.3,
  stiffness: 7.5,
  damping: 0.05,
  momentum: 0.6,
  servoLag: 0.02,
  delay: 0.0095,
  sampleTime: 0.002,
  sensorHeight: 0.2,
  gravity: 9.80665,
};

export const START: RollRunStart = {
  roll: 1e-4,
  rollRate: 0,
  tilt: 0,
  estimateError: 0,
  duration: 4,
  seed: 1,
  run: 0,
};

export const pair = (servo: ServoModel, momentum: number): RollActuator => ({
  kind: 'servo',
  gimbals: [1, -1].map((side) => ({
    servo,
    momentum: momentum / 2,
    yawMomentum: (side * momentum) / 2,
    follow: 1,
    spin: { kind: 'constant' },
  })),
});

export interface Setting {
  readonly plant?: RollTiltPlant;
  readonly law: Law;
  readonly gains: ArrayLike<number>;
  readonly servo?: ServoModel;
  readonly substeps?: number;
}

/** The nonlinear model of the same loop that the linear one describes. */
export function build(s: Setting, change: Partial<RollLoopModel> = {}): RollLoopModel {
  const plant = s.plant ?? PLANT;
  const servo = { ...(s.servo ?? PERFECT_SERVO), lag: plant.servoLag };
  return {
    body: {
      inertia: plant.inertia,
      stiffness: plant.stiffness,
      damping: plant.damping,
      quadraticDamping: 0,
      fallenAt: 1,
    },
    actuator: pair(servo, plant.momentum),
    sensor: quietSensor(plant.sampleTime),
    estimator: { kind: 'complementary', sampleTime: plant.sampleTime, timeConstant: 1 },
    controller: buildController(s.law, s.gains),
    loopDelay: plant.delay - servo.delay,
    loopJitter: 0,
    tiltMin: -1.4,
    tiltMax: 1.4,
    substeps: s.substeps ?? 4,
    ...change,
  };
}

export const run = (
  model: RollLoopModel,
  start: Partial<RollRunStart> = {},
  disturbance = NO_DISTURBANCE,
): RollOutcome =>
  runRollLoop(model, createRollLoopWork(model), disturbance, { ...START, ...start }, undefined);

/** 1/s, growth of the roll's envelope over a run of tiny motion. */
export function measureGrowth(model: RollLoopModel, duration = 12): number {
  const record = createRollRecord(Math.round(duration / model.sensor.sampleTime), 1);
  /* so small that the sine is its argument, and growth for the whole run stays so */
  runRollLoop(
    model,
    createRollLoopWork(model),
    NO_DISTURBANCE,
    { ...START, roll: 1e-9, estimateError: 1e-9, duration },
    record,
  );
  const rows = record.rows.length / 9;
  const peak = (from: number, to: number): number => {
    let most = 0;
    for (let i = Math.floor(from * rows); i < Math.floor(to * rows); i++) {
      most = Math.max(most, Math.abs(record.rows[9 * i + RECORD.roll]!));
    }
    return most;
  };
  return Math.log(peak(0.75, 1) / peak(0.4, 0.65)) / (0.35 * duration);
}

export const FEEDBACK = [90, 14, 1.5, 0, 0];
export const linear = (plant: RollTiltPlant, law: Law, gains: ArrayLike<number>): LoopModel => ({
  plant,
  law,
  gains,
  estimator: { kind: 'complementary', sampleTime: plant.sampleTime, timeConstant: 1 },
});
