import {
  AS_DRAWN,
  findLargestShove,
  type GainOutcome,
  runTrial,
  type Surprise,
  setUpTrial,
  type TrialRun,
  USUAL_DOUBT,
  usualTrial,
  writeTrialCsv,
} from '../../core/trial';
import type { Command, Options } from '../command';

const SWITCHED = {
  both: { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
  plan: { isArrayOn: true, isPlanOn: true, isFeedbackOn: false },
  feedback: { isArrayOn: true, isPlanOn: false, isFeedbackOn: true },
  locked: { isArrayOn: false, isPlanOn: false, isFeedbackOn: false },
} as const;
export const SWITCHED_NAMES = ['both', 'plan', 'feedback', 'locked'] as const;
export const switchesOf = (name: (typeof SWITCHED_NAMES)[number]) => SWITCHED[name];

/** "1.5:0.8:0.4": at 1.5 s, 0.8 N s to the left, 0.4 m up; several parted by semicolons. */
function readShoves(options: Options): readonly Surprise[] {
  const text = options.text('shove');
  if (text === 'none') return [];
  return text.split(';').flatMap((part): readonly Surprise[] => {
    const [time, impulse, height] = part.split(':').map(Number);
    const numbers = [time, impulse, height];
    if (part.split(':').length !== 3 || !numbers.every(Number.isFinite)) {
      options.faults.push(`--shove: "${part}" is not time:impulse:height in s, N s and m.`);
      return [];
    }
    return [{ time: time as number, impulse: impulse as number, height: height as number }];
  });
}

export const describeGains = (gains: GainOutcome) =>
  gains.kind === 'none'
    ? { sentence: gains.sentence }
    : {
        law: gains.report.loop.law,
        gains: [...gains.report.gains],
        verdict: gains.report.verdict,
        leastSpeed: gains.report.leastSpeed,
      };

const plain = ({ motion, columns, figures }: TrialRun, wantsColumns: boolean) => ({
  ...figures,
  ...(wantsColumns ? { columns: { time: motion.time, ...columns, tilt: motion.tilt } } : {}),
});

export const trialCommand: Command = {
  name: 'trial',
  purpose: 'one closed-loop run with real servos, sensors and loop rate; fails when the rig falls',
  example: 'trial public/rigs/strider.json --csv',
  options: [
    { name: 'seconds', meaning: 's; run takes the length of the rig’s own run', fallback: 'run' },
    { name: 'seed', meaning: 'whole number: names the noise', fallback: '1' },
    { name: 'with', meaning: SWITCHED_NAMES.join(', '), fallback: 'both' },
    { name: 'shove', meaning: 'time:impulse:height in s, N s and m, parted by semicolons', fallback: 'none' },
    { name: 'built', meaning: 'drawn, or usual: centre 4 mm off and wheels 3 % slow', fallback: 'drawn' },
    { name: 'columns', meaning: 'yes or no: the record in the output', fallback: 'no' },
    { name: 'largest', meaning: 'm: also find the largest shove survived at this height', fallback: 'none' },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const length =
      options.text('seconds') === 'run' ? rig.jobs.duration : options.number('seconds', 0.05, 3600, 's');
    const seed = Math.round(options.number('seed', 0, Number.MAX_SAFE_INTEGER));
    const switches = switchesOf(options.choice('with', SWITCHED_NAMES));
    const surprises = readShoves(options);
    const isUsual = options.choice('built', ['drawn', 'usual']) === 'usual';
    const wantsColumns = options.choice('columns', ['yes', 'no']) === 'yes';
    const largestAt = options.text('largest') === 'none' ? undefined : options.number('largest', -5, 20, 'm');
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const outcome = setUpTrial(rig);
    if (outcome.kind === 'refused') {
      return { kind: 'refused', sentences: outcome.refusals.map(({ sentence }) => sentence) };
    }
    const { setup } = outcome;
    const build = isUsual ? { ...AS_DRAWN, ...USUAL_DOUBT } : AS_DRAWN;
    const run = runTrial(setup.setting, setup.schedules, {
      ...usualTrial(switches, length),
      controller: setup.controller,
      build,
      seed,
      surprises,
    });
    const largest =
      largestAt === undefined
        ? {}
        : {
            largestShove: Object.fromEntries(
              (['left', 'right'] as const).map((side) => [
                side,
                findLargestShove(setup, {
                  switches,
                  height: largestAt,
                  at: Math.min(1, length / 4),
                  length,
                  side,
                  seed,
                  build,
                }),
              ]),
            ),
          };
    return {
      kind: run.figures.hasFallen ? 'failing' : 'done',
      output: {
        rig: rig.name,
        seed,
        seconds: length,
        isPlanned: setup.schedules.length > 0,
        loop: describeGains(setup.gains),
        ...plain(run, wantsColumns),
        ...largest,
      },
      csv: writeTrialCsv(run),
    };
  },
};
