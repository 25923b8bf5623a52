/** Keeps the station's answer in step with rig, plan and choices while its sheet is open. */
import { create } from 'zustand';
import { GIMBAL_POWER, type SpinSheet, type SpinSheetOutcome } from '../../../core/physics';
import type { Ledger } from '../../../core/planning';
import type { Rig } from '../../../core/rig';
import type { Spinner } from '../../../workers';
import { useDocument } from '../../state/document';
import { useNotices } from '../../state/notices';
import { stream } from '../../state/stream';
import { chosenSpin, useSpinChoices } from './spinChoices';

interface SpinAnswerState {
  /** The newest answer, a refusal included. */
  readonly outcome: SpinSheetOutcome | undefined;
  /** The newest that gave figures, and the rig they are of. */
  readonly sheet: SpinSheet | undefined;
  readonly rig: Rig | undefined;
}

export const useSpinAnswer = create<SpinAnswerState>()(() => ({
  outcome: undefined,
  sheet: undefined,
  rig: undefined,
}));

interface Question {
  readonly rig: Rig;
  readonly gimbalPower: number;
  readonly choices: ReturnType<typeof chosenSpin>;
}

/** W, mean power of the gimbals in the plan, as the ledger's battery line has it; 0 when it does not say. */
const gimbalPowerIn = (ledger: Ledger): number =>
  ledger.lines.find(({ name }) => name === 'battery')?.ask.inputs.find(({ label }) => label === GIMBAL_POWER)
    ?.value ?? 0;

const currentQuestion = (): Question => ({
  rig: useDocument.getState().rig,
  gimbalPower: stream.shown ? gimbalPowerIn(stream.shown.ledger) : 0,
  choices: chosenSpin(useSpinChoices.getState()),
});

const isSame = (a: Question, b: Question): boolean =>
  a.rig === b.rig &&
  a.gimbalPower === b.gimbalPower &&
  a.choices.factor === b.choices.factor &&
  a.choices.preload === b.choices.preload &&
  a.choices.brakeCurrent === b.choices.brakeCurrent;

/**
 * Starts asking. One question is under way at a time; while it is, only the newest of those that arise is kept.
 *
 * @returns the way to stop; it closes the spinner too
 */
export function startSpinning(spinner: Spinner): () => void {
  let asked: Question | undefined;
  let answered: Question | undefined;
  let next: Question | undefined;
  let hasStopped = false;

  const ask = async (question: Question): Promise<void> => {
    asked = question;
    try {
      const outcome = await spinner.spinSheet(question.rig, question.gimbalPower, question.choices);
      if (hasStopped) return;
      answered = question;
      useSpinAnswer.setState(
        outcome.kind === 'sheet' ? { outcome, sheet: outcome.sheet, rig: question.rig } : { outcome },
      );
    } catch (error) {
      if (hasStopped) return;
      const reason = error instanceof Error ? error.message : String(error);
      useNotices.getState().show({
        id: 'spinner',
        kind: 'fault',
        sentences: [`The wheel's figures could not be worked out: ${reason}. The rig is unchanged.`],
      });
    }
    asked = undefined;
    const waiting = next;
    next = undefined;
    if (waiting) void ask(waiting);
  };

  const consider = (): void => {
    const question = currentQuestion();
    const newest = next ?? asked ?? answered;
    if (newest && isSame(newest, question)) return;
    if (asked) next = question;
    else void ask(question);
  };

  const stops = [
    useDocument.subscribe((now, before) => now.rig !== before.rig && consider()),
    useSpinChoices.subscribe(consider),
    stream.onEvaluation(consider),
  ];
  consider();
  return () => {
    hasStopped = true;
    for (const stop of stops) stop();
    spinner.close();
  };
}
