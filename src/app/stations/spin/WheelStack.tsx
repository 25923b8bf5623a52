import { type KeyboardEvent, useId, useRef } from 'react';
import type { StressRow } from '../../../core/physics';
import type { WheelPart } from '../../../core/rig';
import { newWheelPart } from '../../fields/kindDefaults';
import { writeToLikeGyros } from '../../fields/likeGyros';
import { RigFields } from '../../fields/RigFields';
import { writeAt } from '../../fields/rigPath';
import { optionWords } from '../../fields/words';
import { sparePercent } from '../../ledger/ledgerMarks';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { dropAt, movePart } from './stackOrder';

const PART_KINDS: readonly WheelPart['kind'][] = ['disc', 'rim', 'hub', 'balls', 'bolts'];
const MOST_PARTS = 24;

const KIND_HINTS: Readonly<Record<WheelPart['kind'], string>> = {
  disc: 'Disc or web',
  rim: 'Rim',
  hub: 'Hub',
  balls: 'Balls in a groove',
  bolts: 'Bolts on a circle',
};

const radiusOf = (part: WheelPart): number =>
  part.kind === 'rim' ? part.outerRadius : 'radius' in part ? part.radius : part.pitchRadius;

interface WheelStackProps {
  readonly gyro: number;
  readonly stress: readonly StressRow[];
  readonly opened: number | undefined;
  readonly onOpen: (part: number | undefined) => void;
}

/** The parts the wheel is made of, in order: opened one at a time, moved, taken off and added. */
export function WheelStack({ gyro, stress, opened, onOpen }: WheelStackProps) {
  const parts = useDocument((document) => document.rig.array.gyros[gyro]?.wheel.parts);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const list = useRef<HTMLOListElement>(null);
  if (!parts) return null;

  const setParts = (label: string, next: readonly WheelPart[]): void =>
    edit(label, (rig) =>
      isEachOnItsOwn
        ? writeAt(rig, ['array', 'gyros', gyro, 'wheel', 'parts'], next)
        : writeToLikeGyros(rig, gyro, ['wheel', 'parts'], next),
    );
  const move = (from: number, by: -1 | 1): void => {
    const to = from + by;
    if (isReadOnly || to < 0 || to >= parts.length) return;
    setParts('Move a part of the wheel', movePart(parts, from, to));
    onOpen(opened === from ? to : opened === to ? from : opened);
    // The focus goes with the part, so that it can be moved on.
    requestAnimationFrame(() => list.current?.children[to]?.querySelector('button')?.focus());
  };
  const takeOff = (index: number): void => {
    setParts('Take a part off the wheel', dropAt(parts, index));
    onOpen(undefined);
  };
  const add = (kind: WheelPart['kind']): void => {
    setParts('Add a part to the wheel', [...parts, newWheelPart(kind, Math.max(...parts.map(radiusOf)))]);
    onOpen(parts.length);
  };

  return (
    <>
      <Group title="Stack">
        <ol className="stack" ref={list}>
          {parts.map((part, index) => (
            <StackRow
              // A part's place in the stack is its name: two may be equal in all else.
              // biome-ignore lint/suspicious/noArrayIndexKey: see above
              key={index}
              gyro={gyro}
              part={part}
              index={index}
              count={parts.length}
              rows={stress.filter((row) => row.part === index)}
              isOpen={opened === index}
              isReadOnly={isReadOnly}
              onToggle={() => onOpen(opened === index ? undefined : index)}
              onMove={(by) => move(index, by)}
              onTakeOff={() => takeOff(index)}
            />
          ))}
        </ol>
      </Group>
      <Group title="Add to the stack">
        <div className="choice-row">
          {PART_KINDS.map((kind) => (
            <button
              key={kind}
              type="button"
              disabled={isReadOnly || parts.length >= MOST_PARTS}
              onClick={() => add(kind)}
            >
              {KIND_HINTS[kind]}
            </button>
          ))}
        </div>
      </Group>
    </>
  );
}

interface StackRowProps {
  readonly gyro: number;
  readonly part: WheelPart;
  readonly index: number;
  readonly count: number;
  readonly rows: readonly StressRow[];
  readonly isOpen: boolean;
  readonly isReadOnly: boolean;
  readonly onToggle: () => void;
  readonly onMove: (by: -1 | 1) => void;
  readonly onTakeOff: () => void;
}

function StackRow(row: StackRowProps) {
  const id = useId();
  const { part, index, isOpen, isReadOnly } = row;
  const title = `${index + 1} · ${optionWords(part.kind)}`;
  const spare = row.rows.length > 0 ? Math.min(...row.rows.map((stress) => stress.spare)) : undefined;
  const onKeyDown = (event: KeyboardEvent): void => {
    if (!event.altKey || (event.key !== 'ArrowUp' && event.key !== 'ArrowDown')) return;
    event.preventDefault();
    row.onMove(event.key === 'ArrowUp' ? -1 : 1);
  };
  return (
    <li data-open={isOpen || undefined}>
      <div className="stack-head">
        <button
          type="button"
          className="stack-name"
          aria-expanded={isOpen}
          aria-controls={id}
          title="Alt with the up and down keys moves it"
          onClick={row.onToggle}
          onKeyDown={onKeyDown}
        >
          <b>{title}</b>
          <small>
            {part.kind === 'bolts' ? 'steel' : part.material}
            {spare !== undefined && (
              <span className={spare < 0 ? 'word-fails' : undefined}>
                {' · '}
                {spare < 0 ? `too fast, ${sparePercent(spare)}` : `${sparePercent(spare)} spare`}
              </span>
            )}
          </small>
        </button>
        <button
          type="button"
          className="stack-move"
          disabled={isReadOnly || index === 0}
          aria-label={`Move ${title} up`}
          onClick={() => row.onMove(-1)}
        >
          ↑
        </button>
        <button
          type="button"
          className="stack-move"
          disabled={isReadOnly || index === row.count - 1}
          aria-label={`Move ${title} down`}
          onClick={() => row.onMove(1)}
        >
          ↓
        </button>
      </div>
      <div id={id} hidden={!isOpen}>
        {isOpen && (
          <>
            <RigFields path={['array', 'gyros', row.gyro, 'wheel', 'parts', index]} hidesKind />
            <button
              type="button"
              className="quiet"
              disabled={isReadOnly || row.count < 2}
              aria-label={`Take off ${title}`}
              onClick={row.onTakeOff}
            >
              Take off
            </button>
          </>
        )}
      </div>
    </li>
  );
}
