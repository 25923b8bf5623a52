import { type ClosedLoopRig, closedLoopRigOf } from '../core/bench';
import { type Caution, compileRig, STANDARD_GRAVITY, spinSheet } from '../core/physics';
import type { Rig } from '../core/rig';

/** What the rig itself says of the numbers an identification needs besides its log. SI. */
export interface BenchGivens {
  readonly mass: number;
  readonly weight: number;
  /** kg*m^2, wheel and rotor, of each gyro. */
  readonly wheelInertia: readonly number[];
  /** kg, of each gyro's wheel. */
  readonly wheelMass: readonly number[];
  /** The usual cautions the rig calls for. */
  readonly cautions: readonly Caution[];
  readonly loop: ClosedLoopRig | { readonly kind: 'none'; readonly sentence: string };
}

/** Undefined while the rig cannot be worked out. Tens of milliseconds. */
export function benchGivens(rig: Rig): BenchGivens | undefined {
  const outcome = compileRig(rig);
  if (outcome.kind === 'refused') return undefined;
  const { whole, wheels } = outcome.compiled;
  const spin = wheels.length > 0 ? spinSheet(rig, 0, {}) : undefined;
  return {
    mass: whole.mass,
    weight: whole.mass * STANDARD_GRAVITY,
    wheelInertia: wheels.map((wheel) => wheel.spinInertia),
    wheelMass: wheels.map((wheel) => wheel.mass),
    cautions: spin?.kind === 'sheet' ? spin.sheet.cautions : [],
    loop: closedLoopRigOf(rig),
  };
}
