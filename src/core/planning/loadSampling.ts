/** Loads brought to the instants of a plan, where values are joined by straight lines. */

/**
 * Share of a load that is on from `from` to `to` which falls to an instant, when values between instants run
 * straight: the mean of the load under a hat that reaches to the neighbouring instants. The area under the
 * straight run is then the load's own.
 *
 * @param isEnd  -1 at the first instant, 1 at the last, 0 between
 */
export function hatShare(from: number, to: number, instant: number, step: number, isEnd: -1 | 0 | 1): number {
  // Integral of the rising half of the hat up to u = (time - instant) / step in [-1, 0]: (1 + u)^2 / 2.
  const upTo = (time: number): number => {
    const u = Math.min(1, Math.max(-1, (time - instant) / step));
    const v = isEnd === -1 ? Math.max(0, u) : isEnd === 1 ? Math.min(0, u) : u;
    return v <= 0 ? (1 + v) ** 2 / 2 : 1 - (1 - v) ** 2 / 2;
  };
  const whole = isEnd === 0 ? 1 : 0.5;
  return (upTo(to) - upTo(from)) / whole;
}

/** Value of evenly spaced samples at an instant, joined by straight lines; zero outside. */
export function sampleSeries(
  values: ArrayLike<number>,
  start: number,
  interval: number,
  time: number,
): number {
  const place = (time - start) / interval;
  const last = values.length - 1;
  if (!(place >= 0 && place <= last)) return 0;
  const i = Math.min(last - 1, Math.floor(place));
  return (values[i] as number) + (place - i) * ((values[i + 1] as number) - (values[i] as number));
}
