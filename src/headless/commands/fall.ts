import {
  type CompiledRig,
  compileRig,
  compileStar,
  rotationOf,
  type StarColumns,
  type StarDescription,
  type StarGyro,
  simulateFree,
} from '../../core/physics';
import type { Command } from '../command';

const DRIVES = ['as-is', 'locked', 'free'] as const;
type DriveChoice = (typeof DRIVES)[number];

/** s: short enough for a gimbal held by stiction, which is stiff; far more than enough for one that is not. */
const STIFF_STEP = 2e-5;
const STEP = 2e-4;

const driveOf = (gyro: StarGyro, choice: DriveChoice): StarGyro['drive'] => {
  switch (choice) {
    case 'as-is':
      return gyro.drive;
    case 'locked':
      return { kind: 'locked' };
    case 'free':
      return gyro.drive.kind === 'free'
        ? gyro.drive
        : { kind: 'free', stiffness: 0, restTilt: 0, damping: 0 };
  }
};

/** The star that falls: gimbals as chosen, and firm feet let go about the edge of the stance it leans over. */
function fallingStar(compiled: CompiledRig, choice: DriveChoice, isToTheRight: boolean): StarDescription {
  const { star } = compiled;
  const gyros = star.gyros.map((gyro) => ({ ...gyro, drive: driveOf(gyro, choice) }));
  if (star.footing.kind !== 'firm') return { ...star, gyros };
  const across = star.footing.support.map(([, y]) => y);
  const y = isToTheRight ? Math.min(...across) : Math.max(...across);
  return {
    ...star,
    gyros,
    footing: { kind: 'edge', point: [0, y, star.footing.soleHeight], axis: [1, 0, 0] },
  };
}

/** Roll angle at a sample, rad, whatever numbers the footing's pose is written in. */
function rollAt(columns: StarColumns, k: number): number {
  if (columns.pose.length === 1) return columns.pose[0]?.[k] ?? 0;
  const R = rotationOf(columns.pose.slice(0, 4).map((column) => column[k] as number));
  return Math.atan2(R[7], R[8]);
}

export const fallCommand: Command = {
  name: 'fall',
  purpose: 'motion with nothing to hold the rig up but its gimbals as they are; with --csv as a table',
  example: 'fall public/rigs/strider.json --lean 0.02 --seconds 1 --drive free',
  options: [
    { name: 'lean', meaning: 'roll at the start, rad', fallback: '0.01' },
    { name: 'lean-rate', meaning: 'rate of roll at the start, rad/s', fallback: '0' },
    { name: 'seconds', meaning: 'how long, s', fallback: '2' },
    { name: 'rate', meaning: 'samples a second', fallback: '100' },
    {
      name: 'drive',
      meaning: 'gimbals: as-is (servos hold where they are), locked, or free (friction alone)',
      fallback: 'as-is',
    },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const lean = options.number('lean', -1.5, 1.5, 'rad');
    const leanRate = options.number('lean-rate', -20, 20, 'rad/s');
    const seconds = options.number('seconds', 0.01, 120, 's');
    const rate = options.number('rate', 1, 1000);
    const drive = options.choice('drive', DRIVES);
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const outcome = compileRig(rig);
    if (outcome.kind === 'refused') {
      return { kind: 'refused', sentences: outcome.refusals.map(({ sentence }) => sentence) };
    }
    const { compiled } = outcome;
    const side = (lean === 0 ? leanRate : lean) >= 0 ? 1 : -1;
    const star = fallingStar(compiled, drive, side > 0);
    const columns = runFall(star, compiled, { lean, leanRate, seconds, rate });
    const { names, rows, ends } = tableOf(columns, rig.footing.kind === 'firm' ? side : 0);
    return {
      kind: 'done',
      output: {
        rig: rig.name,
        footing: star.footing.kind,
        drive,
        ends,
        samples: Object.fromEntries(names.map((name, k) => [name, rows.map((row) => row[k])])),
      },
      csv: `${[names.join(','), ...rows.map((row) => row.join(','))].join('\n')}\n`,
    };
  },
};

interface FallStart {
  readonly lean: number;
  readonly leanRate: number;
  readonly seconds: number;
  readonly rate: number;
}

function runFall(star: StarDescription, { speeds }: CompiledRig, start: FallStart): StarColumns {
  const { lean, leanRate, seconds, rate } = start;
  const { footing } = compileStar(star);
  const pose = new Array<number>(footing.poseSize).fill(0);
  if (footing.poseSize === 1) pose[0] = lean;
  else if (footing.poseSize >= 4) {
    pose[0] = Math.cos(lean / 2);
    pose[1] = Math.sin(lean / 2);
  }
  const baseSpeeds = new Array<number>(footing.speeds).fill(0);
  if (footing.speeds > 0) baseSpeeds[0] = leanRate;
  const isStiff = star.gyros.some(({ drive }) => drive.kind === 'free');
  const samples = Math.max(1, Math.round(seconds * rate));
  const every = Math.max(1, Math.ceil(seconds / samples / (isStiff ? STIFF_STEP : STEP)));
  return simulateFree(
    star,
    { pose, baseSpeeds, wheelSpeed: Array.from(speeds) },
    seconds,
    seconds / samples / every,
    every,
  );
}

/**
 * Rows until the body lies on its side or, on feet, stands flat on them again: what comes after has no ground in it.
 * A float has water and goes on.
 *
 * @param side  of a rig on feet: the sign of its lean; 0 for any other
 */
function tableOf(
  columns: StarColumns,
  side: number,
): {
  readonly names: readonly string[];
  readonly rows: readonly (readonly number[])[];
  readonly ends: 'still moving' | 'on its side' | 'flat on its feet';
} {
  const { time, tilt, tiltRate, baseSpeeds, model } = columns;
  const names = [
    'time_s',
    'lean_rad',
    'lean_rate_rad_s',
    ...tilt.map((_, i) => `tilt${i}_rad`),
    ...tiltRate.map((_, i) => `tilt_rate${i}_rad_s`),
  ];
  const isAfloat = model.description.footing.kind === 'float';
  const rows: number[][] = [];
  for (let k = 0; k < time.length; k++) {
    const roll = rollAt(columns, k);
    if (!isAfloat && Math.abs(roll) > Math.PI / 2) return { names, rows, ends: 'on its side' };
    if (k > 0 && side * roll < 0) return { names, rows, ends: 'flat on its feet' };
    rows.push([
      time[k] as number,
      roll,
      (baseSpeeds[0]?.[k] ?? 0) as number,
      ...tilt.map((column) => column[k] as number),
      ...tiltRate.map((column) => column[k] as number),
    ]);
  }
  return { names, rows, ends: 'still moving' };
}
