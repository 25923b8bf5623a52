import type { RootState } from '@react-three/fiber';
import { useEffect, useId, useRef, useState, useSyncExternalStore } from 'react';
import { useDocument } from '../state/document';
import { NOTHING_SELECTED, useSession } from '../state/session';
import { stream } from '../state/stream';
import { holdForCapture } from './captureStage';
import { type DragNote, onDragNote } from './dragging';
import type { View } from './framing';
import { type Palette, usePalette } from './palette';
import { partName } from './parts';
import { describeInstant } from './poseSummary';
import { Scene } from './Scene';
import { StageCanvas } from './StageCanvas';
import { StageCaption } from './StageCaption';
import { createStageFrame } from './stageFrame';
import { onStageKeyDown, onStageKeyUp } from './stageKeys';
import type { ViewAsk } from './Viewpoint';
import './stage.css';

/** A tap on nothing selects nothing. */
function clearSelection(event: MouseEvent): void {
  if (event.type === 'click') useSession.getState().select(NOTHING_SELECTED);
}

/**
 * The 3D view. Mount it once; it draws the document's rig as the stream has it. Whoever mounts it has asked
 * whether the browser can draw it and catches what it throws.
 */
export function Stage() {
  const palette = usePalette();
  const [ask, setAsk] = useState<ViewAsk>({ view: 'frame', count: 0 });
  const [isReady, setReady] = useState(false);
  const quality = useSession((state) => state.quality);
  const summaryId = useId();
  const keysId = useId();

  const onCreated = (state: RootState): void => {
    const canvas = state.gl.domElement;
    canvas.setAttribute('role', 'img');
    canvas.setAttribute('aria-label', 'The rig in three dimensions');
    canvas.setAttribute('aria-describedby', summaryId);
    // A picture lost with its context is drawn again when that comes back: nothing else would ask for it.
    canvas.addEventListener('webglcontextrestored', () => state.invalidate());
    holdForCapture(state);
    setReady(true);
  };
  useEffect(() => () => holdForCapture(undefined), []);

  return (
    <section
      className="stage"
      aria-label="3D view"
      aria-describedby={keysId}
      // biome-ignore lint/a11y/noNoninteractiveTabindex: the stage takes keys of its own, which its description tells.
      tabIndex={0}
      data-ready={isReady}
      onKeyDown={onStageKeyDown}
      onKeyUp={onStageKeyUp}
      onBlur={onStageKeyUp}
    >
      <StageCanvas isLowQuality={quality === 'low'} onCreated={onCreated} onPointerMissed={clearSelection}>
        <Scene palette={palette} ask={ask} />
      </StageCanvas>
      <ViewButtons onView={(view) => setAsk(({ count }) => ({ view, count: count + 1 }))} />
      <StageCaption palette={palette} />
      <FallNotice />
      <DragReadout palette={palette} />
      <Summary id={summaryId} />
      <p id={keysId} className="stage-words">
        Left and right bracket go from part to part. Arrow keys, page up and page down nudge the selected
        part; with shift ten steps at once. Escape selects nothing.
      </p>
    </section>
  );
}

const BUTTONS: readonly { view: View | 'frame'; label: string; title: string }[] = [
  { view: 'frame', label: 'Frame', title: 'Bring the whole rig into the picture' },
  { view: 'front', label: 'Front', title: 'Look from the front' },
  { view: 'side', label: 'Side', title: 'Look from the left side' },
  { view: 'top', label: 'Top', title: 'Look from above' },
];

function ViewButtons({ onView }: { readonly onView: (view: View | 'frame') => void }) {
  const { right, top } = useSession((state) => state.stageInsets);
  return (
    <fieldset className="stage-views" style={{ right: right + 8, top: top + 8 }}>
      <legend className="stage-words">View</legend>
      {BUTTONS.map(({ view, label, title }) => (
        <button key={view} type="button" title={title} onClick={() => onView(view)}>
          {label}
        </button>
      ))}
    </fieldset>
  );
}

/** When the body on screen has gone over by the playhead, the time at which it did; NaN while it stands. */
const fellAt = (): number => {
  const outcome = stream.shown?.outcome;
  return outcome?.kind === 'falls' && stream.seconds >= outcome.at ? outcome.at : Number.NaN;
};

function FallNotice() {
  const at = useSyncExternalStore(stream.onFrame, fellAt);
  const { left, right, top } = useSession((state) => state.stageInsets);
  if (Number.isNaN(at)) return null;
  return (
    <p className="stage-fall" style={{ left: left + 12, right: right + 84, top: top + 12 }}>
      <span>Falls at {at.toFixed(2)} s</span>
    </p>
  );
}

/** The number that is being dragged, beside the pointer. */
function DragReadout({ palette }: { readonly palette: Palette }) {
  const element = useRef<HTMLOutputElement>(null);
  useEffect(
    () =>
      onDragNote((note: DragNote | undefined) => {
        if (!element.current) return;
        element.current.hidden = note === undefined;
        if (!note) return;
        element.current.textContent = note.text;
        // Above a finger, and kept inside the stage.
        const room = element.current.parentElement?.clientWidth ?? 0;
        const half = element.current.offsetWidth / 2;
        const x = Math.min(room - half - 4, Math.max(half + 4, note.x));
        element.current.style.transform = `translate(${x - half}px, ${Math.max(4, note.y - 64)}px)`;
      }),
    [],
  );
  return (
    <output
      ref={element}
      className="stage-readout"
      hidden
      style={{ borderColor: palette.chosen.getStyle() }}
    />
  );
}

/** A standstill this long is told, ms: words that change with every frame could not be heard. */
const SETTLED = 600;

function Summary({ id }: { readonly id: string }) {
  const rig = useDocument((state) => state.rig);
  const selection = useSession((state) => state.selection);
  const [words, setWords] = useState('');
  useEffect(() => {
    let timer: ReturnType<typeof setTimeout> | undefined;
    const tell = (): void => {
      const frame = createStageFrame(rig, stream.shown);
      const fell = fellAt();
      const pose = describeInstant(rig, frame.instant, stream.seconds, Number.isNaN(fell) ? undefined : fell);
      const chosen = selection.kind === 'none' ? '' : ` Selected: ${partName(rig, selection)}.`;
      setWords(pose + chosen);
    };
    const wait = (): void => {
      if (stream.isPlaying) return;
      clearTimeout(timer);
      timer = setTimeout(tell, SETTLED);
    };
    // Told once even while it plays, so that there is always a description.
    timer = setTimeout(tell, SETTLED);
    const leave = [stream.onFrame(wait), stream.onTransport(wait)];
    return () => {
      clearTimeout(timer);
      for (const stop of leave) stop();
    };
  }, [rig, selection]);
  return (
    <p id={id} className="stage-words" aria-live="polite">
      {words}
    </p>
  );
}
