import { type KeyboardEvent, type PointerEvent, useRef } from 'react';
import { labelOf, moveInSequence, removeFromSequence, spanOf, stretchInSequence } from '../../core/planning';
import type { Disturbance, Jobs } from '../../core/rig';
import { formatQuantity } from '../../core/units';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { useSelectedEvent } from '../stations/plan/selectedEvent';

interface EventBlockProps {
  readonly event: Disturbance;
  readonly index: number;
  readonly row: number;
  /** s, length of the ribbon. */
  readonly length: number;
}

const KEY_STEP = 0.05;
const LARGE_KEY_STEP = 0.5;
/** CSS pixels a pointer must have moved before a press becomes a drag. */
const DRAG_AFTER = 4;

interface Hold {
  readonly pointer: number;
  readonly part: 'whole' | 'end';
  readonly fromX: number;
  /** s of the block when it was taken hold of. */
  readonly start: number;
  readonly end: number;
  readonly perPixel: number;
  isDragged: boolean;
}

/** A disturbance on the ribbon: dragged to another instant, stretched by its end, opened by a tap, deleted by key. */
export function EventBlock({ event, index, row, length }: EventBlockProps) {
  const hold = useRef<Hold>(undefined);
  const isSelected = useSelectedEvent((selected) => selected.index === index);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const [from, to] = spanOf(event);
  const name = labelOf(event);
  const canStretch = event.kind !== 'shove';

  const change = (label: string, next: (jobs: Jobs) => Jobs): void =>
    useDocument.getState().edit(`${label}: ${name}`, (rig) => ({ ...rig, jobs: next(rig.jobs) }));
  const move = (time: number): void => change('Move', (jobs) => moveInSequence(jobs, index, time));
  const stretch = (end: number): void => change('Stretch', (jobs) => stretchInSequence(jobs, index, end));
  const open = (): void => {
    useSelectedEvent.setState({ index });
    useSession.getState().goTo('plan');
  };

  const onPointerDown = (part: Hold['part']) => (pointer: PointerEvent) => {
    if (pointer.button !== 0 || hold.current || isReadOnly) return;
    pointer.stopPropagation();
    const ribbon = pointer.currentTarget.closest('.events')?.getBoundingClientRect();
    pointer.currentTarget.setPointerCapture(pointer.pointerId);
    hold.current = {
      pointer: pointer.pointerId,
      part,
      fromX: pointer.clientX,
      start: from,
      end: to,
      perPixel: length / (ribbon?.width || 1),
      isDragged: false,
    };
  };
  const onPointerMove = (pointer: PointerEvent): void => {
    const held = hold.current;
    if (!held || held.pointer !== pointer.pointerId) return;
    const by = pointer.clientX - held.fromX;
    if (!held.isDragged) {
      if (Math.abs(by) < DRAG_AFTER) return;
      held.isDragged = true;
      useDocument.getState().begin(`${held.part === 'end' ? 'Stretch' : 'Move'}: ${name}`);
    }
    const shift = by * held.perPixel;
    const tidy = (time: number): number => Math.round(100 * time) / 100;
    if (held.part === 'end') stretch(tidy(held.end + shift));
    else move(tidy(held.start + shift));
  };
  const onPointerUp = (): void => {
    const held = hold.current;
    hold.current = undefined;
    if (!held) return;
    if (held.isDragged) useDocument.getState().commit();
    else open();
  };
  const onPointerCancel = (): void => {
    if (hold.current?.isDragged) useDocument.getState().cancel();
    hold.current = undefined;
  };
  const onKeyDown = (key: KeyboardEvent): void => {
    if (key.key === 'Enter' || key.key === ' ') open();
    else if (isReadOnly) return;
    else if (key.key === 'Delete' || key.key === 'Backspace') {
      change('Take out', (jobs) => removeFromSequence(jobs, index));
    } else if (key.key === 'ArrowLeft' || key.key === 'ArrowRight') {
      const by = (key.key === 'ArrowLeft' ? -1 : 1) * (key.ctrlKey ? LARGE_KEY_STEP : KEY_STEP);
      if (key.shiftKey) stretch(to + by);
      else move(from + by);
    } else return;
    key.preventDefault();
  };

  return (
    <li style={{ gridRow: row + 1, left: `${share(from, length)}%`, width: `${share(to - from, length)}%` }}>
      <button
        type="button"
        className="event-block"
        data-kind={event.kind}
        aria-pressed={isSelected}
        aria-label={`${name} at ${formatQuantity(from, 'time')}${canStretch ? `, lasts ${formatQuantity(to - from, 'time')}` : ''}`}
        title={`${name}: drag to move${canStretch ? ', drag its end to stretch' : ''}`}
        onPointerDown={onPointerDown('whole')}
        onPointerMove={onPointerMove}
        onPointerUp={onPointerUp}
        onPointerCancel={onPointerCancel}
        onKeyDown={onKeyDown}
      >
        <span>{name}</span>
      </button>
      {canStretch && (
        <i
          className="event-end"
          aria-hidden
          onPointerDown={onPointerDown('end')}
          onPointerMove={onPointerMove}
          onPointerUp={onPointerUp}
          onPointerCancel={onPointerCancel}
        />
      )}
    </li>
  );
}

const share = (time: number, length: number): number =>
  length > 0 ? Math.min(100, Math.max(0, (100 * time) / length)) : 0;
