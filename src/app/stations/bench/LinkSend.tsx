import { useState } from 'react';
import type { QueueState } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { createBencher, type GainList } from '../../../workers';
import type { LinkSnapshot } from '../../link/linkSession';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useShown } from '../../state/reading';
import { useIdentifying } from './identifying';
import { sendGains, sendSchedule } from './linkDesk';

/** Sending: nothing goes out but by a press here, and each button says what will move. */
export function LinkSend({ shown }: { readonly shown: LinkSnapshot }) {
  const plan = useShown()?.plan;
  const rig = useDocument((document) => document.rig);
  const trap = useIdentifying((state) => state.givens?.cautions.find((caution) => caution.kind === 'trap'));
  const [answer, setAnswer] = useState<{ readonly of: typeof rig; readonly list: GainList }>();
  const isReady = shown.state === 'connected' && shown.queue.kind !== 'sending';
  const gimbals = rig.array.gyros.length;
  const list = answer?.of === rig ? answer.list : undefined;

  const workOut = async (): Promise<void> => {
    const bencher = createBencher();
    try {
      setAnswer({ of: rig, list: await bencher.calls.gains(rig) });
    } finally {
      bencher.close();
    }
  };

  return (
    <Group title="Send">
      <p className="bench-caution">
        <b>Can trap. </b>
        {trap?.sentence ??
          'A gimbal moves without warning while the wheel turns. Keep hands out before you press.'}
      </p>
      <button
        type="button"
        className="wide"
        disabled={!isReady || plan?.kind !== 'planned'}
        onClick={sendSchedule}
      >
        {plan?.kind === 'planned'
          ? `Send the schedule, ${plan.course.time.length} points: ${gimbals === 1 ? 'the gimbal starts' : `${gimbals} gimbals start`} to follow it when the last line is in`
          : 'There is no plan to send'}
      </button>
      {list?.kind === 'gains' ? (
        <>
          <dl className="link-gains">
            {Object.entries(list.gains).map(([name, value]) => (
              <div key={name}>
                <dt>{name}</dt>
                <dd>{formatNumber(value, 4)}</dd>
              </div>
            ))}
          </dl>
          <button type="button" className="wide" disabled={!isReady} onClick={() => sendGains(list.gains)}>
            Send these {Object.keys(list.gains).length} gains: a running loop moves its gimbals by them at
            once
          </button>
        </>
      ) : (
        <button type="button" className="wide" onClick={() => void workOut()}>
          Work out the gains to send
        </button>
      )}
      {list?.kind === 'none' && <p className="bench-refusal">{list.sentence}</p>}
      <QueueLine queue={shown.queue} />
    </Group>
  );
}

function QueueLine({ queue }: { readonly queue: QueueState }) {
  switch (queue.kind) {
    case 'idle':
      return null;
    case 'sending':
      return (
        <p role="status">
          {queue.done} of {queue.total} lines acknowledged.
          <progress value={queue.done} max={queue.total} aria-label="Sending" />
        </p>
      );
    case 'done':
      return <p role="status">All {queue.total} lines are acknowledged.</p>;
    case 'refused':
      return (
        <p className="bench-refusal" role="alert">
          The device refuses “{queue.line}”: {queue.reason || 'it gives no reason'}. {queue.done} of{' '}
          {queue.total} lines are through.
        </p>
      );
    case 'silent':
      return (
        <p className="bench-refusal" role="alert">
          {queue.sentence}
        </p>
      );
    case 'stopped':
      return (
        <p role="status">
          Dropped after {queue.done} of {queue.total} lines.
        </p>
      );
  }
}
