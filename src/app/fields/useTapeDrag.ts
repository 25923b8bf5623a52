import { type PointerEvent, type RefObject, useRef } from 'react';
import { tidy } from './stepSize';

export const PIXELS_PER_DRAG_STEP = 4;
const PIXELS_BEFORE_DRAG = 5;

interface Drag {
  readonly pointer: number;
  readonly x: number;
  readonly shown: number;
  readonly step: number;
  readonly symbol: string;
  hasMoved: boolean;
}

interface TapeDragProps {
  readonly input: RefObject<HTMLInputElement | null>;
  readonly isReadOnly: boolean;
  /** Takes a number in the unit shown. */
  readonly offer: (inUnit: number) => void;
  readonly onBegin?: (() => void) | undefined;
  readonly onCommit?: (() => void) | undefined;
  readonly onCancel?: (() => void) | undefined;
}

/** What the field shows at the start of a drag, kept to its end. */
interface Shown {
  readonly shown: number;
  readonly step: number;
  readonly symbol: string;
}

/**
 * A number field's box as a tape: a sideways drag pulls the number along, a tap goes on to typing.
 * `held` is what the drag under way started with; the field keeps its unit and step until it ends.
 */
export function useTapeDrag({ input, isReadOnly, offer, onBegin, onCommit, onCancel }: TapeDragProps) {
  const drag = useRef<Drag>(undefined);
  return {
    held: drag as { readonly current: Shown | undefined },
    onPointerDown: (event: PointerEvent, now: Shown): void => {
      if (isReadOnly || event.button !== 0 || document.activeElement === input.current) return;
      drag.current = { ...now, pointer: event.pointerId, x: event.clientX, hasMoved: false };
      // Focus would open the keyboard of a tablet: it comes at the end of a tap, not at the start of a drag.
      event.preventDefault();
      event.currentTarget.setPointerCapture(event.pointerId);
    },
    onPointerMove: (event: PointerEvent): void => {
      const current = drag.current;
      if (!current || current.pointer !== event.pointerId) return;
      const moved = event.clientX - current.x;
      if (!current.hasMoved) {
        if (Math.abs(moved) < PIXELS_BEFORE_DRAG) return;
        current.hasMoved = true;
        onBegin?.();
      }
      const places = Math.round(moved / PIXELS_PER_DRAG_STEP);
      offer(tidy((Math.round(current.shown / current.step) + places) * current.step));
    },
    onPointerUp: (event: PointerEvent): void => {
      const current = drag.current;
      if (!current || current.pointer !== event.pointerId) return;
      drag.current = undefined;
      if (current.hasMoved) onCommit?.();
      else {
        input.current?.focus();
        input.current?.select();
      }
    },
    onPointerCancel: (): void => {
      if (drag.current?.hasMoved) onCancel?.();
      drag.current = undefined;
    },
  };
}
