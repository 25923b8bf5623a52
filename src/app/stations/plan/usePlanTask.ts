import { useEffect, useRef, useState } from 'react';
import type { PlanTask } from '../../../workers';
import { useNotices } from '../../state/notices';

export type TaskState<T> =
  | { readonly kind: 'idle' }
  | { readonly kind: 'working' }
  | { readonly kind: 'done'; readonly answer: T };

/** ms that numbers must have been left alone before work on them begins. */
const REST = 300;

/** One task of the pool at a time: started by hand, ended at once by `end` or when the component goes. */
export function usePlanTask<T>() {
  const [state, setState] = useState<TaskState<T>>({ kind: 'idle' });
  const task = useRef<PlanTask<T>>(undefined);
  const end = (): void => {
    task.current?.end();
    task.current = undefined;
    setState({ kind: 'idle' });
  };
  const start = (next: PlanTask<T>): void => {
    task.current?.end();
    task.current = next;
    setState({ kind: 'working' });
    next.done.then(
      (answer) => task.current === next && setState({ kind: 'done', answer }),
      (error: unknown) => {
        if (task.current !== next) return;
        setState({ kind: 'idle' });
        const reason = error instanceof Error ? error.message : String(error);
        useNotices
          .getState()
          .show({ id: 'planPool', kind: 'fault', sentences: [`The calculation broke off: ${reason}.`] });
      },
    );
  };
  useEffect(() => () => task.current?.end(), []);
  return { state, start, end };
}

/** The answer of a task that is worked out anew whenever its inputs have come to rest; the last one stays meanwhile. */
export function useSettledAnswer<T>(
  start: () => PlanTask<T>,
  rig: unknown,
  ask: unknown = undefined,
): T | undefined {
  const [answer, setAnswer] = useState<T>();
  const latest = useRef(start);
  useEffect(() => {
    latest.current = start;
  });
  // biome-ignore lint/correctness/useExhaustiveDependencies: what is asked of what rig says when to start anew
  useEffect(() => {
    let task: PlanTask<T> | undefined;
    const timer = setTimeout(() => {
      task = latest.current();
      task.done.then(setAnswer, () => setAnswer(undefined));
    }, REST);
    return () => {
      clearTimeout(timer);
      task?.end();
    };
  }, [rig, ask]);
  return answer;
}
