import type { PlanCourse } from '../trial';

/** Quotes a cell when it holds something a reader of CSV would stumble on (RFC 4180). */
const cell = (text: string): string => (/[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);

const DIGITS = 9;
const number = (value: number): string => String(Number(value.toPrecision(DIGITS)));

/**
 * The tilt schedule as CSV text: time and each gimbal's tilt and tilt rate, units in the header.
 *
 * @param course  the plan's curves; tilt and rate nodes x gyros, rad and rad/s
 * @param names   a name for each gyro; a missing one is numbered
 * @returns lines ended by CR LF, numbers with a point and nine digits in SI (s, rad, rad/s). O(nodes x gyros).
 *
 * Source: RFC 4180 for the form.
 */
export function writeScheduleCsv(course: PlanCourse, names: readonly string[]): string {
  const gyros = Array.from({ length: course.gyros }, (_, gyro) => names[gyro] ?? `Gyro ${gyro + 1}`);
  const header = [
    'time (s)',
    ...gyros.flatMap((name) => [`${name} tilt (rad)`, `${name} tilt rate (rad/s)`]),
  ];
  const lines = [header.map(cell).join(',')];
  for (let node = 0; node < course.time.length; node++) {
    const cells = [number(course.time[node]!)];
    for (let gyro = 0; gyro < course.gyros; gyro++) {
      const at = node * course.gyros + gyro;
      cells.push(number(course.tilt[at]!), number(course.tiltRate[at]!));
    }
    lines.push(cells.join(','));
  }
  return `${lines.join('\r\n')}\r\n`;
}
