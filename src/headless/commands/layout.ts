import {
  type ArrayModel,
  type CompiledRig,
  compileRig,
  type GyroFault,
  layoutLeak,
  momentumEnvelope,
  noFault,
  reportLayout,
} from '../../core/physics';
import { gimbalGroups, workingSpeed } from '../../core/planning';
import type { Command } from '../command';

const ENVELOPE_ROWS = 24;
const ENVELOPE_COLUMNS = 48;

/** Tilt and top rate of every gimbal when each servo stands at `tilt`; gimbals without a servo stay and may turn at none. */
function gimbalsAt(compiled: CompiledRig, tilt: number) {
  const n = compiled.model.gimbals;
  const tilts = new Array<number>(n).fill(0);
  const rates = new Array<number>(n).fill(0);
  for (const group of gimbalGroups(compiled)) {
    for (const { index, ratio } of group.members) {
      tilts[index] = ratio * tilt;
      rates[index] = Math.abs(ratio) * workingSpeed(group.servo);
    }
  }
  return { tilts, rates };
}

const momentaOf = ({ wheels, speeds }: CompiledRig): number[] =>
  wheels.map(({ spinInertia }, i) => spinInertia * (speeds[i] as number));

/** Largest momentum along and across each body axis of the outer envelope, N*m*s, tilt unlimited. */
function envelopeExtents(array: ArrayModel, momentum: readonly number[]) {
  if (array.count === 0) return null;
  const { outer } = momentumEnvelope(array, momentum.map(Math.abs), ENVELOPE_ROWS, ENVELOPE_COLUMNS);
  const extent = [0, 0, 0];
  for (let k = 0; k < outer.points.length; k++) {
    const value = Math.abs(outer.points[k] as number);
    if (value > (extent[k % 3] as number)) extent[k % 3] = value;
  }
  return { roll: extent[0], pitch: extent[1], yaw: extent[2] };
}

interface Faults {
  readonly speed: number;
  readonly axis: number;
  readonly lag: number;
}

/** What each fault by itself, in the last gyro, leaves over while every servo turns at its working speed. */
function leftovers(compiled: CompiledRig, tilt: number, faults: Faults) {
  const { rig, model } = compiled;
  const n = model.gimbals;
  if (n === 0) return null;
  const { tilts } = gimbalsAt(compiled, tilt);
  const rates = new Array<number>(n).fill(0);
  for (const group of gimbalGroups(compiled)) {
    for (const { index, ratio } of group.members) rates[index] = ratio * workingSpeed(group.servo);
  }
  const gyros = rig.array.gyros.map(({ gimbalAxis, spinAxis }, i) => ({
    gimbalAxis,
    spinAxis,
    axialInertia: compiled.wheels[i]?.spinInertia ?? 0,
  }));
  const leak = (fault: Partial<GyroFault>) =>
    layoutLeak(
      gyros,
      tilts,
      rates,
      momentaOf(compiled),
      gyros.map((_, i) => (i === n - 1 ? { ...noFault, ...fault } : noFault)),
    );
  return {
    faultIn: rig.array.gyros[n - 1]?.name,
    speedMismatch: { share: faults.speed, ...leak({ speedError: faults.speed }) },
    misalignedAboutForward: { angle: faults.axis, ...leak({ misalignment: [faults.axis, 0, 0] }) },
    misalignedAboutVertical: { angle: faults.axis, ...leak({ misalignment: [0, 0, faults.axis] }) },
    laggingServo: { angle: faults.lag, ...leak({ tiltLag: faults.lag }) },
  };
}

/** Numbers parted by commas, rad; a fault noted for what is none. */
function readTilts(text: string, faults: string[]): readonly number[] {
  const tilts = text.split(',').map((word) => (word.trim() === '' ? Number.NaN : Number(word)));
  if (tilts.every((tilt) => Number.isFinite(tilt) && Math.abs(tilt) <= Math.PI)) return tilts;
  faults.push(`--tilts: "${text}" is not a list of angles from -3.1416 to 3.1416 rad parted by commas.`);
  return [];
}

export const layoutCommand: Command = {
  name: 'layout',
  purpose: 'what the array gives at given tilts, its envelope, and what faults leave over',
  example: 'layout public/rigs/strider.json --tilts 0,0.4,0.8',
  options: [
    { name: 'tilts', meaning: 'tilts of the servos, rad, parted by commas', fallback: '0,0.5' },
    { name: 'speed-error', meaning: 'share by which one wheel is too fast', fallback: '0.02' },
    {
      name: 'axis-error',
      meaning: 'angle by which one gyro is turned from where it should be, rad',
      fallback: '0.0175',
    },
    { name: 'tilt-lag', meaning: 'angle by which one gimbal is behind, rad', fallback: '0.0175' },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const tilts = readTilts(options.text('tilts'), options.faults);
    const faults = {
      speed: options.number('speed-error', -1, 1),
      axis: options.number('axis-error', -1, 1, 'rad'),
      lag: options.number('tilt-lag', -3, 3, 'rad'),
    };
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const outcome = compileRig(rig);
    if (outcome.kind === 'refused') {
      return { kind: 'refused', sentences: outcome.refusals.map(({ sentence }) => sentence) };
    }
    const { compiled } = outcome;
    const { array } = compiled.model;
    const momentum = momentaOf(compiled);
    const places = array.count === 0 ? [] : tilts.map((tilt) => placeAt(compiled, tilt, faults));
    return {
      kind: 'done',
      output: {
        rig: rig.name,
        note: 'Most torque takes each gimbal by itself; one geared to another gives what stands beside the roll.',
        envelope: envelopeExtents(array, momentum),
        places,
      },
      csv: tableOf(places),
    };
  },
};

function placeAt(compiled: CompiledRig, tilt: number, faults: Faults) {
  const { tilts, rates } = gimbalsAt(compiled, tilt);
  const report = reportLayout(compiled.model.array, tilts, momentaOf(compiled), rates);
  const { measure, gains, rank, weakest, nullMotion } = report.singularity;
  return {
    tilt,
    tilts,
    momentum: report.momentum,
    mostTorque: report.most,
    besideMostRoll: report.besideRoll,
    singularity: { measure, gains, rank, weakest: Array.from(weakest) },
    nullMotion: nullMotion.columns === 0 ? [] : nullMotion.transpose().to2DArray(),
    leftovers: leftovers(compiled, tilt, faults),
  };
}

function tableOf(places: readonly ReturnType<typeof placeAt>[]): string {
  const names = [
    'tilt_rad',
    'hx_Nms',
    'hy_Nms',
    'hz_Nms',
    'most_roll_Nm',
    'most_pitch_Nm',
    'most_yaw_Nm',
    'yaw_leak_beside_roll_Nm',
    'singularity_measure',
  ];
  const rows = places.map(({ tilt, momentum, mostTorque, besideMostRoll, singularity }) =>
    [
      tilt,
      ...momentum,
      mostTorque.roll,
      mostTorque.pitch,
      mostTorque.yawLeak,
      besideMostRoll.yawLeak,
      singularity.measure,
    ].join(','),
  );
  return `${[names.join(','), ...rows].join('\n')}\n`;
}
