import type { Samples } from '../resampling';
import { studentQuantile } from '../statistics';
import { identifyDecay } from './decay';
import {
  asGiven,
  type Comparison,
  type Estimate,
  estimate,
  type Given,
  type Identification,
  needPositive,
  patchOf,
  powerProduct,
  type Refused,
  refuse,
  show,
} from './result';

/** A body hung by two or three equal threads that twists about the vertical through its centre of mass. */
export interface PendulumSetup {
  readonly kind: 'bifilar' | 'trifilar';
  /** kg, everything that hangs. */
  readonly mass: Given;
  /** m, distance of a thread from the axis: half the spacing for two threads. */
  readonly radius: Given;
  /** m, free length of the threads. */
  readonly length: Given;
  /** m/s^2. */
  readonly gravity?: number;
}

/** Stopwatch readings of so many whole swings each, or a log of the twist. */
export type PeriodSource =
  | {
      readonly kind: 'typed';
      /** s, one total per reading. */
      readonly totals: readonly number[];
      readonly swings: number;
      /** s, half width of one reading's 95 % interval (reaction time); needed when there is one reading only. */
      readonly readingHalfWidth?: number;
    }
  | { readonly kind: 'log'; readonly samples: Samples; readonly signal?: 'angle' | 'rate' };

export interface PendulumOptions {
  /** The empty platform on the same threads, taken off. */
  readonly empty?: { readonly mass: Given; readonly period: PeriodSource };
  readonly target?: 'bodyInertia' | 'wheelSpinInertia';
}

const STANDARD_GRAVITY = 9.806_65;

/**
 * Moment of inertia from the period of a thread pendulum: I = m g r^2 T^2 / (4 pi^2 L) for small twists, for two threads
 * (r half their spacing) as for three.
 *
 * Source: Then, Bifilar Pendulum: An Experimental Study, 1965; standard for the trifilar suspension too.
 */
export const pendulumInertia = (
  mass: number,
  radius: number,
  length: number,
  period: number,
  gravity = STANDARD_GRAVITY,
): number => (mass * gravity * radius ** 2 * period ** 2) / (4 * Math.PI ** 2 * length);

interface PeriodFound {
  readonly period: Estimate;
  readonly comparison: Comparison;
  readonly spread: number;
  readonly remarks: readonly string[];
}

/**
 * Identifies the inertia of a body or a wheel on a bifilar or trifilar pendulum, errors of mass, radius, length and
 * period carried through.
 *
 * @returns estimates 'period' and 'inertia'; refused when one typed reading comes without its uncertainty
 */
export function identifyPendulum(
  setup: PendulumSetup,
  source: PeriodSource,
  options: PendulumOptions = {},
): Identification {
  const wrong =
    needPositive('The hanging mass', setup.mass.value, 'kg') ??
    needPositive('The thread radius', setup.radius.value, 'm') ??
    needPositive('The thread length', setup.length.value, 'm');
  if (wrong) return wrong;
  const found = findPeriod(source);
  if ('kind' in found) return found;
  const gravity = setup.gravity ?? STANDARD_GRAVITY;
  const inertiaOf = (mass: Given, period: Estimate): Estimate =>
    powerProduct('inertia', 'kg·m²', gravity / (4 * Math.PI ** 2), [
      [mass, 1],
      [setup.radius, 2],
      [asGiven(period), 2],
      [setup.length, -1],
    ]);
  let inertia = inertiaOf(setup.mass, found.period);
  const estimates: Estimate[] = [{ ...found.period, name: 'period' }];
  const remarks = [...found.remarks];
  if (options.empty) {
    const emptyPeriod = findPeriod(options.empty.period);
    if ('kind' in emptyPeriod) return refuse(`Empty platform: ${emptyPeriod.sentence}`);
    const platform = inertiaOf(options.empty.mass, emptyPeriod.period);
    // Radius and length are common to both runs, so their errors act on the difference; mass and period do not.
    const common = 2 * ((setup.radius.halfWidth ?? 0) / setup.radius.value);
    const length = (setup.length.halfWidth ?? 0) / setup.length.value;
    const own = (e: Estimate, mass: Given, period: Estimate): number =>
      e.value * Math.hypot((mass.halfWidth ?? 0) / mass.value, (period.high - period.low) / period.value);
    const value = inertia.value - platform.value;
    const half = Math.hypot(
      own(inertia, setup.mass, found.period),
      own(platform, options.empty.mass, emptyPeriod.period),
      value * common,
      value * length,
    );
    estimates.push(
      { ...inertia, name: 'inertia with platform' },
      { ...platform, name: 'inertia of the platform' },
    );
    inertia = estimate('inertia', value, half, 'kg·m²');
    if (inertia.low <= 0) {
      return refuse(
        `The platform (${show(platform.value)} kg·m²) swamps the body: the difference is ${show(value)} ± ${show(half, 2)} kg·m². Use a lighter platform or time more swings.`,
      );
    }
  }
  estimates.push(inertia);
  return {
    kind: 'identified',
    estimates,
    remarks,
    patches: [patchOf(options.target ?? 'bodyInertia', inertia)],
    comparison: found.comparison,
    residualSpread: found.spread,
  };
}

function findPeriod(source: PeriodSource): PeriodFound | Refused {
  if (source.kind === 'log') {
    const decay = identifyDecay(source.samples, { signal: source.signal ?? 'angle' });
    if (decay.kind === 'refused') return decay;
    const period = decay.estimates.find((e) => e.name === 'natural period') as Estimate;
    return { period, comparison: decay.comparison, spread: decay.residualSpread, remarks: decay.remarks };
  }
  const { totals, swings } = source;
  if (totals.length === 0) return refuse('No period reading is given.');
  if (!(swings >= 1 && Number.isInteger(swings)))
    return refuse(`Swings per reading is ${swings}: it must be a whole number from 1 up.`);
  const bad = totals.findIndex((t) => !(t > 0 && Number.isFinite(t)));
  if (bad >= 0) return refuse(`Reading ${bad + 1} is ${totals[bad]} s: it must be above zero.`);
  const n = totals.length;
  const mean = totals.reduce((s, t) => s + t, 0) / n;
  const spread = n > 1 ? Math.sqrt(totals.reduce((s, t) => s + (t - mean) ** 2, 0) / (n - 1)) : 0;
  const typed = (source.readingHalfWidth ?? 0) / Math.sqrt(n);
  if (n === 1 && !(typed > 0))
    return refuse(
      'One reading alone has no uncertainty: time it at least twice, or give the uncertainty of a reading.',
    );
  // The larger of what the readings scatter and what the stopwatch can be trusted to.
  const half = Math.max(n > 1 ? (studentQuantile(0.95, n - 1) * spread) / Math.sqrt(n) : 0, typed);
  if (n > 1 && half === 0)
    return refuse(`All ${n} readings are ${totals[0]} s: give the uncertainty of a reading.`);
  const measured = Float64Array.from(totals, (t) => t / swings);
  return {
    period: estimate('period', mean / swings, half / swings, 's'),
    comparison: {
      time: Float64Array.from(totals, (_, i) => i + 1),
      measured,
      predicted: measured.map(() => mean / swings),
      unit: 's',
    },
    spread: spread / swings,
    remarks: n > 1 ? [] : ['One reading only: the interval is the one typed.'],
  };
}
