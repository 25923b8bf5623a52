import { compileRig } from '../../core/physics';
import { USUAL_DOUBT } from '../../core/trial';
import { GROUND_KINDS, type GroundChoice, openYard, type Yard } from '../../yard';
import type { Command, Options } from '../command';

const AS_DRAWN = { centreAcross: 0, wheelSpeed: 1 };

function readGround(options: Options): GroundChoice {
  const kind = options.choice('ground', GROUND_KINDS);
  const slope = options.number('slope', -0.6, 0.6, 'rad');
  const direction = options.number('direction', -Math.PI, Math.PI, 'rad');
  const height = options.number('step', 0.0005, 2, 'm');
  switch (kind) {
    case 'slope':
      return { kind, angle: slope, direction };
    case 'step':
      return { kind, height, ahead: 0.2 };
    case 'flat':
    case 'plank':
    case 'blocks':
      return { kind };
  }
}

/** Columns of the samples, with the unit in the name. */
const columnsOf = ({ layout }: Yard): readonly { readonly name: string; readonly at: number }[] => {
  const run = (names: readonly string[], at: number) => names.map((name, k) => ({ name, at: at + k }));
  return [
    { name: 'time_s', at: layout.time },
    ...run(['x_m', 'y_m', 'z_m', 'qw', 'qx', 'qy', 'qz'], layout.pose),
    { name: 'lean_rad', at: layout.lean },
    ...Array.from({ length: layout.gyros }, (_, i) => ({ name: `tilt${i}_rad`, at: layout.tilt + i })),
    ...Array.from({ length: layout.legs }, (_, i) => ({ name: `foot${i}_down`, at: layout.isFootDown + i })),
    ...run(['pressure_x_m', 'pressure_y_m'], layout.centreOfPressure),
  ];
};

export const walkCommand: Command = {
  name: 'walk',
  purpose: 'lets the rig walk or stand in the yard, with real contact; with --csv the sampled poses',
  example: 'walk public/rigs/strider.json --seconds 8 --ground flat',
  options: [
    { name: 'seconds', meaning: 'how long, s', fallback: '8' },
    { name: 'rate', meaning: 'samples a second', fallback: '50' },
    { name: 'ground', meaning: GROUND_KINDS.join(', '), fallback: 'flat' },
    { name: 'slope', meaning: 'of a slope, rad', fallback: '0.05' },
    { name: 'direction', meaning: 'in which a slope rises, from forward to the left, rad', fallback: '0' },
    { name: 'step', meaning: 'height of a step, m', fallback: '0.008' },
    { name: 'array', meaning: 'on or off', fallback: 'on' },
    { name: 'build', meaning: 'usual (off its drawing as usual) or drawn', fallback: 'usual' },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const seconds = options.number('seconds', 0.01, 600, 's');
    const rate = options.number('rate', 1, 1000);
    const ground = readGround(options);
    const isOn = options.choice('array', ['on', 'off']) === 'on';
    const doubt = options.choice('build', ['usual', 'drawn']) === 'usual' ? USUAL_DOUBT : AS_DRAWN;
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const compiled = compileRig(rig);
    const opened =
      compiled.kind === 'refused'
        ? compiled
        : openYard({
            compiled: compiled.compiled,
            ground,
            switches: { isArrayOn: isOn, isPlanOn: isOn, isFeedbackOn: isOn },
            doubt,
          });
    if (opened.kind === 'refused') {
      return { kind: 'refused', sentences: opened.refusals.map(({ sentence }) => sentence) };
    }
    const { yard } = opened;
    const { names, rows } = sampleYard(yard, seconds, rate);
    const hasToppled = Number.isFinite(yard.toppledAt);
    const samples = Object.fromEntries(names.map((name, k) => [name, rows.map((row) => row[k])]));
    return {
      kind: hasToppled ? 'failing' : 'done',
      output: {
        rig: rig.name,
        ground,
        note: 'What contact does. Limits and margins come from plan and trial, which are exact where this is not.',
        toppledAt: hasToppled ? yard.toppledAt : null,
        samples,
      },
      csv: `${[names.join(','), ...rows.map((row) => row.join(','))].join('\n')}\n`,
    };
  },
};

/** Runs a yard and writes down its columns at the start and then `rate` times a second. */
function sampleYard(
  yard: Yard,
  seconds: number,
  rate: number,
): { readonly names: readonly string[]; readonly rows: readonly (readonly number[])[] } {
  const columns = columnsOf(yard);
  const snapshot = new Float64Array(yard.layout.size);
  const rows: number[][] = [];
  const samples = Math.max(1, Math.round(seconds * rate));
  let steps = 0;
  for (let k = 0; k <= samples; k++) {
    const due = Math.round((k * seconds) / samples / yard.step);
    yard.run(due - steps);
    steps = due;
    yard.snapshot(snapshot);
    rows.push(columns.map(({ at }) => snapshot[at] as number));
  }
  return { names: columns.map(({ name }) => name), rows };
}
