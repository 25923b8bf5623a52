import type { Payload } from '../../../core/rig';
import { RigFields } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';

const NEW_PAYLOAD: Payload = { name: 'Ballast', mass: 0.1, size: [0.04, 0.04, 0.03], position: [0, 0, 0.3] };
const MOST_PAYLOADS = 64;

/** Boxes carried by the body: battery, electronics, ballast. */
export function PayloadFields() {
  const payloads = useDocument((document) => document.rig.payloads);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const select = useSession((session) => session.select);

  const add = (): void => {
    edit('Add a payload', (rig) => ({ ...rig, payloads: [...rig.payloads, NEW_PAYLOAD] }));
    select({ kind: 'payload', index: payloads.length });
  };
  const remove = (index: number): void => {
    edit('Take a payload off', (rig) => ({ ...rig, payloads: rig.payloads.filter((_, k) => k !== index) }));
    select({ kind: 'none', index: 0 });
  };

  return (
    <>
      {payloads.map((payload, index) => (
        <Group
          // Payloads have no name of their own that is sure to differ.
          // biome-ignore lint/suspicious/noArrayIndexKey: see above
          key={index}
          title={payload.name}
          aside={
            <button type="button" className="quiet" disabled={isReadOnly} onClick={() => remove(index)}>
              Take off
            </button>
          }
        >
          <RigFields path={['payloads', index]} />
        </Group>
      ))}
      <button
        type="button"
        className="wide"
        disabled={isReadOnly || payloads.length >= MOST_PAYLOADS}
        onClick={add}
      >
        Add a payload
      </button>
    </>
  );
}
