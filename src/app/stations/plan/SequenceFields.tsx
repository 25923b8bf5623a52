import type { Disturbance } from '../../../core/rig';
import { Choice } from '../../fields/Choice';
import { DISTURBANCE_KINDS, newDisturbance } from '../../fields/kindDefaults';
import { RigFields } from '../../fields/RigFields';
import { optionWords } from '../../fields/words';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';

type OfferedKind = (typeof DISTURBANCE_KINDS)[number];

const AFLOAT: readonly OfferedKind[] = ['waves', 'sea'];
const MOST_EVENTS = 200;

/** The run of knocks, loads and waves: each with its numbers, added and taken out by one tap. */
export function SequenceFields() {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isAfloat = rig.footing.kind === 'float';
  const offered = DISTURBANCE_KINDS.filter((kind) => isAfloat || !AFLOAT.includes(kind));

  const setSequence = (label: string, sequence: readonly Disturbance[]): void =>
    edit(label, (before) => ({ ...before, jobs: { ...before.jobs, sequence } }));

  return (
    <>
      {rig.jobs.sequence.map((event, index) => (
        <Group
          // Two events may be equal in everything, so their place is their name.
          // biome-ignore lint/suspicious/noArrayIndexKey: see above
          key={`${index}-${event.kind}`}
          title={optionWords(event.kind)}
          aside={
            <button
              type="button"
              className="quiet"
              disabled={isReadOnly}
              onClick={() =>
                setSequence(
                  'Take an event out',
                  rig.jobs.sequence.filter((_, k) => k !== index),
                )
              }
            >
              Take out
            </button>
          }
        >
          <RigFields path={['jobs', 'sequence', index]} hidesKind />
        </Group>
      ))}
      {rig.jobs.sequence.length < MOST_EVENTS && (
        <Group title="Add to the run">
          <Choice<OfferedKind>
            label="Event"
            options={offered.map((value) => ({ value, label: optionWords(value) }))}
            value={undefined}
            isReadOnly={isReadOnly}
            onChange={(kind) =>
              setSequence('Add an event', [...rig.jobs.sequence, newDisturbance(kind, rig)])
            }
          />
        </Group>
      )}
    </>
  );
}
