/** Fits under way and their results, one of each kind; a fit runs in a worker of its own so that it can be broken off. */
import { create } from 'zustand';
import type { Identification, IdentifyKind } from '../../../core/bench';
import { type Bencher, type BenchGivens, createBencher } from '../../../workers';
import { useDocument } from '../../state/document';
import { keepFit } from './benchFindings';
import { logHolder, useBenchLog } from './benchLog';
import { buildRequest, type IdentifyForm, useIdentifyForm } from './identifyForm';

interface IdentifyingState {
  readonly running: IdentifyKind | undefined;
  readonly givens: BenchGivens | undefined;
}

export const useIdentifying = create<IdentifyingState>()(() => ({
  running: undefined,
  givens: undefined,
}));

let fitter: Bencher | undefined;

/** Keeps what the rig says of the numbers in step with the document; returns the way to stop. */
export function followGivens(): () => void {
  const mine = createBencher();
  const ask = (): void => {
    const { rig } = useDocument.getState();
    void mine.calls.givens(rig).then((givens) => {
      if (useDocument.getState().rig === rig) useIdentifying.setState({ givens });
    });
  };
  ask();
  const stop = useDocument.subscribe((now, before) => now.rig !== before.rig && ask());
  return () => {
    stop();
    mine.close();
  };
}

async function runFit(form: IdentifyForm, gyro: number, mine: Bencher): Promise<Identification> {
  const built = buildRequest(form, useDocument.getState().rig, useIdentifying.getState().givens, gyro);
  if (built.kind === 'refused') return built;
  if (built.kind === 'typed') {
    const { typed } = form;
    return mine.calls.timePendulum(
      built.setup,
      {
        kind: 'typed',
        totals: built.totals,
        swings: typed.swings ?? 10,
        readingHalfWidth: typed.reaction ?? 0.2,
      },
      { target: form.hung },
    );
  }
  const { log } = useBenchLog.getState();
  const part = log?.mapped ? await logHolder()?.calls.cut(log.cut.from, log.cut.to) : undefined;
  if (!part) return { kind: 'refused', sentence: 'No log is open: open one under Log.' };
  return mine.calls.identify(part, built.request);
}

/** Runs the identification the form asks for on the cut of the open log. */
export async function identify(gyro: number): Promise<void> {
  breakOffFit();
  const form = useIdentifyForm.getState();
  const { kind } = form;
  const mine = createBencher();
  fitter = mine;
  useIdentifying.setState({ running: kind });
  const { log } = useBenchLog.getState();
  const from =
    kind === 'pendulum' && form.period === 'typed'
      ? 'stopwatch readings'
      : log
        ? `${log.file}, ${log.cut.from.toFixed(2)} s to ${log.cut.to.toFixed(2)} s`
        : 'no log';
  let outcome: Identification;
  try {
    outcome = await runFit(form, gyro, mine);
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    outcome = { kind: 'refused', sentence: `The fit broke off: ${reason}.` };
  }
  if (fitter !== mine) return;
  mine.close();
  fitter = undefined;
  keepFit({ kind, from, outcome });
  useIdentifying.setState({ running: undefined });
}

/** Ends the fit under way; its older result, if there is one, stays. */
export function breakOffFit(): void {
  fitter?.close();
  fitter = undefined;
  useIdentifying.setState({ running: undefined });
}
