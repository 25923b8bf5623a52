/**
 * A position servo seen from outside: delay, first-order lag, speed limit, then play in the gears.
 * Between changes of the command its motion is known in closed form, so nothing is integrated and the result is exact.
 */
export interface ServoParameters {
  /** s. */
  readonly delay: number;
  /** s, time constant. */
  readonly lag: number;
  /** rad/s; Infinity for none. */
  readonly speedLimit: number;
  /** rad, whole width of the play; below zero it leads by as much, so that a fit can come to rest on none. */
  readonly backlash: number;
}

/** Commands held from their instant on: command[j] holds from time[j]. */
export interface HeldCommand {
  readonly time: Float64Array;
  readonly command: Float64Array;
}

/** Keeps only the instants at which a logged command changes. */
export function findCommandChanges(time: Float64Array, command: Float64Array): HeldCommand {
  const at: number[] = [0];
  for (let i = 1; i < time.length; i++) if (command[i] !== command[at[at.length - 1]]) at.push(i);
  return { time: Float64Array.from(at, (i) => time[i]), command: Float64Array.from(at, (i) => command[i]) };
}

/**
 * Follows a held command from rest at its first value and samples the output.
 *
 * @param held  command changes, rising in time
 * @param time  n, s, rising, not before held.time[0]
 * @param out   n, rad
 * O(n + changes).
 */
export function simulateServo(
  p: ServoParameters,
  held: HeldCommand,
  time: Float64Array,
  out: Float64Array,
): void {
  const half = 0.5 * Math.abs(p.backlash);
  const isLead = p.backlash < 0;
  let x = held.command[0];
  let y = x;
  let goal = x;
  let now = time[0];
  let next = 1;
  for (let i = 0; i < time.length; i++) {
    while (next < held.time.length && held.time[next] + p.delay <= time[i]) {
      const at = Math.max(now, held.time[next] + p.delay);
      x = approach(x, goal, at - now, p.lag, p.speedLimit);
      y = Math.max(x - half, Math.min(x + half, y));
      now = at;
      goal = held.command[next++];
    }
    x = approach(x, goal, time[i] - now, p.lag, p.speedLimit);
    y = Math.max(x - half, Math.min(x + half, y));
    now = time[i];
    out[i] = isLead ? 2 * x - y : y;
  }
}

function approach(x: number, goal: number, span: number, lag: number, limit: number): number {
  const error = goal - x;
  const size = Math.abs(error);
  const knee = limit * lag;
  if (size <= knee || limit === Number.POSITIVE_INFINITY) return goal - error * Math.exp(-span / lag);
  const slew = (size - knee) / limit;
  if (span <= slew) return x + Math.sign(error) * limit * span;
  return goal - Math.sign(error) * knee * Math.exp(-(span - slew) / lag);
}
