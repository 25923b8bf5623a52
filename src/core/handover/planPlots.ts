/** Which plots leave the program, and from which columns. */
import type { SpinSheet } from '../physics';
import type { Rig } from '../rig';
import type { PlanCourse, PlanView } from '../trial';
import { fromSI } from '../units';
import type { Plot } from './plotSvg';
import { fileStem } from './text';

export interface NamedPlot {
  /** Of which its file names are made, such as `tilt`. */
  readonly name: string;
  readonly plot: Plot;
}

const inDegrees = (values: Float64Array): Float64Array => values.map((value) => fromSI(value, 'angle', '°'));
const level = (like: Float64Array, value: number): Float64Array => like.map(() => value);

function gimbalPlots(rig: Rig, course: PlanCourse): readonly NamedPlot[] {
  const across = { label: 'time (s)', values: course.time };
  const { gyros } = rig.array;
  const column = (values: Float64Array, gyro: number): Float64Array =>
    inDegrees(course.time.map((_, k) => values[k * course.gyros + gyro] as number));
  const tilts = gyros.map(({ name }, gyro) => ({ label: name, values: column(course.tilt, gyro) }));
  const rates = gyros.map(({ name }, gyro) => ({ label: name, values: column(course.tiltRate, gyro) }));
  const most = Math.max(...gyros.map(({ tilt }) => tilt.max));
  const least = Math.min(...gyros.map(({ tilt }) => tilt.min));
  const limits = [most, least].map((value, i) => ({
    label: i === 0 ? 'limit above' : 'limit below',
    values: inDegrees(level(course.time, value)),
    isLimit: true,
  }));
  return [
    { name: 'tilt', plot: { title: 'Planned tilt', across, up: 'tilt (°)', lines: [...tilts, ...limits] } },
    { name: 'tilt-rate', plot: { title: 'Planned tilt rate', across, up: 'tilt rate (°/s)', lines: rates } },
  ];
}

function rollPlots(course: PlanCourse): readonly NamedPlot[] {
  const across = { label: 'time (s)', values: course.time };
  const plots: NamedPlot[] = [
    {
      name: 'torque',
      plot: {
        title: 'Roll torque: asked, and given by the array',
        across,
        up: 'torque (N·m)',
        lines: [
          { label: 'asked', values: course.demand },
          { label: 'of the array', values: course.torque },
        ],
      },
    },
    {
      name: 'momentum',
      plot: {
        title: 'Roll momentum held by the array',
        across,
        up: 'momentum (N·m·s)',
        lines: [
          { label: 'held', values: course.momentum },
          { label: 'most', values: course.momentumLimit, isLimit: true },
          { label: 'least', values: course.momentumLimit.map((value) => -value), isLimit: true },
        ],
      },
    },
  ];
  if (course.centreOfPressure.length > 0) {
    const inMm = (values: Float64Array): Float64Array => values.map((value) => fromSI(value, 'length', 'mm'));
    plots.push({
      name: 'pressure',
      plot: {
        title: 'Centre of pressure across the body, and the edges of the support',
        across,
        up: 'to the left (mm)',
        lines: [
          { label: 'centre of pressure', values: inMm(course.centreOfPressure) },
          { label: 'left edge', values: inMm(course.supportLeft), isLimit: true },
          { label: 'right edge', values: inMm(course.supportRight), isLimit: true },
        ],
      },
    });
  }
  return plots;
}

function spinPlots(spin: SpinSheet): readonly NamedPlot[] {
  const seen = new Set<string>();
  return spin.gyros.flatMap(({ name, spinUp, speed }) => {
    if (!spinUp) return [];
    const key = `${speed} ${spinUp.time.join()}`;
    if (seen.has(key)) return [];
    seen.add(key);
    const rpm = spinUp.speed.map((value) => fromSI(value, 'spinRate', 'rpm'));
    return [
      {
        name: `spin-up-${fileStem(name, 'wheel')}`,
        plot: {
          title: `Spin-up of ${name}`,
          across: { label: 'time (s)', values: spinUp.time },
          up: 'speed (rpm)',
          lines: [{ label: 'speed', values: rpm }],
        },
      },
    ];
  });
}

/** Every plot there is to hand over: the plan's where there is one, and each different wheel's spin-up. */
export function listPlots(rig: Rig, plan: PlanView, spin: SpinSheet | undefined): readonly NamedPlot[] {
  const ofPlan = plan.kind === 'planned' ? [...gimbalPlots(rig, plan.course), ...rollPlots(plan.course)] : [];
  return [...ofPlan, ...(spin ? spinPlots(spin) : [])];
}
