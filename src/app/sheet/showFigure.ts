import { type Dimension, formatQuantity } from '../../core/units';

/** SI; smaller than this is what rounding leaves of a zero, at every size of rig there is a range for. */
const DUST = 1e-13;

/** A computed quantity as the screen shows it: rounding dust as zero. */
export const showQuantity = (si: number, dimension: Dimension, symbol?: string, digits = 3): string =>
  formatQuantity(Math.abs(si) < DUST ? 0 : si, dimension, symbol, digits);
