/** Keeps the trial in step with the rig while its station is open, and starts the longer pieces of work. */
import type { Law } from '../../../core/control';
import type { Rig } from '../../../core/rig';
import {
  AS_DRAWN,
  controlOf,
  type GainOutcome,
  type ManyRequest,
  USUAL_DOUBT,
  writeTrialCsv,
} from '../../../core/trial';
import type { TrialQuestion } from '../../../workers';
import { createTrialPool, type ManyTask, type TrialPool } from '../../../workers';
import { fileNameFor, offerFile } from '../../files/offerFile';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { type Evaluated, stream } from '../../state/stream';
import { IDLE, type Task, useTrial } from './trialStore';

let pool: TrialPool | undefined;
export const trialPool = (): TrialPool => {
  pool ??= createTrialPool(navigator.hardwareConcurrency || 2);
  return pool;
};

export function questionNow(): TrialQuestion {
  const { seed, surprises, isAsDrawn } = useTrial.getState();
  const { rig } = useDocument.getState();
  return {
    switches: useSession.getState().switches,
    length: rig.jobs.duration,
    seed,
    surprises,
    build: isAsDrawn ? AS_DRAWN : { ...AS_DRAWN, ...USUAL_DOUBT },
  };
}

const inWords = (error: unknown): string => (error instanceof Error ? error.message : String(error));

/**
 * Runs the trial whenever rig, switches, seed or shoves change, the newest question only, and puts its motion on
 * stage and ribbon. Returns the way out, which gives the preview back.
 */
export function startTrials(): () => void {
  let isAsking = false;
  let isStale = false;
  let hasStopped = false;
  let base: Evaluated | undefined;

  const show = (): void => {
    const { shown } = useTrial.getState();
    const now = stream.evaluation;
    if (hasStopped || now?.kind !== 'evaluated') return;
    const isOurs = shown !== undefined && now.motion === shown.run.motion;
    if (!isOurs) base = now;
    if (isOurs || !base || !shown || shown.rig !== useDocument.getState().rig) return;
    const { hasFallen, fellAt } = shown.run.figures;
    stream.setEvaluation({
      ...base,
      motion: shown.run.motion,
      outcome: hasFallen ? { kind: 'falls', at: fellAt } : { kind: 'holds' },
    });
  };

  const ask = async (): Promise<void> => {
    if (isAsking) {
      isStale = true;
      return;
    }
    isAsking = true;
    const { rig } = useDocument.getState();
    const { set } = useTrial.getState();
    set({ isRunning: true });
    try {
      const answer = await trialPool().ask.trial(rig, questionNow());
      if (hasStopped) return;
      if (answer.kind === 'refused')
        set({ shown: undefined, fault: answer.refusals.map(({ sentence }) => sentence).join(' ') });
      else {
        const { run, gains, isPlanned } = answer;
        set({ shown: { run, gains, isPlanned, rig }, fault: undefined });
        show();
      }
    } catch (error) {
      set({ fault: `The trial broke off: ${inWords(error)}.` });
    }
    isAsking = false;
    if (isStale) {
      isStale = false;
      void ask();
    } else set({ isRunning: false });
  };

  const stops = [
    useDocument.subscribe((now, before) => now.rig !== before.rig && void ask()),
    useSession.subscribe((now, before) => now.switches !== before.switches && void ask()),
    useTrial.subscribe(
      (now, before) =>
        (now.seed !== before.seed ||
          now.surprises !== before.surprises ||
          now.isAsDrawn !== before.isAsDrawn) &&
        void ask(),
    ),
    stream.onEvaluation(show),
  ];
  show();
  void ask();
  return () => {
    hasStopped = true;
    for (const stop of stops) stop();
    useTrial.getState().set({ isRunning: false });
    if (base && stream.evaluation !== base) stream.setEvaluation(base);
  };
}

/** A shove at the playhead, N*s to the left. */
export function shoveNow(impulse: number): void {
  const { surprises, height, set } = useTrial.getState();
  const time = Math.round(stream.seconds * 1000) / 1000;
  set({ surprises: [...surprises, { time, impulse, height }].sort((a, b) => a.time - b.time) });
}

export function exportRun(): void {
  const { shown } = useTrial.getState();
  if (!shown) return;
  offerFile(fileNameFor(`${shown.rig.name} trial`, 'csv'), writeTrialCsv(shown.run), 'text/csv');
}

/** One longer piece of work into its place of the store. */
async function carryOut<T>(place: 'comparison' | 'largest', work: (rig: Rig) => Promise<T>): Promise<void> {
  const { set } = useTrial.getState();
  const { rig } = useDocument.getState();
  const start = performance.now();
  set({ [place]: { kind: 'busy', done: 0, of: 0 } });
  try {
    const result = await work(rig);
    const seconds = (performance.now() - start) / 1000;
    set({ [place]: { kind: 'done', result, seconds, rig } satisfies Task<T> });
  } catch (error) {
    set({ [place]: { kind: 'fault', sentence: inWords(error) } });
  }
}

export const compareNow = (): Promise<void> =>
  carryOut('comparison', (rig) => trialPool().ask.compare(rig, questionNow()));

export const findLargestNow = (): Promise<void> =>
  carryOut('largest', (rig) => trialPool().ask.largest(rig, questionNow(), useTrial.getState().height));

let manyTask: ManyTask | undefined;

export async function startMany(): Promise<void> {
  cancelMany();
  const { set, choice, seed } = useTrial.getState();
  const { rig } = useDocument.getState();
  const { runs, seconds, shoveMost, shoveHeight, tolerances } = choice;
  const request: ManyRequest = {
    seed,
    runs,
    length: seconds,
    tolerances,
    shove:
      shoveMost > 0
        ? { most: shoveMost, height: shoveHeight, from: 0.1 * seconds, to: 0.5 * seconds }
        : undefined,
    switches: useSession.getState().switches,
  };
  const start = performance.now();
  set({ many: { kind: 'busy', done: 0, of: runs } });
  const task = trialPool().many(rig, request, (done) => set({ many: { kind: 'busy', done, of: runs } }));
  manyTask = task;
  try {
    const result = await task.done;
    set({ many: { kind: 'done', result, seconds: (performance.now() - start) / 1000, rig } });
  } catch (error) {
    if (manyTask === task) set({ many: { kind: 'fault', sentence: inWords(error) } });
  }
  if (manyTask === task) manyTask = undefined;
}

export function cancelMany(): void {
  if (!manyTask) return;
  manyTask.end();
  manyTask = undefined;
  useTrial.getState().set({ many: IDLE });
}

/** Computes gains for a law (the rig's own for `own`) and makes them the rig's. Returns why not, if not. */
export async function computeInto(law: Law | 'own', label: string): Promise<string | undefined> {
  const { rig, edit } = useDocument.getState();
  const outcome: GainOutcome = await trialPool().ask.compute(rig, law);
  if (outcome.kind === 'none') return outcome.sentence;
  const { report } = outcome;
  edit(label, (now) => ({ ...now, control: controlOf(report.loop.law, report.gains) }));
  return undefined;
}
