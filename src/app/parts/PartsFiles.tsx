import { useId, useRef } from 'react';
import { PART_LISTS } from '../../core/rig';
import { Group } from '../sheet/Group';
import { openPartsFile, savePartsToFile, useOwnParts } from './ownParts';

/** One's own parts out to a file for others, and those of others in beside one's own. */
export function PartsFiles() {
  const id = useId();
  const input = useRef<HTMLInputElement>(null);
  const count = useOwnParts(({ parts }) => PART_LISTS.reduce((sum, list) => sum + parts[list].length, 0));
  const take = async (field: HTMLInputElement): Promise<void> => {
    const file = field.files?.[0];
    if (file) await openPartsFile(file);
    // The same file may be chosen again.
    field.value = '';
  };
  return (
    <Group title="Shared as a file">
      <div className="parts-files">
        <button type="button" disabled={count === 0} onClick={savePartsToFile}>
          Save my parts to a file
        </button>
        <button type="button" onClick={() => input.current?.click()}>
          Take parts in from a file
        </button>
        <label className="unseen" htmlFor={id}>
          Parts file
        </label>
        <input
          ref={input}
          id={id}
          className="unseen"
          type="file"
          tabIndex={-1}
          accept=".json,application/json"
          onChange={(event) => void take(event.currentTarget)}
        />
      </div>
      <p className="aside">
        {count === 0 ? 'None of your own yet.' : `${count} of your own, kept in this browser.`} Motors,
        servos, wheels and bearings; a file of parts is checked as a whole before any is taken in.
      </p>
    </Group>
  );
}
