import { useEffect } from 'react';
import { type Notice, useNotices } from '../state/notices';

const DONE_STAYS = 4000;
const MOST_SENTENCES = 6;

/** What the user must be told. Faults stay until they are put away; the rest goes by itself. */
export function Notices() {
  const notices = useNotices((state) => state.notices);
  return (
    <div className="notices" aria-live="polite">
      {notices.map((notice) => (
        <NoticeCard key={notice.id} notice={notice} />
      ))}
    </div>
  );
}

function NoticeCard({ notice }: { readonly notice: Notice }) {
  const dismiss = useNotices((state) => state.dismiss);
  useEffect(() => {
    if (notice.kind !== 'done' || notice.actions) return;
    const timer = setTimeout(() => dismiss(notice.id), DONE_STAYS);
    return () => clearTimeout(timer);
  }, [notice, dismiss]);
  const unshown = notice.sentences.length - MOST_SENTENCES;
  return (
    <div className="notice" data-kind={notice.kind} role={notice.kind === 'fault' ? 'alert' : 'status'}>
      <div>
        {notice.sentences.slice(0, MOST_SENTENCES).map((sentence) => (
          <p key={sentence}>{sentence}</p>
        ))}
        {unshown > 0 && <p>And {unshown} more of the kind.</p>}
        {notice.actions?.map((action) => (
          <button key={action.label} type="button" onClick={action.run}>
            {action.label}
          </button>
        ))}
      </div>
      <button
        type="button"
        className="quiet"
        aria-label="Put this notice away"
        onClick={() => dismiss(notice.id)}
      >
        ×
      </button>
    </div>
  );
}
