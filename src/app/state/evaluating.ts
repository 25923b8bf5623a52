/** Keeps the stream's evaluation in step with the document and the switches. */
import type { Rig } from '../../core/rig';
import type { Switches } from '../../core/trial';
import { useDocument } from './document';
import type { Evaluator } from './evaluator';
import { useNotices } from './notices';
import { useSession } from './session';
import { stream } from './stream';

/** Name of the performance measure from an edit to its redrawn plan. */
export const EDIT_TO_REDRAW = 'edit to redrawn plan';

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

  const ask = async (question: Question): Promise<void> => {
    asked = question;
    try {
      const evaluation = await evaluator.evaluate(question.rig, question.switches);
      if (hasStopped) return;
      stream.setEvaluation(evaluation);
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
    if (asked) next = question;
    else void ask(question);
  };

  const stopDocument = useDocument.subscribe((now, before) => now.rig !== before.rig && consider());
  const stopSession = useSession.subscribe((now, before) => now.switches !== before.switches && consider());
  consider();
  return () => {
    hasStopped = true;
    stopDocument();
    stopSession();
  };
}

/** The redraw is done at the end of the frame in which the evaluation came. */
function measureRedraw(start: number): void {
  requestAnimationFrame(() => {
    performance.clearMeasures(EDIT_TO_REDRAW);
    performance.measure(EDIT_TO_REDRAW, { start, end: performance.now() });
  });
}
