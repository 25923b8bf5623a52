/** What a layout gives at a tilt and what its faults leave over, as numbers that open. */

import { Matrix } from 'ml-matrix';
import type { Figure, FigureInput } from '../units';
import { type ArrayGyro, arrayMomentum } from './arrayLaw';
import type { CompiledRig } from './compile';
import { figure, figureInput as input } from './figureParts';
import type { FormulaNotes } from './formula';
import { type GyroFault, layoutLeak, noFault } from './layoutReport';
import type { Vec3 } from './spatial';
import { jacobianMatrix, judgeSingularity } from './steeringLaw';

const NOTES: FormulaNotes<'momentum' | 'torque' | 'beside' | 'gain' | 'measure' | 'null' | 'leak'> = {
  momentum: { formula: 'Σ h_i s_i(tilt)', source: 'array law' },
  torque: {
    formula: 'Σ |∂H/∂tilt_i| · rate_i',
    source: 'array law, each gimbal at the speed its servo can keep',
  },
  beside: { formula: '−Σ ∂H/∂tilt · rate, every servo in the sense of roll', source: 'array law' },
  gain: { formula: 'singular values of A = ∂H/∂tilt', source: 'array law; singular value decomposition' },
  measure: { formula: '√det(A Aᵀ) / h³', source: 'Yoshikawa (1985); h the mean of the wheels' },
  null: { formula: 'servos − rank A', source: 'dimension of the tilt rates that leave the momentum still' },
  leak: { formula: 'torque as built − torque as drawn', source: 'array law at both, the body still' },
};

export const LAYOUT_AXES = ['roll', 'pitch', 'yaw'] as const;

const tiltInputs = (compiled: CompiledRig, tilt: ArrayLike<number>): FigureInput[] =>
  compiled.rig.array.gyros.map(({ name }, i) => input(`${name}: tilt`, tilt[i] as number, 'angle'));

const momentaOf = ({ wheels, speeds }: CompiledRig): number[] =>
  wheels.map(({ spinInertia }, i) => spinInertia * (speeds[i] as number));

/** Gimbals that one servo turns, each by its ratio. */
export interface GimbalDrive {
  readonly members: readonly { readonly index: number; readonly ratio: number }[];
  /** rad/s, speed the servo can keep. */
  readonly rate: number;
}

/** Momentum by the tilt of each servo, N*m*s/rad: columns of gimbals geared together added by their ratios. */
function drivenJacobian(
  compiled: CompiledRig,
  tilt: readonly number[],
  drives: readonly GimbalDrive[],
): Matrix {
  const A = jacobianMatrix(compiled.model.array, tilt, momentaOf(compiled));
  const driven = Matrix.zeros(3, drives.length);
  drives.forEach(({ members }, k) => {
    for (const { index, ratio } of members)
      for (let axis = 0; axis < 3; axis++)
        driven.set(axis, k, driven.get(axis, k) + ratio * A.get(axis, index));
  });
  return driven;
}

export interface LayoutCheck {
  /** N*m*s, body. */
  readonly momentum: Vec3;
  readonly figures: readonly Figure[];
}

/**
 * What the array gives at a tilt, gimbals geared together moving together.
 *
 * @param tilt    n, rad
 * @param drives  one for each servo; gimbals of none stay where they are
 *
 * Cost: singular values of 3 x servos. Source: array law.
 */
export function checkLayout(
  compiled: CompiledRig,
  tilt: readonly number[],
  drives: readonly GimbalDrive[],
): LayoutCheck {
  const momenta = momentaOf(compiled);
  const total = new Float64Array(3);
  arrayMomentum(compiled.model.array, tilt, momenta, total);
  const tilts = tiltInputs(compiled, tilt);
  const moving = [
    ...tilts,
    ...drives.map(({ rate }, k) => input(`Servo ${k + 1}: rate`, rate, 'angularRate')),
  ];
  const A = drivenJacobian(compiled, tilt, drives);
  const most = (axis: number): number =>
    drives.reduce((sum, { rate }, k) => sum + Math.abs(A.get(axis, k)) * rate, 0);
  // Torque is minus A rate; each servo in the sense that gives positive roll.
  const yawBeside = drives.reduce((sum, { rate }, k) => sum + A.get(2, k) * Math.sign(A.get(0, k)) * rate, 0);
  return {
    momentum: [total[0]!, total[1]!, total[2]!],
    figures: [
      ...LAYOUT_AXES.map((axis, k) =>
        figure(
          `momentum-${axis}`,
          `Momentum in ${axis}`,
          total[k]!,
          'angularMomentum',
          NOTES.momentum,
          tilts,
        ),
      ),
      ...LAYOUT_AXES.map((axis, k) =>
        figure(`torque-${axis}`, `Most torque in ${axis}`, most(k), 'torque', NOTES.torque, moving),
      ),
      figure('yawBeside', 'Yaw leak beside most roll', yawBeside, 'torque', NOTES.beside, moving),
      ...singularityFigures(A, momenta),
    ],
  };
}

function singularityFigures(A: Matrix, momenta: readonly number[]): readonly Figure[] {
  if (A.columns === 0) return [];
  const { gains, measure, rank, nullMotion } = judgeSingularity(A);
  const mean = momenta.reduce((sum, h) => sum + Math.abs(h), 0) / momenta.length;
  const inputs = gains.map((gain, k) => input(`Gain ${k + 1}`, gain, 'angularMomentum'));
  // With fewer than three servos some axis is always beyond them.
  const least = A.columns < 3 ? 0 : Math.min(...gains);
  return [
    figure('measure', 'Distance to singularity', mean > 0 ? measure / mean ** 3 : 0, 'ratio', NOTES.measure, [
      ...inputs,
      input('h', mean, 'angularMomentum'),
    ]),
    figure('weakestGain', 'Least gain about any axis', least, 'angularMomentum', NOTES.gain, inputs),
    figure('nullMotions', 'Ways to turn without torque', nullMotion.columns, 'count', NOTES.null, [
      input('Servos', A.columns, 'count'),
      input('Rank of A', rank, 'count'),
    ]),
  ];
}

/** Faults looked at one by one, in the last gyro of the array. */
export interface LayoutFaults {
  /** Share by which its wheel is too fast. */
  readonly speed: number;
  /** rad, about the forward and about the vertical axis. */
  readonly axis: number;
  /** rad, by which its gimbal is behind. */
  readonly lag: number;
}

export interface LayoutLeftover {
  readonly id: 'speed' | 'axisForward' | 'axisVertical' | 'lag';
  readonly label: string;
  /** N*m, body. */
  readonly torque: Vec3;
  readonly momentum: Vec3;
  readonly figures: readonly Figure[];
}

/**
 * What each fault leaves over while every gimbal turns at a rate.
 *
 * @param tilt  n, rad
 * @param rate  n, rad/s, signed
 */
export function layoutLeftovers(
  compiled: CompiledRig,
  tilt: readonly number[],
  rate: readonly number[],
  faults: LayoutFaults,
): readonly LayoutLeftover[] {
  const { rig, wheels } = compiled;
  const last = rig.array.gyros.length - 1;
  if (last < 0) return [];
  const gyros = rig.array.gyros.map(
    ({ gimbalAxis, spinAxis }, i): ArrayGyro => ({
      gimbalAxis,
      spinAxis,
      axialInertia: wheels[i]?.spinInertia ?? 0,
    }),
  );
  const momenta = momentaOf(compiled);
  const cases: readonly [LayoutLeftover['id'], string, Partial<GyroFault>, FigureInput][] = [
    ['speed', 'Speed mismatch', { speedError: faults.speed }, input('Too fast by', faults.speed, 'ratio')],
    [
      'axisForward',
      'Turned about forward',
      { misalignment: [faults.axis, 0, 0] },
      input('Turned by', faults.axis, 'angle'),
    ],
    [
      'axisVertical',
      'Turned about vertical',
      { misalignment: [0, 0, faults.axis] },
      input('Turned by', faults.axis, 'angle'),
    ],
    ['lag', 'Servo behind', { tiltLag: faults.lag }, input('Behind by', faults.lag, 'angle')],
  ];
  return cases.map(([id, label, fault, given]) => {
    const left = layoutLeak(
      gyros,
      tilt,
      rate,
      momenta,
      gyros.map((_, i) => (i === last ? { ...noFault, ...fault } : noFault)),
    );
    const inputs = [given, ...tiltInputs(compiled, tilt)];
    return {
      id,
      label,
      ...left,
      figures: LAYOUT_AXES.map((axis, k) =>
        figure(`${id}-${axis}`, `${label}: ${axis}`, left.torque[k] as number, 'torque', NOTES.leak, inputs),
      ),
    };
  });
}
