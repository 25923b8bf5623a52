import { useEffect, useId, useRef, useState } from 'react';
import { DEMONSTRATIONS } from '../../core/rig';
import { TextField } from '../fields/TextField';
import { Dialog } from '../sheet/Dialog';
import { useDocument } from '../state/document';
import { openFile, openFromBrowser, openRig, rigStore, saveToBrowser, saveToFile } from './keeping';

interface KeptName {
  readonly name: string;
  readonly savedAt: number;
}

/** Save and open: in this browser, as a file, or one of the rigs that come with the program. */
export function FilesDialog({ onClose }: { readonly onClose: () => void }) {
  const rig = useDocument((document) => document.rig);
  const isDirty = useDocument((document) => document.isDirty);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const [kept, setKept] = useState<readonly KeptName[]>([]);

  const refresh = (): void => {
    rigStore.names().then(setKept, () => setKept([]));
  };
  useEffect(refresh, []);

  const save = async (): Promise<void> => {
    await saveToBrowser();
    refresh();
  };
  const open = async (name: string): Promise<void> => {
    await openFromBrowser(name);
    onClose();
  };
  const remove = async (name: string): Promise<void> => {
    await rigStore.remove(name);
    refresh();
  };

  return (
    <Dialog title="Rigs" onClose={onClose}>
      <section>
        <h3>This rig</h3>
        <TextField
          label="Name"
          value={rig.name}
          longest={80}
          isReadOnly={isReadOnly}
          onChange={(name) => edit('Name the rig', (before) => ({ ...before, name }))}
        />
        <p className="aside">
          {isReadOnly
            ? 'Saved by a newer program: it can be looked at, not changed.'
            : isDirty
              ? 'Changed since it was last saved.'
              : 'No change that is not saved.'}
        </p>
        <div className="dialog-row">
          <button type="button" className="strong" disabled={isReadOnly} onClick={save}>
            Save in this browser
          </button>
          <button type="button" onClick={saveToFile}>
            Save to a file
          </button>
        </div>
      </section>
      <section>
        <h3>Open</h3>
        <FileInput onOpened={onClose} />
        {kept.length > 0 && <h4>Kept in this browser</h4>}
        <ul className="rig-list">
          {kept.map(({ name, savedAt }) => (
            <li key={name}>
              <button type="button" onClick={() => open(name)}>
                <b>{name}</b>
                <small>
                  {new Date(savedAt).toLocaleString('en-GB', { dateStyle: 'medium', timeStyle: 'short' })}
                </small>
              </button>
              <button
                type="button"
                className="quiet"
                aria-label={`Delete ${name}`}
                onClick={() => remove(name)}
              >
                Delete
              </button>
            </li>
          ))}
        </ul>
        <h4>That come with the program</h4>
        <ul className="rig-list">
          {DEMONSTRATIONS.map((demonstration) => (
            <li key={demonstration.file}>
              <button
                type="button"
                onClick={() => {
                  openRig(demonstration.rig, false);
                  onClose();
                }}
              >
                <b>{demonstration.rig.name}</b>
                <small>{demonstration.rig.jobs.name}</small>
              </button>
            </li>
          ))}
        </ul>
      </section>
    </Dialog>
  );
}

function FileInput({ onOpened }: { readonly onOpened: () => void }) {
  const id = useId();
  const input = useRef<HTMLInputElement>(null);
  const take = async (files: FileList | null): Promise<void> => {
    const file = files?.[0];
    if (!file) return;
    await openFile(file);
    onOpened();
  };
  return (
    <div className="dialog-row">
      <button type="button" onClick={() => input.current?.click()}>
        Open a file
      </button>
      <label className="unseen" htmlFor={id}>
        Rig file
      </label>
      <input
        ref={input}
        id={id}
        className="unseen"
        type="file"
        tabIndex={-1}
        accept=".json,application/json"
        onChange={(event) => take(event.target.files)}
      />
      <span className="aside">or drop one anywhere on the page</span>
    </div>
  );
}
