import type { AxisPlan, FirmSupport } from './momentumPlanProblem';

/** An interval of support narrower than this share of the torque scale fixes the torque. */
const fixedWidth = 1e-9;

/** How the momentum rate of an interval hangs on its control: share = slope * control + constant. */
export interface ControlForm {
  readonly slope: number;
  readonly constant: number;
  /** share of the torque scale, folded over both ends of the interval */
  readonly least: number;
  readonly most: number;
}

export const freeControl: ControlForm = { slope: 1, constant: 0, least: -Infinity, most: Infinity };

/** Momentum rate, N m, of a control of one: the tilt rate limit at rest position, or a reaction wheel's torque. */
export const scaleOfTorque = ({ array }: AxisPlan): number =>
  array.kind === 'gimballed' ? array.momentum * array.tiltRate : array.torque;

/**
 * Bounds that firm support sets to the momentum rate of interval k, as shares of the torque scale.
 *
 * @param isFree whether the support may be let out, so that a narrow interval does not fix the torque
 */
export function boundControl(
  support: FirmSupport,
  torqueScale: number,
  k: number,
  isFree: boolean,
): ControlForm {
  const nodes = support.ask.length;
  let least = -Infinity;
  let most = Infinity;
  let carried = 0;
  for (let end = 0; end < 2; end++) {
    const node = (k + end) % nodes;
    const force = support.verticalForce[node];
    carried = Math.max(carried, force);
    least = Math.max(least, (force * support.pressureMin[k] - support.ask[node]) / torqueScale);
    most = Math.min(most, (force * support.pressureMax[k] - support.ask[node]) / torqueScale);
  }
  const isFixed = Math.abs(most - least) < fixedWidth && !(isFree && carried > 0);
  return isFixed
    ? { slope: 0, constant: (least + most) / 2, least, most }
    : { slope: 1, constant: 0, least, most };
}

/**
 * Whether the tilt rate can matter at all: not when the support and the torque limit keep the momentum rate,
 * and the tilt limit the momentum, so small that the ellipse holds wherever they do.
 */
export function needsEllipse(axis: AxisPlan, intervals: number): boolean {
  const { array, support } = axis;
  if (array.kind !== 'gimballed') return false;
  const torqueScale = scaleOfTorque(axis);
  const sine = Math.sin(Math.max(array.tiltMax, -array.tiltMin));
  const room = Math.sqrt(1 - sine * sine);
  if (array.torque / torqueScale <= room) return false;
  if (support.kind !== 'firm') return true;
  for (let k = 0; k < intervals; k++) {
    const { least, most } = boundControl(support, torqueScale, k, false);
    // written so that NaN keeps the ellipse
    if (!(-least <= room && most <= room)) return true;
  }
  return false;
}
