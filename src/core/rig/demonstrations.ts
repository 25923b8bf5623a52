/** The three rigs that ship with the program, all of our own invention. */
import { BENCH_GYRO, BENCH_POWER, BENCH_SENSING, BENCH_SERVO } from './defaults';
import { layOut } from './layouts';
import { type Gyro, RIG_FORMAT, RIG_VERSION, type Rig } from './schema';

const rpm = (value: number): number => (value * 2 * Math.PI) / 60;
const degrees = (value: number): number => (value * Math.PI) / 180;

const header = { format: RIG_FORMAT, version: RIG_VERSION } as const;

/** A two-legged walker of about 6 kg that moves its legs to fixed places on fixed timers. */
export const STRIDER: Rig = {
  ...header,
  name: 'Strider',
  body: {
    kind: 'legged',
    legs: 2,
    torso: { length: 0.12, width: 0.17, height: 0.16, mass: 3.5, rise: 0.1 },
    hips: { width: 0.1, pitch: 0, height: 0.3 },
    thigh: { length: 0.16, mass: 0.3 },
    shank: { length: 0.16, mass: 0.2 },
    foot: { length: 0.13, width: 0.024, mass: 0.11 },
  },
  footing: { kind: 'firm', friction: 0.6, margin: 0.004 },
  payloads: [
    { name: 'Battery', mass: 0.24, size: [0.075, 0.035, 0.03], position: [0, 0, 0.33] },
    { name: 'Electronics', mass: 0.15, size: [0.08, 0.06, 0.02], position: [0, 0, 0.49] },
  ],
  array: { gyros: layOut('scissored pair', BENCH_GYRO, { centre: [0, 0, 0.56], spacing: 0.13, skew: 0 }) },
  power: BENCH_POWER,
  sensing: { ...BENCH_SENSING, height: 0.4 },
  control: { kind: 'computed' },
  jobs: {
    name: 'Walk on fixed timers',
    gait: {
      kind: 'pattern',
      pattern: 'walk',
      stepTime: 1,
      dutyFactor: 0.6,
      stanceWidth: 0.1,
      stepLength: 0.04,
      stepHeight: 0.02,
      dwell: 0,
      sway: 0.03,
      swayPhase: 0,
    },
    sequence: [],
    duration: 8,
  },
};

const PACER_GYRO: Gyro = {
  ...BENCH_GYRO,
  wheel: {
    name: 'Steel rim on an aluminium web',
    parts: [
      {
        kind: 'rim',
        outerRadius: 0.06,
        innerRadius: 0.05,
        width: 0.018,
        material: 'steel 4140 QT540',
        offset: 0,
      },
      { kind: 'disc', radius: 0.05, bore: 0.009, thickness: 0.005, material: 'aluminium 6061-T6', offset: 0 },
      { kind: 'hub', radius: 0.009, bore: 0.003, length: 0.022, material: 'aluminium 6061-T6', offset: 0 },
    ],
    balanceGrade: 2.5,
  },
  gimbal: { ...BENCH_GYRO.gimbal, mass: 0.18, inertia: [1.6e-4, 1.4e-4, 2e-4] },
  drive: {
    kind: 'servo',
    servo: { ...BENCH_SERVO, name: 'Bench servo, 60 kgf·cm', stallTorque: 5.9, continuousTorque: 1.9 },
  },
};

/** A four-legged body that paces: both legs of one side, then both of the other. */
export const PACER: Rig = {
  ...header,
  name: 'Pacer',
  body: {
    kind: 'legged',
    legs: 4,
    torso: { length: 0.36, width: 0.16, height: 0.11, mass: 4.2, rise: 0.03 },
    hips: { width: 0.14, pitch: 0.3, height: 0.26 },
    thigh: { length: 0.14, mass: 0.28 },
    shank: { length: 0.14, mass: 0.16 },
    foot: { length: 0.05, width: 0.02, mass: 0.05 },
  },
  footing: { kind: 'firm', friction: 0.7, margin: 0.003 },
  payloads: [
    { name: 'Battery', mass: 0.42, size: [0.13, 0.045, 0.035], position: [0.02, 0, 0.22] },
    { name: 'Electronics', mass: 0.25, size: [0.12, 0.08, 0.025], position: [-0.1, 0, 0.36] },
  ],
  array: { gyros: layOut('scissored pair', PACER_GYRO, { centre: [0, 0, 0.42], spacing: 0.18, skew: 0 }) },
  power: { ...BENCH_POWER, capacity: 4 * 3600, otherPower: 35 },
  sensing: { ...BENCH_SENSING, height: 0.3 },
  control: { kind: 'computed' },
  jobs: {
    name: 'Pace',
    gait: {
      kind: 'pattern',
      pattern: 'pace',
      stepTime: 0.8,
      dutyFactor: 0.55,
      stanceWidth: 0.13,
      stepLength: 0.06,
      stepHeight: 0.025,
      dwell: 0,
      sway: 0.045,
      swayPhase: 0,
    },
    sequence: [],
    duration: 8,
  },
};

const SKIFF_GYRO: Gyro = {
  ...BENCH_GYRO,
  wheel: {
    name: 'Steel rim on a steel web',
    parts: [
      {
        kind: 'rim',
        outerRadius: 0.16,
        innerRadius: 0.125,
        width: 0.07,
        material: 'steel 4140 QT540',
        offset: 0,
      },
      { kind: 'disc', radius: 0.125, bore: 0.025, thickness: 0.014, material: 'steel 4140 QT540', offset: 0 },
      { kind: 'hub', radius: 0.025, bore: 0.015, length: 0.09, material: 'steel 4140 QT540', offset: 0 },
    ],
    balanceGrade: 2.5,
  },
  speed: rpm(5000),
  tilt: { min: degrees(-60), max: degrees(60) },
  gimbal: { mass: 9, inertia: [0.09, 0.07, 0.1], stiction: 0.2, friction: 0.1 },
  drive: {
    kind: 'servo',
    servo: {
      ...BENCH_SERVO,
      name: 'Geared brushless drive',
      stallTorque: 120,
      continuousTorque: 45,
      noLoadSpeed: 5,
      delay: 0.005,
      lag: 0.04,
    },
  },
  motor: {
    name: 'Inrunner, 160 rpm/V',
    velocityConstant: rpm(160),
    resistance: 0.05,
    noLoadCurrent: 1.2,
    currentLimit: 40,
  },
  bearing: {
    name: '6306',
    dynamicRating: 28100,
    staticRating: 16000,
    bore: 0.03,
    friction: 0.0015,
    span: 0.12,
  },
  housing: { kind: 'evacuated', gap: 0.008, pressure: 2000 },
};

/** A small open hull with a scissored pair, in a short sea. */
export const SKIFF: Rig = {
  ...header,
  name: 'Skiff',
  body: {
    kind: 'hull',
    section: { kind: 'bilge', beam: 1.7, depth: 1, bilgeRadius: 0.5 },
    length: 5.6,
    shellMass: 560,
    keel: { kind: 'fin', depth: 0.12, length: 3.6, thickness: 0.05, mass: 60 },
  },
  footing: { kind: 'float', density: 1025, addedInertia: 150, linearDamping: 120, quadraticDamping: 220 },
  payloads: [
    { name: 'Engine and tank', mass: 290, size: [1, 0.6, 0.6], position: [-0.9, 0, 0.5] },
    { name: 'Four people', mass: 300, size: [2, 1.1, 1], position: [0.2, 0, 1.15] },
    { name: 'Wheelhouse', mass: 160, size: [1.6, 1.3, 1.2], position: [0.6, 0, 1.6] },
    { name: 'Battery', mass: 60, size: [0.5, 0.25, 0.22], position: [1.4, 0, 0.3] },
  ],
  array: { gyros: layOut('scissored pair', SKIFF_GYRO, { centre: [1.1, 0, 0.55], spacing: 0.5, skew: 0 }) },
  power: { cells: 14, cellVoltage: 3.3, capacity: 100 * 3600, resistance: 0.02, otherPower: 60 },
  sensing: { ...BENCH_SENSING, height: 0.5, loopRate: 200 },
  control: { kind: 'computed' },
  jobs: {
    name: 'Beam sea',
    gait: { kind: 'stand' },
    sequence: [{ kind: 'waves', time: 0, duration: 16, height: 0.25, period: 2.6, heading: Math.PI / 2 }],
    duration: 16,
  },
};

export const DEMONSTRATIONS: readonly { readonly file: string; readonly rig: Rig }[] = [
  { file: 'strider.json', rig: STRIDER },
  { file: 'pacer.json', rig: PACER },
  { file: 'skiff.json', rig: SKIFF },
];
