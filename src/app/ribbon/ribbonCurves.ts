/** From an evaluation to the curves of the ribbon, in the units shown. No drawing here. */
import type { LedgerLine } from '../../core/planning';
import type { Rig } from '../../core/rig';
import { type Dimension, unitFor } from '../../core/units';
import { courseOf, type Evaluated, mostMomentum } from '../state/stream';
import type { MarkedQuantity } from '../styles/quantityMarks';

/** How a curve is told apart: one of the marked quantities, or a kind of ink line. */
export type CurveLook = MarkedQuantity | 'lead' | 'follow' | 'planned' | 'ask' | 'have';

export interface Curve {
  readonly label: string;
  readonly look: CurveLook;
  /** As many as the plot has instants, in the unit shown; null where there is nothing. */
  readonly values: readonly (number | null)[];
}

export interface RibbonPlotData {
  readonly title: string;
  readonly unit: string;
  /** s. */
  readonly time: readonly number[];
  readonly curves: readonly Curve[];
  /** Horizontal lines that must not be crossed, in the unit shown. */
  readonly limits: readonly number[];
  /** Lowest and highest value the plot must have room for. */
  readonly range: readonly [number, number];
}

type Units = Readonly<Partial<Record<Dimension, string>>>;

const column = (
  packed: ArrayLike<number>,
  width: number,
  place: number,
  samples: number,
  scale: number,
): (number | null)[] =>
  Array.from({ length: samples }, (_, k) => {
    const value = packed[k * width + place] as number;
    return Number.isFinite(value) ? value * scale : null;
  });

/** Least and greatest of some curves; [0, 0] when they hold nothing. */
function extremes(curves: readonly Curve[]): [number, number] {
  let low = 0;
  let high = 0;
  for (const curve of curves) {
    for (const value of curve.values) {
      if (value === null) continue;
      if (value < low) low = value;
      if (value > high) high = value;
    }
  }
  return [low, high];
}

const ROOM = 1.12;

/** A range with some room, which takes in a limit only where the curves come within half of it. */
function rangeFor(curves: readonly Curve[], limits: readonly number[], least: number): [number, number] {
  let [low, high] = extremes(curves);
  for (const limit of limits) {
    if (limit > 0 && high > 0.5 * limit) high = Math.max(high, limit);
    if (limit < 0 && low < 0.5 * limit) low = Math.min(low, limit);
  }
  return [Math.min(low * ROOM, -least), Math.max(high * ROOM, least)];
}

/** Tilt of each gimbal, done and planned, between its limits. */
export function tiltCurves(shown: Evaluated, rig: Rig, units: Units): RibbonPlotData {
  const { motion } = shown;
  const unit = unitFor('angle', units.angle);
  const scale = 1 / unit.toSI;
  const curves: Curve[] = [];
  for (let gyro = 0; gyro < motion.gyros; gyro++) {
    const planned = column(motion.plannedTilt, motion.gyros, gyro, motion.samples, scale);
    if (planned.some((value) => value !== null)) {
      curves.push({ label: 'planned', look: 'planned', values: planned });
    }
  }
  for (let gyro = 0; gyro < motion.gyros; gyro++) {
    curves.push({
      label: rig.array.gyros[gyro]?.name ?? `Gyro ${gyro + 1}`,
      look: gyro === 0 ? 'lead' : 'follow',
      values: column(motion.tilt, motion.gyros, gyro, motion.samples, scale),
    });
  }
  const limits = [
    ...new Set(rig.array.gyros.flatMap((gyro) => [gyro.tilt.min * scale, gyro.tilt.max * scale])),
  ].filter((limit) => limit !== 0);
  const [low, high] = rangeFor(curves, limits, 0.02 * scale);
  return {
    title: 'Tilt',
    unit: unit.symbol,
    time: Array.from(motion.time),
    curves,
    limits,
    range: [
      Math.min(low, ...limits.map((limit) => limit * ROOM)),
      Math.max(high, ...limits.map((limit) => limit * ROOM)),
    ],
  };
}

/** Roll moment asked of the array and given by it. */
export function momentCurves(shown: Evaluated, units: Units): RibbonPlotData {
  const { motion } = shown;
  const unit = unitFor('torque', units.torque);
  const scale = 1 / unit.toSI;
  const curves: Curve[] = [
    { label: 'demand', look: 'demand', values: column(motion.demand, 1, 0, motion.samples, scale) },
    { label: 'torque', look: 'torque', values: column(motion.torque, 3, 0, motion.samples, scale) },
  ];
  const line = shown.ledger.lines.find((candidate) => candidate.name === 'rollTorque');
  const most = line ? line.have.value * scale : 0;
  const limits = most > 0 ? [most, -most] : [];
  const range = rangeFor(curves, limits, 0.02 * scale);
  return { title: 'Roll moment', unit: unit.symbol, time: Array.from(motion.time), curves, limits, range };
}

/** Momentum the array holds in roll, between the most its tilt limits allow. */
export function momentumCurves(shown: Evaluated, units: Units): RibbonPlotData {
  const { motion } = shown;
  const unit = unitFor('angularMomentum', units.angularMomentum);
  const scale = 1 / unit.toSI;
  const curves: Curve[] = [
    { label: 'momentum', look: 'momentum', values: column(motion.momentum, 3, 0, motion.samples, scale) },
  ];
  const most = (mostMomentum(shown) ?? 0) * scale;
  const limits = most > 0 ? [most, -most] : [];
  const range = rangeFor(curves, limits, 0.02 * scale);
  return {
    title: 'Momentum in roll',
    unit: unit.symbol,
    time: Array.from(motion.time),
    curves,
    limits,
    range,
  };
}

/** Planned centre of pressure between the edges of the support; undefined where nothing stands on the ground. */
export function pressureCurves(
  shown: Evaluated,
  cycle: number,
  length: number,
  units: Units,
): RibbonPlotData | undefined {
  const course = courseOf(shown);
  const samples = course?.supportLeft.length ?? 0;
  if (!course || samples === 0) return undefined;
  const unit = unitFor('length', units.length);
  const scale = 1 / unit.toSI;
  const curves: Curve[] = [
    { label: 'left edge', look: 'have', values: column(course.supportLeft, 1, 0, samples, scale) },
    {
      label: 'right edge',
      look: 'have',
      values: column(course.supportRight, 1, 0, samples, scale),
    },
  ];
  if (course.centreOfPressure.length === samples) {
    curves.push({
      label: 'planned',
      look: 'ask',
      values: column(course.centreOfPressure, 1, 0, samples, scale),
    });
  }
  const repeated = repeatOver(Array.from(course.time), curves, cycle, length);
  const range = rangeFor(curves, [], 0.001 * scale);
  return { title: 'Centre of pressure, to the left', unit: unit.symbol, ...repeated, limits: [], range };
}

/** An opened ledger line over the plan: what is asked and what there is. Undefined for a line without a course. */
export function lineCurves(
  line: LedgerLine,
  cycle: number,
  length: number,
  units: Units,
): RibbonPlotData | undefined {
  if (!line.course) return undefined;
  const unit = unitFor(line.ask.dimension, units[line.ask.dimension]);
  const scale = 1 / unit.toSI;
  const samples = line.course.time.length;
  const curves: Curve[] = [
    { label: 'have', look: 'have', values: column(line.course.have, 1, 0, samples, scale) },
    { label: 'ask', look: 'ask', values: column(line.course.ask, 1, 0, samples, scale) },
  ];
  const [low, high] = extremes(curves);
  return {
    title: line.label,
    unit: unit.symbol,
    ...repeatOver(Array.from(line.course.time), curves, cycle, length),
    limits: [],
    range: [low * ROOM, high > 0 ? high * ROOM : 1],
  };
}

/** Repeats the curves of one cycle to the end of the ribbon; leaves them alone where nothing repeats. */
function repeatOver(
  time: readonly number[],
  curves: readonly Curve[],
  cycle: number,
  length: number,
): { readonly time: readonly number[]; readonly curves: readonly Curve[] } {
  if (!(cycle > 0) || cycle >= length) return { time, curves };
  const turns = Math.ceil(length / cycle);
  // The last instant of a cycle is the first of the next.
  const inner = time.filter((seconds) => seconds < cycle - 1e-9).length;
  const place = (k: number): number => k % inner;
  const all = Array.from({ length: turns * inner }, (_, k) => k);
  return {
    time: all.map((k) => (time[place(k)] as number) + Math.floor(k / inner) * cycle),
    curves: curves.map((curve) => ({
      ...curve,
      values: all.map((k) => curve.values[place(k)] as number | null),
    })),
  };
}

/** Place of an instant among rising times: the last one not after it. O(log n). */
export function indexAt(time: readonly number[], seconds: number): number {
  let low = 0;
  let high = time.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if ((time[middle] as number) <= seconds) low = middle;
    else high = middle - 1;
  }
  return low;
}
