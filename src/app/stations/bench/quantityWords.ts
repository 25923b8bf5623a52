import { LOG_QUANTITIES, type LogQuantity } from '../../../core/bench';
import { type Dimension, type Unit, unitFor } from '../../../core/units';
import { type ChosenUnits, useSession } from '../../state/session';

/** What a logged quantity is called on the screen. */
export const QUANTITY_WORDS: Readonly<Record<LogQuantity, string>> = {
  roll: 'Roll',
  pitch: 'Pitch',
  yaw: 'Yaw',
  rollRate: 'Roll rate',
  pitchRate: 'Pitch rate',
  yawRate: 'Yaw rate',
  accelerationX: 'Acceleration x',
  accelerationY: 'Acceleration y',
  accelerationZ: 'Acceleration z',
  vibration: 'Vibration',
  tiltCommand: 'Tilt command',
  tilt: 'Tilt',
  tiltRate: 'Tilt rate',
  wheelSpeed: 'Wheel speed',
  motorCurrent: 'Motor current',
  motorVoltage: 'Motor voltage',
  turnMark: 'Once-per-turn mark',
  moment: 'Moment on the body',
};

export const QUANTITIES = Object.keys(LOG_QUANTITIES) as readonly LogQuantity[];

export const unitOfQuantity = (quantity: LogQuantity, units: ChosenUnits): Unit => {
  const dimension: Dimension = LOG_QUANTITIES[quantity];
  return unitFor(dimension, units[dimension]);
};

export const useQuantityUnit = (quantity: LogQuantity): Unit => {
  const units = useSession((session) => session.units);
  return unitOfQuantity(quantity, units);
};
