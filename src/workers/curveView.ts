import { findInstant, type Samples } from '../core/bench';

/** A curve as it can be drawn: the extremes of each stretch, at the instants at which they stand. */
export interface CurveView {
  readonly time: Float64Array;
  /** NaN where readings are missing. */
  readonly values: Float64Array;
  /** True when every reading is in it. */
  readonly isWhole: boolean;
}

/**
 * Reduces a curve to what a plot `pixels` wide can show: of each pixel's readings the first, least, greatest and last.
 * Spikes of one reading stay in sight, gaps stay gaps.
 *
 * @param from, to  s, both included; one reading beyond each end is kept so that the line runs off the picture
 * O(readings between).
 */
export function reduceCurve(samples: Samples, from: number, to: number, pixels: number): CurveView {
  const { time, values } = samples;
  const first = Math.max(0, findInstant(time, from) - 1);
  const last = Math.min(time.length, findInstant(time, to) + 2);
  const count = Math.max(0, last - first);
  if (count <= 4 * pixels)
    return { time: time.slice(first, last), values: values.slice(first, last), isWhole: true };
  const outTime = new Float64Array(5 * pixels);
  const outValues = new Float64Array(5 * pixels);
  let n = 0;
  let i = first;
  for (let pixel = 0; pixel < pixels; pixel++) {
    const end = first + Math.floor(((pixel + 1) * count) / pixels);
    let least = -1;
    let most = -1;
    let gap = -1;
    const start = i;
    for (; i < end; i++) {
      const value = values[i] as number;
      if (Number.isNaN(value)) gap = i;
      else {
        if (least < 0 || value < (values[least] as number)) least = i;
        if (most < 0 || value > (values[most] as number)) most = i;
      }
    }
    const places = [start, least, most, end - 1, gap].filter((k) => k >= 0).sort((a, b) => a - b);
    let before = -1;
    for (const k of places) {
      if (k === before) continue;
      before = k;
      outTime[n] = time[k] as number;
      outValues[n++] = values[k] as number;
    }
  }
  return { time: outTime.slice(0, n), values: outValues.slice(0, n), isWhole: false };
}
