import { useState } from 'react';
import {
  addToSequence,
  type DisturbanceKind,
  firstDisturbance,
  kindsFor,
  labelOf,
  readSeries,
  removeFromSequence,
  replaceInSequence,
} from '../../../core/planning';
import type { Disturbance } from '../../../core/rig';
import { Choice } from '../../fields/Choice';
import { RigFields } from '../../fields/RigFields';
import { optionWords } from '../../fields/words';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useShown } from '../../state/reading';
import { stream } from '../../state/stream';
import { FileButton } from './FileButton';
import { Faults } from './GaitFields';
import { useSelectedEvent } from './selectedEvent';

const MOST_EVENTS = 200;
/** Bounds of samples read from a file; those of the rig file. */
const SERIES = {
  shake: { limit: 200, unit: 'm/s²' },
  recorded: { limit: 1e7, unit: 'N·m' },
} as const;

/** The run of knocks, loads and waves: added at the playhead, each with its numbers; blocks are dragged on the ribbon. */
export function SequenceFields() {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const mass = useShown()?.mass ?? 1;
  const height = useShown()?.centreOfMass[2] ?? 0.3;
  const { sequence, duration } = rig.jobs;
  const add = (kind: DisturbanceKind): void => {
    const isSea = kind === 'waves' || kind === 'sea';
    const at = isSea ? 0 : Math.min(Number(stream.seconds.toFixed(2)), duration);
    const made = firstDisturbance(kind, at, mass, Number(height.toFixed(2)));
    const fitted = isSea ? ({ ...made, duration } as Disturbance) : made;
    edit(`Add: ${labelOf(fitted)}`, (before) => ({ ...before, jobs: addToSequence(before.jobs, fitted) }));
    useSelectedEvent.setState({ index: sequence.length });
  };
  return (
    <Group title="Sequence">
      <p className="aside">
        {sequence.length === 0
          ? 'Nothing happens to the rig but its gait. Add a knock, a load or a wave at the playhead.'
          : 'Drag a block on the ribbon to move it, its end to stretch it; arrow keys do the same.'}
      </p>
      {sequence.map((event, index) => (
        // Two events may be equal in everything, so their place is their name.
        // biome-ignore lint/suspicious/noArrayIndexKey: see above
        <EventFields key={`${index}-${event.kind}`} event={event} index={index} />
      ))}
      {sequence.length < MOST_EVENTS && (
        <Choice<DisturbanceKind>
          label="Add to the run"
          options={kindsFor(rig).map((value) => ({ value, label: optionWords(value) }))}
          value={undefined}
          isReadOnly={isReadOnly}
          onChange={add}
        />
      )}
    </Group>
  );
}

function EventFields({ event, index }: { readonly event: Disturbance; readonly index: number }) {
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isOpen = useSelectedEvent((selected) => selected.index === index);
  const name = labelOf(event);
  const id = `event-${index}`;
  return (
    <div className="event" data-open={isOpen || undefined}>
      <div className="event-head">
        <button
          type="button"
          aria-expanded={isOpen}
          aria-controls={id}
          onClick={() => useSelectedEvent.setState({ index: isOpen ? undefined : index })}
        >
          {name} <span className="aside">at {event.time.toFixed(2)} s</span>
        </button>
        <button
          type="button"
          className="quiet"
          disabled={isReadOnly}
          aria-label={`Take out: ${name}, ${index + 1}`}
          onClick={() =>
            edit(`Take out: ${name}`, (before) => ({
              ...before,
              jobs: removeFromSequence(before.jobs, index),
            }))
          }
        >
          Take out
        </button>
      </div>
      <div id={id} hidden={!isOpen}>
        {isOpen && (
          <>
            <RigFields path={['jobs', 'sequence', index]} hidesKind />
            {(event.kind === 'shake' || event.kind === 'recorded') && (
              <SeriesFile event={event} index={index} isReadOnly={isReadOnly} />
            )}
          </>
        )}
      </div>
    </div>
  );
}

type Series = Extract<Disturbance, { kind: 'shake' | 'recorded' }>;

function SeriesFile(props: { readonly event: Series; readonly index: number; readonly isReadOnly: boolean }) {
  const { event, index, isReadOnly } = props;
  const edit = useDocument((document) => document.edit);
  const [fault, setFault] = useState<string>();
  const { limit, unit } = SERIES[event.kind];
  const samples = event.kind === 'shake' ? event.acceleration : event.moment;
  const take = (text: string): void => {
    const file = readSeries(text, event.interval, limit, unit);
    if (file.kind === 'refused') {
      setFault(file.sentence);
      return;
    }
    setFault(undefined);
    const { interval, values } = file;
    const next: Disturbance =
      event.kind === 'shake'
        ? { ...event, interval, acceleration: [...values] }
        : { ...event, interval, moment: [...values] };
    edit('Samples from a file', (before) => ({
      ...before,
      jobs: replaceInSequence(before.jobs, index, next),
    }));
  };
  return (
    <>
      <p className="aside">
        {samples.length} samples in {unit}, {((samples.length - 1) * event.interval).toFixed(2)} s.
      </p>
      <FileButton label={`Read ${unit} over time from CSV`} isReadOnly={isReadOnly} onText={take} />
      <Faults sentences={fault === undefined ? [] : [fault]} />
    </>
  );
}
