import { useEffect, useReducer, useRef, useState } from 'react';
import { FilesDialog } from './files/FilesDialog';
import { useInstall } from './install/installPrompt';
import { SettingsDialog } from './sheet/SettingsDialog';
import { useDocument } from './state/document';
import { useShown } from './state/reading';
import { useSession } from './state/session';
import { STATIONS, type StationMark } from './stations';

const MARK_WORDS: Readonly<Record<StationMark, string>> = {
  notYet: 'not yet',
  holds: 'holds',
  fails: 'fails',
};

/** The small mark beside a station's word: an empty ring, a tick, or a hatched block. */
function Mark({ mark }: { readonly mark: StationMark }) {
  return (
    <svg className="mark" data-mark={mark} viewBox="0 0 16 16" width="16" height="16" aria-hidden>
      {mark === 'notYet' && <circle cx="8" cy="8" r="5" />}
      {mark === 'holds' && <path d="M2.5 8.5 6.5 12.5 13.5 3.5" />}
      {mark === 'fails' && <path d="M2 2h12v12H2zM2 8 8 2M2 14 14 2M8 14 14 8" />}
    </svg>
  );
}

/** The stations as words in job order, and what concerns the whole rig. */
export function Header() {
  return (
    <header className="header">
      <Stations />
      <RigActions />
    </header>
  );
}

function Stations() {
  const station = useSession((session) => session.station);
  const goTo = useSession((session) => session.goTo);
  const rig = useDocument((document) => document.rig);
  const shown = useShown();
  const [, markAgain] = useReducer((times: number) => times + 1, 0);
  const nav = useRef<HTMLElement>(null);
  useEffect(() => {
    const stops = STATIONS.map((each) => each.onMark?.(markAgain));
    return () => {
      for (const stop of stops) stop?.();
    };
  }, []);
  // biome-ignore lint/correctness/useExhaustiveDependencies: the word to be seen is that of the station
  useEffect(() => {
    nav.current?.querySelector('[aria-current]')?.scrollIntoView({ block: 'nearest', inline: 'center' });
  }, [station]);
  return (
    <nav className="stations" aria-label="Stations" ref={nav}>
      {STATIONS.map((each) => {
        const { id, word } = each;
        const mark = each.mark(shown, rig);
        return (
          <button
            key={id}
            type="button"
            aria-current={id === station ? 'page' : undefined}
            onClick={() => goTo(id)}
          >
            {word}
            <Mark mark={mark} />
            <span className="unseen">: {MARK_WORDS[mark]}</span>
          </button>
        );
      })}
    </nav>
  );
}

function RigActions() {
  const name = useDocument((document) => document.rig.name);
  const isDirty = useDocument((document) => document.isDirty);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const undone = useDocument((document) => document.past.at(-1)?.label);
  const redone = useDocument((document) => document.future.at(-1)?.label);
  const { undo, redo } = useDocument.getState();
  const offer = useInstall((state) => state.offer);
  const install = useInstall((state) => state.install);
  const [opened, setOpened] = useState<'files' | 'settings'>();
  const close = (): void => setOpened(undefined);

  return (
    <div className="rig-actions">
      <button
        type="button"
        disabled={!undone}
        aria-label={undone ? `Undo: ${undone}` : 'Undo'}
        title={undone ? `Undo: ${undone}` : 'Undo'}
        onClick={undo}
      >
        <svg viewBox="0 0 24 24" width="22" height="22" className="line-icon" aria-hidden>
          <path d="M9 5 4 10l5 5M4 10h10a6 6 0 0 1 0 12h-2" />
        </svg>
      </button>
      <button
        type="button"
        disabled={!redone}
        aria-label={redone ? `Redo: ${redone}` : 'Redo'}
        title={redone ? `Redo: ${redone}` : 'Redo'}
        onClick={redo}
      >
        <svg viewBox="0 0 24 24" width="22" height="22" className="line-icon" aria-hidden>
          <path d="m15 5 5 5-5 5M20 10H10a6 6 0 0 0 0 12h2" />
        </svg>
      </button>
      <button type="button" className="rig-name" onClick={() => setOpened('files')}>
        <b>{name}</b>
        <small>{isReadOnly ? 'read only' : isDirty ? 'not saved' : 'no changes'}</small>
        <span className="unseen">: save and open rigs</span>
      </button>
      {offer && (
        <button type="button" onClick={install}>
          Install
        </button>
      )}
      <button type="button" aria-label="Settings" title="Settings" onClick={() => setOpened('settings')}>
        <svg viewBox="0 0 24 24" width="22" height="22" className="line-icon" aria-hidden>
          <path d="M3 7h10M19 7h2M3 17h2M11 17h10" />
          <circle cx="16" cy="7" r="2.6" />
          <circle cx="8" cy="17" r="2.6" />
        </svg>
      </button>
      {opened === 'files' && <FilesDialog onClose={close} />}
      {opened === 'settings' && <SettingsDialog onClose={close} />}
    </div>
  );
}
