/** Off the main thread: gains, trials, comparisons, largest shoves, and a share of many randomised runs. */
import { expose, transfer } from 'comlink';
import type { Law } from '../core/control';
import type { Refusal, Rig } from '../core/rig';
import {
  AS_DRAWN,
  type Build,
  type Comparison,
  compareTrials,
  computeGains,
  controlOf,
  findLargestShove,
  type GainOutcome,
  type GainReport,
  gainsAgainstSpeed,
  judgeGains,
  type LargestShove,
  type ManyRequest,
  mapAround,
  type RunRow,
  runOne,
  runTrial,
  type Surprise,
  type Switches,
  setUpTrial,
  type TrialRun,
  type TrialSetup,
  type TrialSetupOutcome,
  usualTrial,
} from '../core/trial';
import { buffersOf } from './buffers';

/** One run, or one of a comparison. */
export interface TrialQuestion {
  readonly switches: Switches;
  /** s */
  readonly length: number;
  readonly seed: number;
  readonly surprises: readonly Surprise[];
  readonly build: Build;
}

export type TrialAnswer =
  | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] }
  | {
      readonly kind: 'run';
      readonly run: TrialRun;
      readonly gains: GainOutcome;
      readonly isPlanned: boolean;
    };

export interface GainMapView {
  readonly across: Float64Array;
  readonly up: Float64Array;
  readonly value: Float64Array;
  readonly border: Float64Array;
}

export interface SpeedView {
  readonly share: number;
  readonly scaled: Float64Array;
  readonly holdsAsTheyAre: boolean;
}

let lastText = '';
let lastOutcome: TrialSetupOutcome | undefined;

/** Set up once for each rig: the next question is mostly about the same one. */
function setUp(rig: Rig): TrialSetupOutcome {
  const text = JSON.stringify(rig);
  if (!lastOutcome || text !== lastText) {
    lastOutcome = setUpTrial(rig);
    lastText = text;
  }
  return lastOutcome;
}

function setUpOrThrow(rig: Rig): TrialSetup {
  const outcome = setUp(rig);
  if (outcome.kind === 'refused') throw new Error(outcome.refusals.map(({ sentence }) => sentence).join(' '));
  return outcome.setup;
}

const requestOf = (setup: TrialSetup, question: TrialQuestion) => ({
  ...usualTrial(question.switches, question.length),
  controller: setup.controller,
  seed: question.seed,
  surprises: question.surprises,
  build: question.build ?? AS_DRAWN,
});

const MAP_SIZE = 48;
const SPEED_SHARES = [1, 0.9, 0.8, 0.7, 0.6, 0.5, 0.4, 0.3];

const calls = {
  trial(rig: Rig, question: TrialQuestion): TrialAnswer {
    const outcome = setUp(rig);
    if (outcome.kind === 'refused') return outcome;
    const { setup } = outcome;
    const run = runTrial(setup.setting, setup.schedules, requestOf(setup, question));
    const answer: TrialAnswer = {
      kind: 'run',
      run,
      gains: setup.gains,
      isPlanned: setup.schedules.length > 0,
    };
    // The gains are kept here for the next question, so only the run is handed over.
    return transfer(answer, buffersOf(run));
  },
  compare(rig: Rig, question: TrialQuestion): readonly Comparison[] {
    const setup = setUpOrThrow(rig);
    const compared = compareTrials(setup, requestOf(setup, question));
    return transfer(compared, buffersOf(compared));
  },
  /** Gains computed afresh for a law, whatever the rig names. */
  compute(rig: Rig, law: Law | 'own'): GainOutcome {
    const asked: Rig = law === 'own' ? rig : { ...rig, control: controlOf(law, [0, 0, 0, 0, 0]) };
    return computeGains(setUpOrThrow(asked).setting, true);
  },
  judge: (report: GainReport, gains: Float64Array): GainReport => judgeGains(report.loop, gains),
  map: (report: GainReport): GainMapView => mapAround(report.loop, report.gains, MAP_SIZE, MAP_SIZE),
  speeds: (report: GainReport): readonly SpeedView[] =>
    gainsAgainstSpeed(report, SPEED_SHARES).map(({ share, scaled, fixedVerdict }) => ({
      share,
      scaled,
      holdsAsTheyAre: fixedVerdict.kind === 'holds',
    })),
  largest(
    rig: Rig,
    question: TrialQuestion,
    height: number,
  ): Readonly<Record<'left' | 'right', LargestShove>> {
    const setup = setUpOrThrow(rig);
    const { switches, length, seed, build } = question;
    const at = Math.min(1, length / 4);
    const find = (side: 'left' | 'right'): LargestShove =>
      findLargestShove(setup, { switches, height, at, length, side, seed, build });
    return { left: find('left'), right: find('right') };
  },
  many(rig: Rig, request: ManyRequest, from: number, to: number): readonly RunRow[] {
    const setup = setUpOrThrow(rig);
    return Array.from({ length: to - from }, (_, i) => runOne(setup, request, from + i));
  },
};

export type TrialCalls = typeof calls;

expose(calls);
