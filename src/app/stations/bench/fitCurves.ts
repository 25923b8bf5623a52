import type { Comparison } from '../../../core/bench';
import { reduceCurve } from '../../../workers';
import type { BenchCurve } from './BenchPlot';

const PIXELS = 500;

/** A fit as curves: measured and fitted on one axis, the residual on another; reduced to what a sheet can show. */
export function fitCurves({ time, measured, predicted }: Comparison): {
  readonly fit: readonly BenchCurve[];
  readonly residual: readonly BenchCurve[];
} {
  const from = time[0] ?? 0;
  const to = time[time.length - 1] ?? 0;
  const reduce = (values: Float64Array) => reduceCurve({ time, values }, from, to, PIXELS);
  const residual = measured.map((value, i) => value - (predicted[i] as number));
  return {
    fit: [
      { label: 'measured', look: 'measured', ...reduce(measured) },
      { label: 'fitted', look: 'predicted', ...reduce(predicted) },
    ],
    residual: [{ label: 'residual', look: 'residual', ...reduce(residual) }],
  };
}
