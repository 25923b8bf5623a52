import { Suspense, useEffect, useState } from 'react';
import { saveToBrowser } from './files/keeping';
import { Header } from './Header';
import { LedgerLadder, LedgerLineFolded } from './ledger/LedgerLadder';
import { Ribbon } from './ribbon/Ribbon';
import { StageFrame } from './StageFrame';
import { Dialog } from './sheet/Dialog';
import { Notices } from './sheet/Notices';
import { useDocument } from './state/document';
import { useIsNarrow } from './state/looks';
import { useSession } from './state/session';
import { findStation } from './stations';
import { YardBar } from './yard/YardBar';

/** The page: stations on top, the sheet at the left, the ledger at the right, the ribbon below, the stage between. */
export function App() {
  const isNarrow = useIsNarrow();
  useKeys();
  useStageInsets(isNarrow);
  return (
    <div className="app">
      <Header />
      <StageFrame />
      <YardBar />
      <Sheet />
      {isNarrow ? <NarrowLedger /> : <LedgerLadder />}
      <Ribbon />
      <Notices />
    </div>
  );
}

/** Width of the ledger, which lies over the stage; agrees with styles/layout.css. */
const LEDGER_WIDTH = 236;

function useStageInsets(isNarrow: boolean): void {
  useEffect(() => {
    const { stageInsets, setStageInsets } = useSession.getState();
    setStageInsets({ ...stageInsets, right: isNarrow ? 0 : LEDGER_WIDTH });
  }, [isNarrow]);
}

function Sheet() {
  const id = useSession((session) => session.station);
  const station = findStation(id);
  if (!station) return null;
  return (
    <section className="sheet" aria-label={station.word}>
      <h1 className="sheet-question">{station.question}</h1>
      <div className="sheet-body" key={id}>
        <Suspense fallback={<p aria-busy="true">Opening…</p>}>
          <station.Sheet />
        </Suspense>
      </div>
    </section>
  );
}

function NarrowLedger() {
  const [isUnfolded, setUnfolded] = useState(false);
  return (
    <>
      <LedgerLineFolded onUnfold={() => setUnfolded(true)} />
      {isUnfolded && (
        <Dialog title="Ledger" onClose={() => setUnfolded(false)}>
          <LedgerLadder />
        </Dialog>
      )}
    </>
  );
}

/** Ctrl or Cmd with S saves; with Z and Y it undoes and redoes, unless a text is being typed. */
function useKeys(): void {
  useEffect(() => {
    const onKeyDown = (event: KeyboardEvent): void => {
      if (!(event.ctrlKey || event.metaKey)) return;
      const { undo, redo } = useDocument.getState();
      const key = event.key.toLowerCase();
      const isTyping = event.target instanceof HTMLInputElement;
      if (key === 's') void saveToBrowser();
      else if (isTyping) return;
      else if (key === 'z' && !event.shiftKey) undo();
      else if (key === 'y' || key === 'z') redo();
      else return;
      event.preventDefault();
    };
    addEventListener('keydown', onKeyDown);
    return () => removeEventListener('keydown', onKeyDown);
  }, []);
}
