// @vitest-environment happy-dom
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { useCures } from '../../../src/app/state/cures';
import { useDocument } from '../../../src/app/state/document';
import { startEvaluating } from '../../../src/app/state/evaluating';
import type { Evaluator } from '../../../src/app/state/evaluator';
import { useNotices } from '../../../src/app/state/notices';
import { useSession } from '../../../src/app/state/session';
import { stream } from '../../../src/app/state/stream';
import { type Rig, STRIDER } from '../../../src/core/rig';
import type { Cure, Evaluation } from '../../../src/core/trial';

const refused: Evaluation = { kind: 'refused', refusals: [] };
const impossible = {
  kind: 'evaluated',
  plan: { kind: 'impossible' },
  motion: { samples: 0, time: new Float64Array(0) },
} as unknown as Evaluation;

interface Asked {
  readonly rig: Rig;
  readonly answer: (evaluation: Evaluation) => Promise<void>;
  readonly fail: (error: Error) => Promise<void>;
}

/** An evaluator that answers when it is told to. */
function slowEvaluator() {
  const asked: Asked[] = [];
  const sought: Rig[] = [];
  let stopped = 0;
  const settle = async (act: () => void): Promise<void> => {
    act();
    await vi.advanceTimersByTimeAsync(0);
  };
  const evaluator: Evaluator = {
    evaluate: (rig) =>
      new Promise((resolve, reject) => {
        asked.push({
          rig,
          answer: (evaluation) => settle(() => resolve(evaluation)),
          fail: (error) => settle(() => reject(error)),
        });
      }),
    diagnose: () => Promise.resolve({ line: 'momentum', sentence: 'Short by so much.' } as const),
    findCures: (rig) => {
      sought.push(rig);
      return Promise.resolve([{ sentence: 'Wider feet', rig } satisfies Cure]);
    },
    stopCures: () => {
      stopped++;
    },
  };
  return { evaluator, asked, sought, stops: () => stopped };
}

const rename = (name: string): void => useDocument.getState().edit('name', (rig) => ({ ...rig, name }));

let stop = (): void => undefined;

beforeEach(() => {
  vi.useFakeTimers();
  useDocument.getState().open(STRIDER, { forgetsHistory: true });
  useNotices.setState({ notices: [] });
});
afterEach(() => {
  stop();
  vi.useRealTimers();
});

describe('evaluating', () => {
  it('asks at once, and of what comes in meanwhile only for the newest', async () => {
    const slow = slowEvaluator();
    stop = startEvaluating(slow.evaluator);
    for (const name of ['a', 'b', 'c']) rename(name);
    expect(slow.asked).toHaveLength(1);
    await slow.asked[0]?.answer(refused);
    expect(slow.asked.map(({ rig }) => rig.name)).toEqual(['Strider', 'c']);
    await slow.asked[1]?.answer(refused);
    expect(slow.asked).toHaveLength(2);
    expect(stream.evaluation).toBe(refused);
  });

  it('asks anew when something is switched off', async () => {
    const slow = slowEvaluator();
    stop = startEvaluating(slow.evaluator);
    await slow.asked[0]?.answer(refused);
    useSession.getState().setSwitches({ isArrayOn: false });
    expect(slow.asked).toHaveLength(2);
    useSession.getState().setSwitches({ isArrayOn: true });
  });

  it('says so when the calculation breaks off, and goes on with the next', async () => {
    const slow = slowEvaluator();
    stop = startEvaluating(slow.evaluator);
    rename('next');
    await slow.asked[0]?.fail(new Error('out of memory'));
    expect(useNotices.getState().notices[0]?.sentences[0]).toContain('out of memory');
    expect(slow.asked).toHaveLength(2);
  });

  it('looks for cures once the rig is left alone, and drops them when it changes', async () => {
    const slow = slowEvaluator();
    stop = startEvaluating(slow.evaluator);
    await slow.asked[0]?.answer(impossible);
    expect(slow.sought).toHaveLength(0);
    expect(useCures.getState().state.kind).toBe('searching');
    await vi.advanceTimersByTimeAsync(1000);
    expect(slow.sought).toHaveLength(1);
    expect(useCures.getState().state.kind).toBe('found');
    rename('changed');
    expect(slow.stops()).toBe(1);
    expect(useCures.getState().state.kind).toBe('none');
  });

  it('starts no search in the middle of a drag', async () => {
    const slow = slowEvaluator();
    stop = startEvaluating(slow.evaluator);
    await slow.asked[0]?.answer(impossible);
    rename('dragging');
    await vi.advanceTimersByTimeAsync(1000);
    expect(slow.sought).toHaveLength(0);
  });
});
