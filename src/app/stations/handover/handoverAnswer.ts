/** Keeps what can be handed over in step with the rig while the station's sheet is open. */
import { create } from 'zustand';
import { type Handover, type HandoverOutcome, PROGRAM } from '../../../core/handover';
import type { Rig } from '../../../core/rig';
import type { HandoverMaker } from '../../../workers';
import { useDocument } from '../../state/document';
import { useNotices } from '../../state/notices';

interface HandoverAnswerState {
  /** The newest answer, a refusal included. */
  readonly outcome: HandoverOutcome | undefined;
  /** The files, and the rig they are of; undefined while those of a changed rig are being made. */
  readonly handover: Handover | undefined;
  readonly rig: Rig | undefined;
}

const NOTHING: HandoverAnswerState = { outcome: undefined, handover: undefined, rig: undefined };

export const useHandoverAnswer = create<HandoverAnswerState>()(() => NOTHING);

/** ms: a rig that is being dragged about is not worth a sheet for every step. */
const SETTLED = 300;

/** Today, where the user is. */
const today = (): string => {
  const now = new Date();
  const two = (value: number): string => String(value).padStart(2, '0');
  return `${now.getFullYear()}-${two(now.getMonth() + 1)}-${two(now.getDate())}`;
};

/**
 * Starts making files of the rig, and again whenever it has changed and come to rest.
 *
 * @returns the way to stop; it closes the maker too
 */
export function startHandingOver(maker: HandoverMaker): () => void {
  let timer: ReturnType<typeof setTimeout> | undefined;
  let hasStopped = false;

  const ask = async (): Promise<void> => {
    const { rig } = useDocument.getState();
    try {
      const outcome = await maker.make(rig, { program: PROGRAM, date: today() });
      if (hasStopped || useDocument.getState().rig !== rig) return;
      const handover = outcome.kind === 'made' ? outcome.handover : undefined;
      useHandoverAnswer.setState({ outcome, handover, rig });
    } catch (error) {
      if (hasStopped) return;
      const reason = error instanceof Error ? error.message : String(error);
      useNotices.getState().show({
        id: 'handover',
        kind: 'fault',
        sentences: [`The files could not be made: ${reason}. The rig is unchanged.`],
      });
    }
  };

  const stopWatching = useDocument.subscribe((now, before) => {
    if (now.rig === before.rig) return;
    useHandoverAnswer.setState(NOTHING);
    clearTimeout(timer);
    timer = setTimeout(() => void ask(), SETTLED);
  });
  if (useHandoverAnswer.getState().rig !== useDocument.getState().rig) {
    useHandoverAnswer.setState(NOTHING);
    void ask();
  }
  return () => {
    hasStopped = true;
    clearTimeout(timer);
    stopWatching();
    maker.close();
  };
}
