import { type Controller, type ControllerWork, createControllerWork } from './controllers';
import { createEstimatorWork, type EstimatorModel, type EstimatorWork } from './estimators';
import { createRandom, type RandomState } from './randomness';
import { type ActuatorWork, BODY_LENGTH, createActuatorWork, type RollActuator } from './rollActuators';
import { createSensorWork, type SensorModel, type SensorWork } from './sensorModel';

/** The body about its roll line, nonlinear. */
export interface RollBody {
  /** kg*m^2 */
  readonly inertia: number;
  /** N*m/rad at upright; the moment is stiffness * sin(roll) unless a curve is given. Positive topples */
  readonly stiffness: number;
  /** N*m at evenly spaced rolls from -curveReach to +curveReach, instead of the sine */
  readonly curve?: Float64Array;
  /** rad */
  readonly curveReach?: number;
  /** N*m*s/rad */
  readonly damping: number;
  /** N*m*s^2/rad^2 */
  readonly quadraticDamping: number;
  /** rad, beyond which the body counts as fallen and the run ends */
  readonly fallenAt: number;
}

/** Moments from outside about the roll line. */
export interface RollDisturbance {
  /** s between samples of `moment`, linear between them, zero outside (or again from the start) */
  readonly step: number;
  readonly isCyclic: boolean;
  /** N*m */
  readonly moment: Float64Array;
  /** pairs of time (s) and angular impulse (N*m*s), in order of time */
  readonly shoves: Float64Array;
}

export const NO_DISTURBANCE: RollDisturbance = {
  step: 1,
  isCyclic: false,
  moment: new Float64Array(0),
  shoves: new Float64Array(0),
};

export interface RollLoopModel {
  readonly body: RollBody;
  readonly actuator: RollActuator;
  readonly sensor: SensorModel;
  readonly estimator: EstimatorModel;
  readonly controller: Controller;
  /** s from taking a sample to sending the command */
  readonly loopDelay: number;
  /** s, the send time varies evenly by this much either way */
  readonly loopJitter: number;
  readonly tiltMin: number;
  readonly tiltMax: number;
  /** plant steps for each tick of the loop */
  readonly substeps: number;
}

/** Columns of a record, in order. */
export const RECORD = {
  time: 0,
  roll: 1,
  rollRate: 2,
  estimate: 3,
  command: 4,
  tilt: 5,
  tiltRate: 6,
  servoTorque: 7,
  yawMomentum: 8,
} as const;

export const RECORD_WIDTH = 9;

export interface RollRecord {
  /** rows x 9, see RECORD */
  readonly rows: Float64Array;
  /** ticks between rows */
  readonly every: number;
}

export const createRollRecord = (rows: number, every: number): RollRecord => ({
  rows: new Float64Array(rows * RECORD_WIDTH).fill(Number.NaN),
  every,
});

/** What a run came to. */
export interface RollOutcome {
  hasFallen: boolean;
  /** s simulated */
  duration: number;
  /** rad */
  peakRoll: number;
  /** rad, root mean square */
  meanRoll: number;
  /** rad */
  peakTilt: number;
  /** N*m, root mean square over the hardest-worked servo (or reaction wheel motor) */
  meanTorque: number;
  peakTorque: number;
  /** s that servos spent at the end of their speed-torque line or current limit */
  saturatedTime: number;
  /** N*m*s, largest departure of the array's yaw momentum from that at rest */
  peakYawMomentum: number;
  /** rad, at the end */
  finalRoll: number;
  finalTilt: number;
  rows: number;
}

/** What the parts of a tick hand on to one another, in `RollLoopWork.now`. */
export const NOW = { time: 0, stepStart: 1, late: 2, lastRate: 3, shove: 4, yaw: 5, yawAtRest: 6 } as const;
/** What is gathered over a run, in `RollLoopWork.peaks`. */
export const PEAK = { roll: 0, rollSquares: 1, tilt: 2, torque: 3, yaw: 4 } as const;

export interface RollLoopWork {
  /** see BODY */
  readonly body: Float64Array;
  readonly actuator: ActuatorWork;
  readonly sensor: SensorWork;
  readonly estimator: EstimatorWork;
  readonly controller: ControllerWork;
  readonly jitter: RandomState;
  /** see NOW */
  readonly now: Float64Array;
  /** see PEAK */
  readonly peaks: Float64Array;
  readonly outcome: RollOutcome;
}

/** The only allocation; the work space serves any number of runs of this model, or of one of the same shape. */
export function createRollLoopWork(model: RollLoopModel): RollLoopWork {
  return {
    body: new Float64Array(BODY_LENGTH),
    actuator: createActuatorWork(
      model.actuator,
      1 / model.sensor.sampleTime,
      model.loopDelay + model.loopJitter,
    ),
    sensor: createSensorWork(model.sensor, createRandom(0)),
    estimator: createEstimatorWork(model.estimator),
    controller: createControllerWork(),
    jitter: createRandom(0),
    now: new Float64Array(8),
    peaks: new Float64Array(5),
    outcome: {
      hasFallen: false,
      duration: 0,
      peakRoll: 0,
      meanRoll: 0,
      peakTilt: 0,
      meanTorque: 0,
      peakTorque: 0,
      saturatedTime: 0,
      peakYawMomentum: 0,
      finalRoll: 0,
      finalTilt: 0,
      rows: 0,
    },
  };
}

export interface RollRunStart {
  readonly roll: number;
  readonly rollRate: number;
  readonly tilt: number;
  /** rad, first estimate less true roll */
  readonly estimateError: number;
  readonly duration: number;
  readonly seed: number;
  readonly run: number;
}
