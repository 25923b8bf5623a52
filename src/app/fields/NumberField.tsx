import { type KeyboardEvent, useId, useRef, useState } from 'react';
import { describeRange, type QuantityInfo } from '../../core/rig';
import { formatQuantity, fromSI, parseQuantity, toSI, unitFor } from '../../core/units';
import { useSession } from '../state/session';
import { showNumber, stepFrom, stepsFor, tidy, unitThatFits } from './stepSize';
import { PIXELS_PER_DRAG_STEP, useTapeDrag } from './useTapeDrag';

export interface NumberFieldProps {
  readonly info: QuantityInfo;
  /** SI. */
  readonly value: number;
  readonly label?: string | undefined;
  /** Unit to show it in, in place of the one chosen for its dimension: grams for a balancing weight. */
  readonly symbol?: string | undefined;
  readonly isReadOnly?: boolean | undefined;
  readonly onChange: (si: number) => void;
  /** A drag begins and ends: everything between is one step to undo. */
  readonly onBegin?: (() => void) | undefined;
  readonly onCommit?: (() => void) | undefined;
  readonly onCancel?: (() => void) | undefined;
}

const LARGE_STEP = 10;
/** Letters; a longer unit stands under the label. */
const LONGEST_UNIT_IN_BOX = 6;

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
  const label = props.label ?? info.label;
  const number = useNumber(props, label);
  const { unit, shown, fault, tape } = number;
  const hasLongUnit = unit.symbol.length > LONGEST_UNIT_IN_BOX;
  const inUnit = (si: number): number => fromSI(si, info.dimension, unit.symbol);

  return (
    <div className="number">
      <label className="number-label" htmlFor={id}>
        {label}
        {hasLongUnit && <small> {unit.symbol}</small>}
      </label>
      <StepButton sign="−" name={`Less ${label}`} isReadOnly={isReadOnly} onPress={() => number.step(-1)} />
      <div
        className="number-box"
        onPointerDown={(event) =>
          tape.onPointerDown(event, { shown, step: number.dragStep, symbol: unit.symbol })
        }
        onPointerMove={tape.onPointerMove}
        onPointerUp={tape.onPointerUp}
        onPointerCancel={tape.onPointerCancel}
      >
        <input
          ref={number.input}
          id={id}
          className="number-value"
          role="spinbutton"
          inputMode="text"
          autoComplete="off"
          spellCheck={false}
          readOnly={isReadOnly}
          aria-valuenow={shown}
          aria-valuemin={inUnit(info.min)}
          aria-valuemax={inUnit(info.max)}
          aria-valuetext={formatQuantity(value, info.dimension, unit.symbol, 4)}
          aria-invalid={fault !== undefined}
          aria-describedby={fault === undefined ? undefined : `${id}-fault`}
          value={number.typed ?? showNumber(shown)}
          onChange={(event) => number.setTyped(event.target.value)}
          onFocus={(event) => event.target.select()}
          onBlur={number.takeTyped}
          onKeyDown={number.onKeyDown}
        />
        {unit.symbol !== '' && !hasLongUnit && <span className="number-unit">{unit.symbol}</span>}
        <Rule places={shown / number.dragStep} />
      </div>
      <StepButton sign="+" name={`More ${label}`} isReadOnly={isReadOnly} onPress={() => number.step(1)} />
      {fault !== undefined && (
        <p className="number-fault" id={`${id}-fault`} role="alert">
          {fault}
        </p>
      )}
    </div>
  );
}

/** The number behind a field: what is shown, what is being typed, and every way of changing it. */
function useNumber(props: NumberFieldProps, label: string) {
  const { info, value, onChange } = props;
  const preferred = useSession((session) => session.units[info.dimension]);
  const chosen = props.symbol ?? preferred;
  const input = useRef<HTMLInputElement>(null);
  const [typed, setTyped] = useState<string>();
  const [fault, setFault] = useState<string>();

  const offer = (inUnit: number): void => {
    setFault(undefined);
    const si = toSI(inUnit, info.dimension, symbol);
    const next = Math.min(info.max, Math.max(info.min, info.dimension === 'count' ? Math.round(si) : si));
    if (next !== value) onChange(next);
  };
  const tape = useTapeDrag({ ...props, isReadOnly: props.isReadOnly ?? false, input, offer });

  // While it is dragged the tape keeps its unit and its step, whatever size the number comes to.
  const symbol = tape.held.current?.symbol ?? unitThatFits(info.dimension, value, chosen).symbol;
  const shown = tidy(fromSI(value, info.dimension, symbol));
  const steps = stepsFor(info, shown, symbol);

  const step = (direction: 1 | -1, times = 1): void => {
    setTyped(undefined);
    offer(stepFrom(shown, steps.button * times, direction));
  };
  const takeTyped = (): void => {
    const text = typed;
    setTyped(undefined);
    if (text === undefined || text === showNumber(shown)) return;
    const taken = readTyped(text, info, symbol, label);
    setFault(taken.kind === 'refused' ? taken.sentence : undefined);
    if (taken.kind === 'taken' && taken.si !== value) onChange(taken.si);
  };
  const onKeyDown = (event: KeyboardEvent): void => {
    if (event.key === 'Enter') takeTyped();
    else if (event.key === 'Escape') {
      setTyped(undefined);
      setFault(undefined);
    } else if (event.key === 'ArrowUp' || event.key === 'ArrowDown') {
      if (props.isReadOnly) return;
      step(event.key === 'ArrowUp' ? 1 : -1, event.shiftKey ? LARGE_STEP : 1);
    } else return;
    event.preventDefault();
  };

  const dragStep = tape.held.current?.step ?? steps.drag;
  const unit = unitFor(info.dimension, symbol);
  return { input, unit, shown, dragStep, typed, setTyped, takeTyped, fault, step, onKeyDown, tape };
}

interface StepButtonProps {
  readonly sign: string;
  readonly name: string;
  readonly isReadOnly: boolean;
  readonly onPress: () => void;
}

const StepButton = ({ sign, name, isReadOnly, onPress }: StepButtonProps) => (
  <button type="button" className="number-step" disabled={isReadOnly} aria-label={name} onClick={onPress}>
    {sign}
  </button>
);

/** CSS pixels after which the pattern of ticks repeats; agrees with styles/fields.css. */
const RULE_LENGTH = 2000;

/** The ticks under a number, drawn along as it changes. */
function Rule({ places }: { readonly places: number }) {
  const travel = (places * PIXELS_PER_DRAG_STEP) % RULE_LENGTH;
  return (
    <span
      className="number-rule"
      style={{ backgroundPositionX: `calc(50% - ${travel.toFixed(1)}px)` }}
      aria-hidden
    />
  );
}
