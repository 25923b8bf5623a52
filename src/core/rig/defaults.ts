/** Starting values for new parts: our own choices, of a size common on a bench. */
import type { Bearing, Gimbal, Motor, Servo, Wheel } from './parts';
import type { Gyro, Power, Sensing } from './schema';
import { findStockBearing } from './stockBearings';

const rpm = (value: number): number => (value * 2 * Math.PI) / 60;
const degrees = (value: number): number => (value * Math.PI) / 180;

export const BENCH_SERVO: Servo = {
  name: 'Bench servo, 25 kgf·cm',
  stallTorque: 2.45,
  noLoadSpeed: rpm(75),
  continuousTorque: 0.8,
  delay: 0.006,
  lag: 0.018,
  backlash: degrees(0.4),
  deadBand: degrees(0.2),
  resolution: degrees(0.09),
  updateRate: 250,
};

export const BENCH_MOTOR: Motor = {
  name: 'Outrunner, 900 rpm/V',
  velocityConstant: rpm(900),
  resistance: 0.12,
  noLoadCurrent: 0.6,
  currentLimit: 15,
};

const BENCH_BEARING_SIZE = findStockBearing('626')!;

export const BENCH_BEARING: Bearing = {
  name: BENCH_BEARING_SIZE.name,
  dynamicRating: BENCH_BEARING_SIZE.dynamicRating,
  staticRating: BENCH_BEARING_SIZE.staticRating,
  bore: BENCH_BEARING_SIZE.bore,
  friction: 0.0015,
  span: 0.024,
};

export const BENCH_GIMBAL: Gimbal = {
  mass: 0.11,
  inertia: [6e-5, 5e-5, 7e-5],
  stiction: 0.004,
  friction: 0.002,
};

export const BENCH_WHEEL: Wheel = {
  name: 'Brass rim on an aluminium web',
  parts: [
    {
      kind: 'rim',
      outerRadius: 0.045,
      innerRadius: 0.036,
      width: 0.014,
      material: 'brass C36000',
      offset: 0,
    },
    { kind: 'disc', radius: 0.036, bore: 0.008, thickness: 0.004, material: 'aluminium 6061-T6', offset: 0 },
    { kind: 'hub', radius: 0.008, bore: 0.003, length: 0.018, material: 'aluminium 6061-T6', offset: 0 },
  ],
  balanceGrade: 2.5,
};

export const BENCH_GYRO: Gyro = {
  name: 'Wheel',
  position: [0, 0, 0.4],
  gimbalAxis: [0, 1, 0],
  spinAxis: [0, 0, 1],
  wheel: BENCH_WHEEL,
  speed: rpm(8000),
  sense: 1,
  tilt: { min: degrees(-45), max: degrees(45) },
  gimbal: BENCH_GIMBAL,
  drive: { kind: 'servo', servo: BENCH_SERVO },
  spin: { kind: 'held' },
  motor: BENCH_MOTOR,
  bearing: BENCH_BEARING,
  housing: { kind: 'shrouded', gap: 0.004 },
};

export const BENCH_POWER: Power = {
  cells: 4,
  cellVoltage: 3.7,
  capacity: 2.2 * 3600,
  resistance: 0.03,
  otherPower: 18,
};

export const BENCH_SENSING: Sensing = {
  gyroNoise: degrees(0.007),
  gyroBias: degrees(0.2),
  gyroDrift: degrees(0.004),
  gyroRange: degrees(500),
  gyroResolution: degrees(0.0153),
  accelNoise: 0.0012,
  accelBias: 0.05,
  height: 0.38,
  loopRate: 500,
  loopDelay: 0.002,
  loopJitter: 0.0002,
  estimator: { kind: 'complementary', timeConstant: 1.5 },
};
