/** The readings of a balancing session as typed or read from logs. SI; amplitudes in whatever one unit they are read in. */
import { create } from 'zustand';
import type { BalanceSheet } from '../../../core/bench';
import type { QuantityInfo } from '../../../core/rig';

export interface Reading {
  readonly amplitude: number;
  /** rad on the wheel, from the mark, positive in the direction of rotation. */
  readonly angle: number;
}

export interface Weight {
  /** kg. */
  readonly mass: number;
  /** rad. */
  readonly angle: number;
}

export type BalanceMethod = 'onePlane' | 'twoPlanes' | 'fourRun';

export interface BalanceForm {
  readonly method: BalanceMethod;
  /** Bare run: one reading a sensor. */
  readonly initial: readonly Reading[];
  /** One run a plane: its trial weight and one reading a sensor. */
  readonly trials: readonly { readonly weight: Weight; readonly readings: readonly Reading[] }[];
  /** Half width of a reading's 95 % interval, same unit as the amplitudes; 0 when not known. */
  readonly readingError: number;
  readonly fourBare: number;
  readonly fourMass: number;
  readonly fourRuns: readonly Reading[];
  /** m, at which weights are put. */
  readonly radius: number;
  /** kg and rad/s; undefined stands for the rig's own. */
  readonly wheelMass: number | undefined;
  readonly speed: number | undefined;
  readonly hasHoles: boolean;
  readonly holes: number;
  /** rad, of the first hole. */
  readonly firstHole: number;
  /** kg, most a hole takes; masses come in steps of `step`, 0 for any. */
  readonly most: number;
  readonly step: number;
  readonly way: 'add' | 'drill';
  readonly set: (change: Partial<Omit<BalanceForm, 'set'>>) => void;
}

const TURN = 2 * Math.PI;
const NOTHING: Reading = { amplitude: 0, angle: 0 };
const TRIAL = { weight: { mass: 1e-3, angle: 0 }, readings: [NOTHING, NOTHING] };

export const useBalanceForm = create<BalanceForm>()((set) => ({
  method: 'onePlane',
  initial: [NOTHING, NOTHING],
  trials: [TRIAL, TRIAL],
  readingError: 0,
  fourBare: 0,
  fourMass: 1e-3,
  fourRuns: [0, 1, 2].map((k) => ({ amplitude: 0, angle: (k * TURN) / 3 })),
  radius: 0.03,
  wheelMass: undefined,
  speed: undefined,
  hasHoles: false,
  holes: 12,
  firstHole: 0,
  most: 5e-3,
  step: 0,
  way: 'add',
  set: (change) => set(change),
}));

const info = (
  label: string,
  dimension: QuantityInfo['dimension'],
  min: number,
  max: number,
): QuantityInfo => ({ label, dimension, min, max });

export const BALANCE_INFO = {
  amplitude: info('Amplitude', 'ratio', 0, 1e6),
  angle: info('Angle', 'angle', -TURN, TURN),
  weight: info('Trial weight', 'mass', 0, 100),
  weightAngle: info('Trial weight at', 'angle', -TURN, TURN),
  readingError: info('A reading is sure to ±', 'ratio', 0, 1e6),
  radius: info('Weights at radius', 'length', 1e-4, 10),
  wheelMass: info('Mass of the wheel', 'mass', 1e-4, 1e5),
  speed: info('Wheel speed', 'spinRate', 1, 2e4),
  holes: info('Holes, evenly spaced', 'count', 2, 72),
  firstHole: info('First hole at', 'angle', -TURN, TURN),
  most: info('Most in one hole', 'mass', 1e-6, 10),
  step: info('Weights in steps of', 'mass', 0, 1),
} as const satisfies Record<string, QuantityInfo>;

export const planesOf = (method: BalanceMethod): 1 | 2 => (method === 'twoPlanes' ? 2 : 1);

/** Angles of the holes, rad. */
export const holeAngles = (form: Pick<BalanceForm, 'holes' | 'firstHole'>): readonly number[] =>
  Array.from({ length: form.holes }, (_, k) => form.firstHole + (k * TURN) / form.holes);

const DEGREE = Math.PI / 180;
const inDegrees = ({ amplitude, angle }: Reading): Reading => ({ amplitude, angle: angle / DEGREE });

/** True once every amplitude that the method needs is there. */
export const isFilled = (form: BalanceForm): boolean => {
  if (form.method === 'fourRun')
    return form.fourBare > 0 && form.fourRuns.every(({ amplitude }) => amplitude > 0);
  const planes = planesOf(form.method);
  return (
    form.initial.slice(0, planes).every(({ amplitude }) => amplitude > 0) &&
    form.trials
      .slice(0, planes)
      .every(({ readings }) => readings.slice(0, planes).every(({ amplitude }) => amplitude > 0))
  );
};

/**
 * The sheet that the balancing takes, in its shop units.
 *
 * @param usual  the rig's wheel: kg and rad/s
 */
export function buildBalanceSheet(
  form: BalanceForm,
  usual: { readonly mass: number; readonly speed: number },
): BalanceSheet {
  const wheel = {
    mass_kg: form.wheelMass ?? usual.mass,
    speed_rpm: ((form.speed ?? usual.speed) * 30) / Math.PI,
    radius_mm: form.radius * 1e3,
  };
  const holes = form.hasHoles
    ? {
        holes: {
          angles: holeAngles(form).map((angle) => angle / DEGREE),
          most_g: form.most * 1e3,
          step_g: form.step * 1e3,
          way: form.way,
        },
      }
    : {};
  if (form.method === 'fourRun') {
    return {
      method: 'fourRun',
      amplitude: form.fourBare,
      weight_g: form.fourMass * 1e3,
      runs: form.fourRuns.map(inDegrees),
      wheel,
      ...holes,
    };
  }
  const planes = planesOf(form.method);
  return {
    method: 'influence',
    initial: form.initial.slice(0, planes).map(inDegrees),
    trials: form.trials.slice(0, planes).map(({ weight, readings }, p) => ({
      plane: p === 0 ? 1 : 2,
      weight_g: weight.mass * 1e3,
      angle: weight.angle / DEGREE,
      readings: readings.slice(0, planes).map(inDegrees),
    })),
    readingError: form.readingError,
    wheel,
    ...holes,
  };
}
