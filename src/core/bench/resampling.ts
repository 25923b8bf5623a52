/** Columns on a clock: time rising, s; values beside it, NaN where missing. */
export interface Samples {
  readonly time: Float64Array;
  readonly values: Float64Array;
}

/** First index whose time is not below t. */
export function findInstant(time: ArrayLike<number>, t: number): number {
  let low = 0;
  let high = time.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (time[middle] < t) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** The part of a log between two instants (both included); time is not shifted. Views, no copies. */
export function cutSamples(samples: Samples, from: number, to: number): Samples {
  const first = findInstant(samples.time, from);
  let last = findInstant(samples.time, to);
  if (last < samples.time.length && samples.time[last] === to) last++;
  return { time: samples.time.subarray(first, last), values: samples.values.subarray(first, last) };
}

/** Rows in which every value is a number. */
export function dropMissing(samples: Samples): Samples {
  let n = 0;
  for (let i = 0; i < samples.values.length; i++) if (Number.isFinite(samples.values[i])) n++;
  if (n === samples.values.length) return samples;
  const time = new Float64Array(n);
  const values = new Float64Array(n);
  n = 0;
  for (let i = 0; i < samples.values.length; i++) {
    if (!Number.isFinite(samples.values[i])) continue;
    time[n] = samples.time[i];
    values[n++] = samples.values[i];
  }
  return { time, values };
}

/**
 * Puts samples on an even grid by straight lines between neighbours; where the gap is longer than `longestGap`
 * (s) or outside the log, NaN. O(n + grid).
 */
export function resampleEvenly(
  samples: Samples,
  from: number,
  step: number,
  count: number,
  longestGap: number,
): Float64Array {
  const { time, values } = dropMissing(samples);
  const out = new Float64Array(count).fill(Number.NaN);
  let j = 1;
  for (let i = 0; i < count; i++) {
    const t = from + i * step;
    while (j < time.length - 1 && time[j] < t) j++;
    if (time.length < 2 || t < time[0] || t > time[time.length - 1] || time[j] - time[j - 1] > longestGap)
      continue;
    const share = (t - time[j - 1]) / (time[j] - time[j - 1]);
    out[i] = values[j - 1] + share * (values[j] - values[j - 1]);
  }
  return out;
}

/**
 * Thins samples to at most `most` by averaging neighbours, time and value alike; white noise falls as it should and
 * a signal slow against the block is kept. Samples that already fit come back as they are.
 */
export function averageBlocks(samples: Samples, most: number): Samples {
  const n = samples.time.length;
  if (n <= most) return samples;
  const block = Math.ceil(n / most);
  const count = Math.floor(n / block);
  const time = new Float64Array(count);
  const values = new Float64Array(count);
  for (let i = 0; i < count; i++) {
    let t = 0;
    let v = 0;
    for (let k = i * block; k < (i + 1) * block; k++) {
      t += samples.time[k];
      v += samples.values[k];
    }
    time[i] = t / block;
    values[i] = v / block;
  }
  return { time, values };
}
