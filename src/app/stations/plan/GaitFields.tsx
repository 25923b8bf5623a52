import { useState } from 'react';
import { legLabels } from '../../../core/physics';
import { readKeyframes, writeKeyframes } from '../../../core/planning';
import type { Gait } from '../../../core/rig';
import { RigFields, RigKind } from '../../fields/RigFields';
import { fileNameFor, offerFile } from '../../files/offerFile';
import { useDocument } from '../../state/document';
import { FileButton } from './FileButton';
import { Fold } from './Fold';

/** What the feet do: stand, a pattern with its parameters, or keyframes read from a file. */
export function GaitFields() {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const [faults, setFaults] = useState<readonly string[]>([]);
  if (rig.body.kind !== 'legged') return null;
  const { legs } = rig.body;
  const { gait } = rig.jobs;
  const put = (label: string, next: Gait): void =>
    edit(label, (before) => ({ ...before, jobs: { ...before.jobs, gait: next } }));
  const take = (text: string): void => {
    const file = readKeyframes(text, legs);
    if (file.kind === 'refused') setFaults(file.refusals.map(({ sentence }) => sentence));
    else {
      setFaults([]);
      put('Keyframes from a file', file.gait);
    }
  };
  return (
    <Fold title="Gait" isOpenAtFirst>
      <RigKind path={['jobs', 'gait']} label="On its feet" options={['stand', 'pattern']} />
      {gait.kind === 'keyframes' ? (
        <>
          <p className="aside">
            {gait.times.length} keyframes over {((gait.times.at(-1) ?? 0) - (gait.times[0] ?? 0)).toFixed(2)}{' '}
            s, read from a file.
          </p>
          <button
            type="button"
            className="wide"
            onClick={() =>
              offerFile(
                fileNameFor(`${rig.name} keyframes`, 'csv'),
                writeKeyframes(gait, legLabels(legs)),
                'text/csv',
              )
            }
          >
            Keyframes as CSV
          </button>
        </>
      ) : (
        <RigFields path={['jobs', 'gait']} hidesKind />
      )}
      <FileButton label="Read keyframes from CSV" isReadOnly={isReadOnly} onText={take} />
      <p className="aside">Time, then x, y, z of each sole: left before right, front before back.</p>
      <Faults sentences={faults} />
    </Fold>
  );
}

/** What was wrong with a file; nothing of it was taken. */
export const Faults = ({ sentences }: { readonly sentences: readonly string[] }) =>
  sentences.length === 0 ? null : (
    <div className="file-faults" role="alert">
      {sentences.slice(0, 5).map((sentence) => (
        <p key={sentence}>{sentence}</p>
      ))}
    </div>
  );
