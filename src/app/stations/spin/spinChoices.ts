/** What the Spin up station needs and the rig does not hold; kept while the page is open. */
import { create } from 'zustand';
import { type SpinChoices, USUAL_SPEED_SQUARED_FACTOR } from '../../../core/physics';
import type { QuantityInfo } from '../../../core/rig';

interface SpinChoicesState extends Omit<SpinChoices, 'brakeCurrent'> {
  /** A; undefined: half the controller's limit. */
  readonly brakeCurrent: number | undefined;
  readonly choose: (change: Partial<SpinChoices>) => void;
}

export const useSpinChoices = create<SpinChoicesState>()((set) => ({
  factor: USUAL_SPEED_SQUARED_FACTOR,
  preload: 0,
  brakeCurrent: undefined,
  choose: (change) => set(change),
}));

/** The choices as the calculation takes them; what was not chosen is left to its usual start. */
export const chosenSpin = (
  state: Pick<SpinChoicesState, 'factor' | 'preload' | 'brakeCurrent'>,
): Partial<SpinChoices> => ({
  factor: state.factor,
  preload: state.preload,
  ...(state.brakeCurrent === undefined ? {} : { brakeCurrent: state.brakeCurrent }),
});

export const FACTOR_INFO: QuantityInfo = {
  label: 'Factor on speed squared',
  dimension: 'ratio',
  min: 1,
  max: 20,
};
export const PRELOAD_INFO: QuantityInfo = {
  label: 'Axial preload',
  dimension: 'force',
  min: 0,
  max: 5000,
};
export const BRAKE_INFO: QuantityInfo = {
  label: 'Braking current',
  dimension: 'current',
  min: 0.1,
  max: 500,
};
