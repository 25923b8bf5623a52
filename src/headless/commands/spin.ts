import {
  arraySpinFigures,
  describeTrigger,
  type SpinReport,
  shakeFigures,
  spinFailures,
  spinFigures,
  spinRig,
} from '../../core/physics';
import type { Command } from '../command';

const curveOf = (report: SpinReport) =>
  report.spinUp.kind === 'reaches'
    ? {
        time: report.spinUp.spinUp.time,
        speed: report.spinUp.spinUp.speed,
        current: report.spinUp.spinUp.current,
        batteryPower: report.spinUp.spinUp.batteryPower,
      }
    : undefined;

/** Spin-up curves of all wheels, one row an instant; SI with the unit in the name. */
function curvesAsCsv(reports: readonly SpinReport[]): string {
  const rows = ['gyro,time_s,speed_rad_s,current_A,battery_power_W'];
  reports.forEach((report, gyro) => {
    const curve = curveOf(report);
    if (!curve) return;
    for (let i = 0; i < curve.time.length; i++) {
      rows.push([gyro, curve.time[i], curve.speed[i], curve.current[i], curve.batteryPower[i]].join(','));
    }
  });
  return `${rows.join('\r\n')}\r\n`;
}

export const spinCommand: Command = {
  name: 'spin',
  purpose: 'wheel stress and safe speed, balance, bearings, spin-up, power, run time, cautions',
  example: 'spin public/rigs/strider.json --gimbal-power 12',
  options: [
    {
      name: 'gimbal-power',
      meaning: 'mean power of gimbal drives and legs, W, counted in the run time',
      fallback: '0',
    },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const gimbalPower = options.number('gimbal-power', 0, 1e6, 'W');
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const spin = spinRig(rig, gimbalPower);
    const sentences: string[] = [];
    const reports: SpinReport[] = [];
    spin.gyros.forEach((outcome, i) => {
      if (outcome.kind === 'spun') reports.push(outcome.report);
      else {
        for (const fault of outcome.faults)
          sentences.push(
            `array.gyros[${i}].wheel.${fault.field}: ${fault.value}; it must be ${fault.allowed}.`,
          );
      }
    });
    if (sentences.length > 0) return { kind: 'refused', sentences };
    const gyros = reports.map((report, i) => ({
      name: report.gyro.name,
      failures: spinFailures(report),
      figures: Object.fromEntries(spinFigures(report).map(({ name, figures }) => [name, figures])),
      sensor: shakeFigures(spin.shakes[i]!, report, rig.sensing.loopRate),
      stressLines: report.stress.lines,
      joints: report.stress.joints,
      contacts: report.stress.contacts,
      spinUp: curveOf(report),
    }));
    const output = {
      rig: rig.name,
      gyros,
      figures: arraySpinFigures(spin),
      cautions: spin.cautions.map((caution) => ({ ...caution, because: describeTrigger(caution.trigger) })),
    };
    const kind = gyros.some(({ failures }) => failures.length > 0) ? 'failing' : 'done';
    return { kind, output, csv: curvesAsCsv(reports) };
  },
};
