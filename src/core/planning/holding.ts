/** What a planned rig can still take: the largest shove at each instant, and how long a steady load can be held. */
import { inertiaAbout, STANDARD_GRAVITY } from '../physics';
import type { Figure, FigureInput } from '../units';
import { captureCourse } from './captureMargin';
import { trunkOf } from './demand';
import { input } from './ledgerLine';
import type { AxisSchedule } from './momentumPlanCheck';
import type { AxisArray } from './momentumPlanProblem';
import type { PlanSetting } from './rigPlan';
import {
  fillImpulseLimit,
  findRecentring,
  holdingTime,
  largestAngularImpulse,
  type TopplingBody,
  topplingRate,
} from './shoveLimit';

/** What is asked about. */
export interface HoldingAsk {
  /** m above the ground or keel line at which the body is shoved or loaded. */
  readonly height: number;
  /** N, a steady side load; m, a centre of mass that much to one side; s, in which to come back to the middle. */
  readonly sideForce: number;
  readonly trimError: number;
  readonly recentring: number;
}

export interface Holding {
  /** N*s at the height asked: sideways, from rest with the array in the middle. */
  readonly fromRest: Figure;
  /** N*s at each instant of the plan: array and capture point together, the worse side; undefined without a plan. */
  readonly course: { readonly time: Float64Array; readonly impulse: Float64Array } | undefined;
  /** Largest and least over the plan, and capture margin (firm only), holding times and what re-centring needs. */
  readonly figures: readonly Figure[];
}

/** The body as it topples about its pivot, or over the edge of its support. */
export function topplingBodyOf(setting: PlanSetting): TopplingBody {
  if (setting.kind === 'lean') return { inertia: setting.inertia, stiffness: -setting.stiffness };
  const { whole } = setting.compiled;
  return {
    inertia: inertiaAbout(whole, [whole.com[0], whole.com[1], 0])[0],
    stiffness: whole.mass * STANDARD_GRAVITY * whole.com[2],
  };
}

/** Most momentum each way and most torque of an axis at rest. */
function limitsOf(array: AxisArray): { readonly momentum: number; readonly torque: number } {
  if (array.kind === 'reaction') return { momentum: array.momentum, torque: array.torque };
  const tilt = Math.min(array.tiltMax, -array.tiltMin);
  return {
    momentum: array.momentum * Math.sin(tilt),
    torque: Math.min(array.torque, array.momentum * array.tiltRate * Math.cos(tilt)),
  };
}

const pivotHeightOf = (setting: PlanSetting): number => {
  const { rig, whole } = setting.compiled;
  if (rig.footing.kind === 'float') return whole.com[2];
  return rig.footing.kind === 'point' ? rig.footing.position[2] : 0;
};

/**
 * Shove limits and holding times in roll.
 *
 * A shove that feet flat on the ground can take is counted as two: what the capture point leaves inside the support
 * (I a margin / z_com, no array needed), and what the array takes of a body that topples.
 *
 * @param schedules  of the plan; empty: only what holds from rest
 * @returns undefined when nothing works in roll
 *
 * O(instants).
 */
export function holdingOf(
  setting: PlanSetting,
  schedules: readonly AxisSchedule[],
  ask: HoldingAsk,
): Holding | undefined {
  const at = setting.axes.findIndex(({ axis }) => axis === 'roll');
  const axis = setting.axes[at];
  if (!axis) return undefined;
  const { array } = axis;
  const body = topplingBodyOf(setting);
  const { momentum, torque } = limitsOf(array);
  const arm = Math.max(1e-3, ask.height - pivotHeightOf(setting));
  const rate = topplingRate(body);
  const bare = bareShare(setting, body);
  const fromArray = largestAngularImpulse(body, momentum, torque);
  const inputs: readonly FigureInput[] = [
    input('Momentum left ΔH', momentum, 'angularMomentum'),
    input('Largest torque M at the tilt limit', torque, 'torque'),
    input('Toppling rate a', rate, 'frequency'),
    input('Height above the pivot z', arm, 'length'),
  ];
  const formula = 'P z = M (1 − exp(−a ΔH / M)) / a';
  const source = 'impulse the unstable mode can still be brought back from, first principles';
  const figures: Figure[] = [];
  const fromRest: Figure = {
    id: 'shoveFromRest',
    label: 'Largest shove from rest, by the array alone',
    value: fromArray / arm,
    dimension: 'impulse',
    formula,
    inputs,
    source,
  };
  const impulse = new Float64Array(setting.time.length);
  const schedule = schedules[at];
  if (schedule) {
    fillImpulseLimit(body, array, schedule, impulse);
    for (let k = 0; k < impulse.length; k++) impulse[k] = (impulse[k] + (bare?.[k % bare.length] ?? 0)) / arm;
    figures.push(...extremes(impulse, inputs, bare !== undefined, source));
  }
  if (bare) figures.push(captureFigure(setting));
  figures.push(...steadyFigures(setting, ask, momentum, arm));
  return { fromRest, course: schedule && { time: setting.time, impulse }, figures };
}

/** Angular impulse that the capture point leaves inside the support at each node, N*m*s; undefined unless firm. */
function bareShare(setting: PlanSetting, body: TopplingBody): Float64Array | undefined {
  if (setting.kind !== 'firm') return undefined;
  const { course, legs, demand, compiled } = setting;
  const { margin } = captureCourse(course, trunkOf(compiled.rig), legs, demand);
  const perMetre = (body.inertia * topplingRate(body)) / compiled.whole.com[2];
  return margin.map((m) => perMetre * Math.max(0, Number.isFinite(m) ? m : 0));
}

function extremes(
  impulse: Float64Array,
  inputs: readonly FigureInput[],
  hasFeet: boolean,
  source: string,
): readonly Figure[] {
  const formula = hasFeet
    ? 'P z = M′ (1 − exp(−a ΔH′ / M′)) / a + I a margin / z_com, M′ and ΔH′ what the plan leaves'
    : 'P z = M′ (1 − exp(−a ΔH′ / M′)) / a, M′ and ΔH′ what the plan leaves';
  const of = (id: string, label: string, value: number): Figure => ({
    id,
    label,
    value,
    dimension: 'impulse',
    formula,
    inputs,
    source,
  });
  return [
    of('shoveLeast', 'Largest shove at the worst instant', Math.min(...impulse)),
    of('shoveMost', 'Largest shove at the best instant', Math.max(...impulse)),
  ];
}

function captureFigure(setting: PlanSetting): Figure {
  if (setting.kind !== 'firm') throw new Error('only feet on the ground have a capture margin');
  const { course, legs, demand, compiled } = setting;
  const { margin } = captureCourse(course, trunkOf(compiled.rig), legs, demand);
  return {
    id: 'captureMargin',
    label: 'Capture margin, least (negative: only the array or a step holds it)',
    value: margin.reduce((least, m) => Math.min(least, m), Number.POSITIVE_INFINITY),
    dimension: 'length',
    formula: 'distance of y + ẏ/ω₀ from the nearer edge of the support',
    inputs: [input('Centre of mass height', compiled.whole.com[2], 'length')],
    source: 'Hof, Gazendam & Sinke, J. Biomechanics 38 (2005)',
  };
}

function steadyFigures(
  setting: PlanSetting,
  ask: HoldingAsk,
  momentum: number,
  arm: number,
): readonly Figure[] {
  const weight = setting.compiled.whole.mass * STANDARD_GRAVITY;
  const room = input('Momentum from the middle ΔH', momentum, 'angularMomentum');
  const loads: readonly (readonly [string, string, number, FigureInput])[] = [
    [
      'holdSide',
      'Time a steady side load is held',
      ask.sideForce * arm,
      input('Side load', ask.sideForce, 'force'),
    ],
    [
      'holdTrim',
      'Time a trim error is held',
      weight * ask.trimError,
      input('Trim error', ask.trimError, 'length'),
    ],
  ];
  const times = loads.map(
    ([id, label, moment, load]): Figure => ({
      id,
      label,
      value: holdingTime(momentum, moment),
      dimension: 'time',
      formula: 'ΔH / moment',
      inputs: [room, load, input('Moment', moment, 'torque')],
      source: 'momentum theorem; the moment not trimmed, borne by the array alone',
    }),
  );
  const back = findRecentring(momentum, ask.recentring, weight);
  const spent: readonly FigureInput[] = [room, input('Time to come back', ask.recentring, 'time')];
  return [
    ...times,
    {
      id: 'recentreMoment',
      label: 'Moment that empties a full array again',
      value: Math.abs(back.moment),
      dimension: 'torque',
      formula: 'ΔH / time',
      inputs: spent,
      source: 'momentum theorem',
    },
    {
      id: 'recentreShift',
      label: 'Shift of the centre of mass that gives it',
      value: Math.abs(back.shift),
      dimension: 'length',
      formula: 'ΔH / (time × weight)',
      inputs: [...spent, input('Weight', weight, 'force')],
      source: 'momentum theorem',
    },
  ];
}
