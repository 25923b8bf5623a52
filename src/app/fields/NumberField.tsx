import { type KeyboardEvent, type PointerEvent, useId, useRef, useState } from 'react';
import { describeRange, type QuantityInfo } from '../../core/rig';
import { formatQuantity, fromSI, parseQuantity, toSI, unitFor } from '../../core/units';
import { useSession } from '../state/session';
import { showNumber, stepFrom, stepsFor, tidy, unitThatFits } from './stepSize';

export interface NumberFieldProps {
  readonly info: QuantityInfo;
  /** SI. */
  readonly value: number;
  readonly label?: string | undefined;
  readonly isReadOnly?: boolean | undefined;
  readonly onChange: (si: number) => void;
  /** A drag begins and ends: everything between is one step to undo. */
  readonly onBegin?: (() => void) | undefined;
  readonly onCommit?: (() => void) | undefined;
  readonly onCancel?: (() => void) | undefined;
}

const PIXELS_PER_DRAG_STEP = 4;
const PIXELS_BEFORE_DRAG = 5;
const LARGE_STEP = 10;
/** Letters; a longer unit stands under the label. */
const LONGEST_UNIT_IN_BOX = 6;

interface Drag {
  readonly pointer: number;
  readonly x: number;
  readonly shown: number;
  readonly step: number;
  readonly symbol: string;
  hasMoved: boolean;
}

type Taken =
  | { readonly kind: 'taken'; readonly si: number }
  | { readonly kind: 'refused'; readonly sentence: string };

/** What was typed, in SI, or a sentence that names the field, the value, the range and the unit. */
function readTyped(text: string, info: QuantityInfo, symbol: string, label: string): Taken {
  const parsed = parseQuantity(text, info.dimension, symbol);
  if (parsed.kind === 'unreadable') return { kind: 'refused', sentence: `${label}: ${parsed.reason}` };
  const { si } = parsed;
  if (si >= info.min && si <= info.max && (info.dimension !== 'count' || Number.isInteger(si))) {
    return { kind: 'taken', si };
  }
  const given = formatQuantity(si, info.dimension, symbol);
  return { kind: 'refused', sentence: `${label}: ${given} will not do; it must be ${describeRange(info)}.` };
}

/**
 * A number with its unit. It steps with plus, minus and the arrow keys, is dragged sideways, and takes typed
 * expressions; what cannot be taken is answered with a sentence and leaves the value as it was.
 */
export function NumberField(props: NumberFieldProps) {
  const { info, value, isReadOnly = false } = props;
  const id = useId();
  const chosen = useSession((session) => session.units[info.dimension]);
  const input = useRef<HTMLInputElement>(null);
  const drag = useRef<Drag>(undefined);
  const [typed, setTyped] = useState<string>();
  const [fault, setFault] = useState<string>();

  // While it is dragged the tape keeps its unit, whatever size the number comes to.
  const symbol = drag.current?.symbol ?? unitThatFits(info.dimension, value, chosen).symbol;
  const unit = unitFor(info.dimension, symbol);
  const shown = tidy(fromSI(value, info.dimension, symbol));
  const steps = stepsFor(info, shown, symbol);
  const label = props.label ?? info.label;

  const clamp = (si: number): number => Math.min(info.max, Math.max(info.min, si));
  const offer = (inUnit: number): void => {
    setFault(undefined);
    const next = clamp(toSI(inUnit, info.dimension, symbol));
    if (next !== value) props.onChange(info.dimension === 'count' ? Math.round(next) : next);
  };
  const step = (direction: 1 | -1, times = 1): void => {
    setTyped(undefined);
    offer(stepFrom(shown, steps.button * times, direction));
  };

  const takeTyped = (): void => {
    const text = typed;
    setTyped(undefined);
    if (text === undefined || text === showNumber(shown)) return;
    const taken = readTyped(text, info, unit.symbol, label);
    setFault(taken.kind === 'refused' ? taken.sentence : undefined);
    if (taken.kind === 'taken' && taken.si !== value) props.onChange(taken.si);
  };

  const onKeyDown = (event: KeyboardEvent): void => {
    if (event.key === 'Enter') takeTyped();
    else if (event.key === 'Escape') {
      setTyped(undefined);
      setFault(undefined);
    } else if (event.key === 'ArrowUp' || event.key === 'ArrowDown') {
      step(event.key === 'ArrowUp' ? 1 : -1, event.shiftKey ? LARGE_STEP : 1);
    } else return;
    event.preventDefault();
  };

  const onPointerDown = (event: PointerEvent): void => {
    if (isReadOnly || event.button !== 0 || document.activeElement === input.current) return;
    drag.current = {
      pointer: event.pointerId,
      x: event.clientX,
      shown,
      step: steps.drag,
      symbol,
      hasMoved: false,
    };
    // Focus would open the keyboard of a tablet: it comes at the end of a tap, not at the start of a drag.
    event.preventDefault();
    event.currentTarget.setPointerCapture(event.pointerId);
  };
  const onPointerMove = (event: PointerEvent): void => {
    const current = drag.current;
    if (!current || current.pointer !== event.pointerId) return;
    const moved = event.clientX - current.x;
    if (!current.hasMoved) {
      if (Math.abs(moved) < PIXELS_BEFORE_DRAG) return;
      current.hasMoved = true;
      props.onBegin?.();
    }
    const places = Math.round(moved / PIXELS_PER_DRAG_STEP);
    offer(tidy((Math.round(current.shown / current.step) + places) * current.step));
  };
  const onPointerUp = (event: PointerEvent): void => {
    const current = drag.current;
    if (!current || current.pointer !== event.pointerId) return;
    drag.current = undefined;
    if (current.hasMoved) props.onCommit?.();
    else {
      input.current?.focus();
      input.current?.select();
    }
  };
  const onPointerCancel = (): void => {
    if (drag.current?.hasMoved) props.onCancel?.();
    drag.current = undefined;
  };

  const hasLongUnit = unit.symbol.length > LONGEST_UNIT_IN_BOX;
  const travel = (shown / steps.drag) * PIXELS_PER_DRAG_STEP;
  return (
    <div className="number" data-fault={fault !== undefined || undefined}>
      <label className="number-label" htmlFor={id}>
        {label}
        {hasLongUnit && <small> {unit.symbol}</small>}
      </label>
      <button
        type="button"
        className="number-step"
        disabled={isReadOnly}
        aria-label={`Less ${label}`}
        onClick={() => step(-1)}
      >
        −
      </button>
      <div
        className="number-box"
        onPointerDown={onPointerDown}
        onPointerMove={onPointerMove}
        onPointerUp={onPointerUp}
        onPointerCancel={onPointerCancel}
      >
        <input
          ref={input}
          id={id}
          className="number-value"
          role="spinbutton"
          inputMode="text"
          autoComplete="off"
          spellCheck={false}
          readOnly={isReadOnly}
          aria-valuenow={shown}
          aria-valuemin={fromSI(info.min, info.dimension, symbol)}
          aria-valuemax={fromSI(info.max, info.dimension, symbol)}
          aria-valuetext={formatQuantity(value, info.dimension, symbol, 4)}
          aria-invalid={fault !== undefined}
          aria-describedby={fault === undefined ? undefined : `${id}-fault`}
          value={typed ?? showNumber(shown)}
          onChange={(event) => setTyped(event.target.value)}
          onFocus={(event) => event.target.select()}
          onBlur={takeTyped}
          onKeyDown={onKeyDown}
        />
        {unit.symbol !== '' && !hasLongUnit && <span className="number-unit">{unit.symbol}</span>}
        <span
          className="number-rule"
          style={{ backgroundPositionX: `calc(50% - ${(travel % 2000).toFixed(1)}px)` }}
          aria-hidden
        />
      </div>
      <button
        type="button"
        className="number-step"
        disabled={isReadOnly}
        aria-label={`More ${label}`}
        onClick={() => step(1)}
      >
        +
      </button>
      {fault !== undefined && (
        <p className="number-fault" id={`${id}-fault`} role="alert">
          {fault}
        </p>
      )}
    </div>
  );
}
