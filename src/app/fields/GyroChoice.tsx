import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { Choice } from './Choice';

/** Which gyro the fields show, and whether an edit goes to all that are like it. */
export function GyroChoice() {
  const gyros = useDocument((document) => document.rig.array.gyros);
  const selection = useSession((session) => session.selection);
  const select = useSession((session) => session.select);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const setEachOnItsOwn = useSession((session) => session.setEachOnItsOwn);
  return (
    <div className="reach">
      <Choice
        label="A change reaches"
        options={[
          { value: 'all', label: `all ${gyros.length} alike` },
          { value: 'one', label: 'each on its own' },
        ]}
        value={isEachOnItsOwn ? 'one' : 'all'}
        onChange={(reach) => setEachOnItsOwn(reach === 'one')}
      />
      {isEachOnItsOwn && (
        <Choice
          label="Gyro"
          options={gyros.map((gyro, value) => ({ value, label: gyro.name }))}
          value={selection.kind === 'gyro' ? selection.index : 0}
          onChange={(index) => select({ kind: 'gyro', index })}
        />
      )}
    </div>
  );
}
