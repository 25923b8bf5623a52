import { type Dimension, formatQuantity } from '../../core/units';

/** SI; smaller than this is what rounding leaves of a zero, at every size of rig there is a range for. */
const DUST = 1e-13;

/** Where a usual unit would show a number too long to read, the unit that shows it well: from this size on, SI. */
const LARGE: Readonly<Partial<Record<Dimension, readonly (readonly [from: number, symbol: string])[]>>> = {
  time: [
    [2 * 3600, 'h'],
    [600, 'min'],
  ],
  length: [[10, 'm']],
  energy: [[1e5, 'kJ']],
  power: [[1e4, 'kW']],
  force: [[1e4, 'kN']],
};

/** The same for the small: below this size, SI. */
const SMALL: Readonly<Partial<Record<Dimension, readonly [below: number, symbol: string]>>> = {
  length: [1e-5, 'µm'],
  inertia: [1e-3, 'kg·cm²'],
  torque: [1e-2, 'mN·m'],
  mass: [1e-2, 'g'],
};

function readableUnit(size: number, dimension: Dimension): string | undefined {
  const large = LARGE[dimension]?.find(([from]) => size >= from)?.[1];
  if (large) return large;
  const small = SMALL[dimension];
  return small && size > 0 && size < small[0] ? small[1] : undefined;
}

/** A computed quantity as the screen shows it: rounding dust as zero, in a unit that suits its size unless one is chosen. */
export function showQuantity(si: number, dimension: Dimension, symbol?: string, digits = 3): string {
  const size = Math.abs(si);
  if (size < DUST) return formatQuantity(0, dimension, symbol, digits);
  return formatQuantity(si, dimension, symbol ?? readableUnit(size, dimension), digits);
}
