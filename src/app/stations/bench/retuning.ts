/** Retuning off the main thread: what was compared with what, and the answer. */
import { create } from 'zustand';
import type { Retuning } from '../../../core/bench';
import type { Rig } from '../../../core/rig';
import { type Bencher, createBencher } from '../../../workers';

interface RetuningState {
  readonly answer: { readonly after: Rig; readonly outcome: Retuning } | undefined;
  readonly isRunning: boolean;
  /** Place in the history of the rig to compare with; the last change when undefined. */
  readonly chosen: number | undefined;
}

export const useRetuning = create<RetuningState>()(() => ({
  answer: undefined,
  isRunning: false,
  chosen: undefined,
}));

let worker: Bencher | undefined;

export async function retuneFrom(before: Rig, after: Rig): Promise<void> {
  breakOffRetuning();
  const mine = createBencher();
  worker = mine;
  useRetuning.setState({ isRunning: true });
  let outcome: Retuning;
  try {
    outcome = await mine.calls.retune(before, after);
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    outcome = { kind: 'refused', sentences: [`The calculation broke off: ${reason}.`] };
  }
  if (worker !== mine) return;
  mine.close();
  worker = undefined;
  useRetuning.setState({ answer: { after, outcome }, isRunning: false });
}

export function breakOffRetuning(): void {
  worker?.close();
  worker = undefined;
  useRetuning.setState({ isRunning: false });
}
