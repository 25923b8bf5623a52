/** Keeps the stream's evaluation in step with the document and the switches. */
import type { Rig } from '../../core/rig';
import type { Evaluation, Switches } from '../../core/trial';
import { setCures } from './cures';
import { useDocument } from './document';
import type { Evaluator } from './evaluator';
import { useNotices } from './notices';
import { useSession } from './session';
import { stream } from './stream';

/** Name of the performance measure from an edit to its redrawn plan. */
export const EDIT_TO_REDRAW = 'edit to redrawn plan';

/** ms a rig must have been left alone before cures are looked for: a drag would only throw them away. */
const REST_BEFORE_CURES = 250;

/** Measures kept for whoever asks; a long day of edits must not fill the memory with them. */
const MOST_MEASURES = 500;

interface Question {
  readonly rig: Rig;
  readonly switches: Switches;
  /** performance.now() when it arose, ms. */
  readonly since: number;
}

/**
 * Starts asking. One question is under way at a time; while it is, only the newest of those that arise is kept,
 * so a drag never queues up work that nobody will look at.
 *
 * @returns the way to stop
 */
export function startEvaluating(evaluator: Evaluator): () => void {
  let asked: Question | undefined;
  let next: Question | undefined;
  let hasStopped = false;
  const cures = createCureSearch(evaluator);

  const ask = async (question: Question): Promise<void> => {
    asked = question;
    try {
      const evaluation = await evaluator.evaluate(question.rig, question.switches);
      if (hasStopped) return;
      stream.setEvaluation(evaluation);
      if (!next) cures.consider(question.rig, evaluation);
      measureRedraw(question.since);
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error);
      useNotices.getState().show({
        id: 'evaluator',
        kind: 'fault',
        sentences: [
          `The calculation broke off: ${reason}. The rig is unchanged; what is shown is the last result.`,
        ],
      });
    }
    asked = undefined;
    const waiting = next;
    next = undefined;
    if (waiting && !hasStopped) void ask(waiting);
  };

  const consider = (): void => {
    const question = {
      rig: useDocument.getState().rig,
      switches: useSession.getState().switches,
      since: performance.now(),
    };
    const newest = next ?? asked;
    if (newest && newest.rig === question.rig && newest.switches === question.switches) return;
    if (newest?.rig !== question.rig) cures.drop();
    if (asked) next = question;
    else void ask(question);
  };

  const stopDocument = useDocument.subscribe((now, before) => now.rig !== before.rig && consider());
  const stopSession = useSession.subscribe((now, before) => now.switches !== before.switches && consider());
  consider();
  return () => {
    hasStopped = true;
    cures.drop();
    stopDocument();
    stopSession();
  };
}

/** Looks for cures of an impossible plan, one search at a time, and gives up the search when the rig changes. */
function createCureSearch(evaluator: Evaluator) {
  let timer: ReturnType<typeof setTimeout> | undefined;
  /** The rig that is searched for, or has been. */
  let subject: Rig | undefined;

  const drop = (): void => {
    clearTimeout(timer);
    if (subject) evaluator.stopCures();
    subject = undefined;
    setCures({ kind: 'none' });
  };
  const search = async (rig: Rig): Promise<void> => {
    try {
      const explained = await evaluator.diagnose(rig);
      if (subject !== rig) return;
      setCures({ kind: 'searching', explained });
      const found = await evaluator.findCures(rig);
      if (subject === rig) setCures({ kind: 'found', rig, explained, cures: found });
    } catch {
      // Without cures the sentence of what forbids the plan still stands.
      if (subject === rig) setCures({ kind: 'none' });
    }
  };
  const consider = (rig: Rig, evaluation: Evaluation): void => {
    const isImpossible = evaluation.kind === 'evaluated' && evaluation.plan.kind === 'impossible';
    if (isImpossible && subject === rig) return;
    drop();
    if (!isImpossible) return;
    subject = rig;
    setCures({ kind: 'searching', explained: undefined });
    timer = setTimeout(() => void search(rig), REST_BEFORE_CURES);
  };
  return { consider, drop };
}

/** The redraw is done at the end of the frame in which the evaluation came. */
function measureRedraw(start: number): void {
  requestAnimationFrame(() => {
    if (performance.getEntriesByName(EDIT_TO_REDRAW).length >= MOST_MEASURES) {
      performance.clearMeasures(EDIT_TO_REDRAW);
    }
    performance.measure(EDIT_TO_REDRAW, { start, end: performance.now() });
  });
}
