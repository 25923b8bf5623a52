import { type ClosedLoopRig, closedLoopRigOf } from '../core/bench';
import { LAW_GAINS } from '../core/control';
import { type Caution, compileRig, STANDARD_GRAVITY, spinSheet } from '../core/physics';
import { setUpPlan } from '../core/planning';
import type { Rig } from '../core/rig';
import { computeGains } from '../core/trial';

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

/** Gains by name, as they can be sent to a device. */
export type GainList =
  | { readonly kind: 'gains'; readonly gains: Readonly<Record<string, number>> }
  | { readonly kind: 'none'; readonly sentence: string };

/** The gains the rig names, or those computed for it. About 0.1 s. */
export function listGains(rig: Rig): GainList {
  const outcome = compileRig(rig);
  const none = (refusals: readonly { readonly sentence: string }[]): GainList => ({
    kind: 'none',
    sentence: refusals.map(({ sentence }) => sentence).join(' '),
  });
  if (outcome.kind === 'refused') return none(outcome.refusals);
  const set = setUpPlan(outcome.compiled);
  if (set.kind === 'refused') return none(set.refusals);
  const found = computeGains(set.setting);
  if (found.kind === 'none') return found;
  const { loop, gains } = found.report;
  const names: readonly string[] = LAW_GAINS[loop.law];
  return { kind: 'gains', gains: Object.fromEntries(names.map((name, k) => [name, gains[k] as number])) };
}
