import type { TrialRun } from './trialRun';

/** A record as CSV: one row a sample, names with units in the first. */
export function writeTrialCsv({ motion, columns }: TrialRun): string {
  const { samples, gyros } = motion;
  const names = Array.from({ length: gyros }, (_, i) => `tilt ${i + 1} (rad)`);
  const rates = Array.from({ length: gyros }, (_, i) => `tilt rate ${i + 1} (rad/s)`);
  const head = [
    'time (s)',
    'lean (rad)',
    'lean rate (rad/s)',
    'lean estimate (rad)',
    'lean rate estimate (rad/s)',
    'command',
    'servo torque (N m)',
    'array roll torque (N m)',
    'array roll momentum (N m s)',
    'array yaw momentum (N m s)',
    ...names,
    ...rates,
  ];
  const rows = Array.from({ length: samples }, (_, k) =>
    [
      motion.time[k],
      columns.lean[k],
      columns.leanRate[k],
      columns.leanEstimate[k],
      columns.rateEstimate[k],
      columns.command[k],
      columns.servoTorque[k],
      motion.torque[3 * k],
      motion.momentum[3 * k],
      motion.momentum[3 * k + 2],
      ...motion.tilt.subarray(k * gyros, (k + 1) * gyros),
      ...motion.tiltRate.subarray(k * gyros, (k + 1) * gyros),
    ].join(','),
  );
  return `${[head.join(','), ...rows].join('\r\n')}\r\n`;
}
