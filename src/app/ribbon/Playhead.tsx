import { type KeyboardEvent, type PointerEvent, useEffect, useRef } from 'react';
import { formatQuantity } from '../../core/units';
import { stream } from '../state/stream';

const ARROW_STEP = 0.02;
const PAGE_STEP = 0.5;

/** The line that says which instant is on stage. It is dragged anywhere on the ribbon, and moves without React. */
export function Playhead() {
  const strip = useRef<HTMLDivElement>(null);
  const line = useRef<HTMLDivElement>(null);
  const pointer = useRef<number>(undefined);
  const resumes = useRef(false);

  useEffect(() => {
    const place = (): void => {
      const share = stream.length > 0 ? stream.seconds / stream.length : 0;
      if (line.current) line.current.style.left = `${(100 * share).toFixed(3)}%`;
      strip.current?.setAttribute('aria-valuenow', stream.seconds.toFixed(2));
      strip.current?.setAttribute('aria-valuemax', stream.length.toFixed(2));
      strip.current?.setAttribute('aria-valuetext', formatQuantity(stream.seconds, 'time'));
    };
    place();
    return stream.onFrame(place);
  }, []);

  const seekTo = (event: PointerEvent): void => {
    const box = event.currentTarget.getBoundingClientRect();
    stream.seek((stream.length * (event.clientX - box.left)) / box.width);
  };
  const release = (): void => {
    pointer.current = undefined;
    if (resumes.current) stream.play();
    resumes.current = false;
  };
  const onKeyDown = (event: KeyboardEvent): void => {
    const moves: Readonly<Record<string, number>> = {
      ArrowLeft: stream.seconds - ARROW_STEP,
      ArrowRight: stream.seconds + ARROW_STEP,
      PageDown: stream.seconds - PAGE_STEP,
      PageUp: stream.seconds + PAGE_STEP,
      Home: 0,
      End: stream.length,
    };
    const to = moves[event.key];
    if (to !== undefined) {
      stream.pause();
      stream.seek(to);
    } else if (event.key === ' ') {
      if (stream.isPlaying) stream.pause();
      else stream.play();
    } else return;
    event.preventDefault();
  };

  return (
    <div
      ref={strip}
      className="scrub"
      role="slider"
      tabIndex={0}
      aria-label="Playhead"
      aria-valuemin={0}
      aria-valuemax={0}
      aria-valuenow={0}
      onKeyDown={onKeyDown}
      onPointerDown={(event) => {
        if (event.button !== 0 || pointer.current !== undefined) return;
        pointer.current = event.pointerId;
        resumes.current = stream.isPlaying;
        stream.pause();
        event.currentTarget.setPointerCapture(event.pointerId);
        seekTo(event);
      }}
      onPointerMove={(event) => pointer.current === event.pointerId && seekTo(event)}
      onPointerUp={release}
      onPointerCancel={release}
    >
      <div ref={line} className="playhead" />
    </div>
  );
}
