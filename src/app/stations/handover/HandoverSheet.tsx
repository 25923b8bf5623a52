import { type ReactNode, useEffect, useState } from 'react';
import {
  type Handover,
  type HandoverFile,
  type HandoverGroup,
  sheetBody,
  writeZip,
} from '../../../core/handover';
import { createHandoverMaker } from '../../../workers';
import { fileNameFor, offerFile } from '../../files/offerFile';
import { Group } from '../../sheet/Group';
import { SheetPage } from '../../sheetPage/SheetPage';
import { useDocument } from '../../state/document';
import { useNotices } from '../../state/notices';
import { startHandingOver, useHandoverAnswer } from './handoverAnswer';
import { drawAllPictures, drawPng, pngName, takeStage } from './pictures';
import './handover.css';

const GROUP_WORDS: Readonly<Record<HandoverGroup, string>> = {
  sheet: 'For the reviewer',
  firmware: 'For the firmware',
  model: 'For CAD and simulation',
  pictures: 'Pictures',
  rig: 'The rig itself',
};
const GROUPS = ['sheet', 'firmware', 'model', 'pictures', 'rig'] as const satisfies readonly HandoverGroup[];

const showSize = (bytes: number): string =>
  bytes < 1e6 ? `${Math.max(1, Math.round(bytes / 1000))} kB` : `${(bytes / 1e6).toFixed(1)} MB`;

const ending = (name: string): string => name.slice(name.lastIndexOf('.') + 1).toUpperCase();

const save = ({ name, bytes, type }: HandoverFile): void => offerFile(name, bytes.slice(), type);

/** Runs a save that may fail, and says so when it does. */
async function attempt(work: () => Promise<void>): Promise<void> {
  try {
    await work();
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    useNotices
      .getState()
      .show({ id: 'handover', kind: 'fault', sentences: [`That was not saved: ${reason}`] });
  }
}

const saveStage = (title: string): Promise<void> =>
  attempt(async () => offerFile(fileNameFor(`${title} stage`, 'png'), await takeStage(), 'image/png'));

const saveDrawn = ({ name, bytes }: HandoverFile): Promise<void> =>
  attempt(async () => offerFile(pngName(name), await drawPng(bytes), 'image/png'));

const saveAll = ({ files }: Handover, title: string): Promise<void> =>
  attempt(async () => {
    const drawn = await drawAllPictures(files, fileNameFor(`${title} stage`, 'png'));
    offerFile(
      fileNameFor(`${title} handover`, 'zip'),
      writeZip([...files, ...drawn]).slice(),
      'application/zip',
    );
  });

/** What do I give to the firmware, the CAD model, the reviewer? */
export function HandoverSheet() {
  const outcome = useHandoverAnswer((state) => state.outcome);
  const handover = useHandoverAnswer((state) => state.handover);
  const title = useDocument((document) => document.rig.name);
  const [isSheetOpen, setSheetOpen] = useState(false);
  useEffect(() => startHandingOver(createHandoverMaker()), []);

  if (outcome?.kind === 'refused') {
    return (
      <div className="plan-state" data-state="fails" role="status">
        <h3>
          <b className="word-fails">Nothing to hand over yet</b>
        </h3>
        {outcome.refusals.map(({ field, sentence }) => (
          <p key={field}>{sentence}</p>
        ))}
      </div>
    );
  }
  if (!handover) return <p className="waiting">Making the files…</p>;
  return (
    <>
      <Standing handover={handover} />
      <div className="handover-main">
        <button type="button" className="wide" onClick={() => setSheetOpen(true)}>
          Calculation sheet: read and print
        </button>
        <button type="button" className="wide" onClick={() => void saveAll(handover, title)}>
          All of it in one file
        </button>
      </div>
      {GROUPS.map((group) => (
        <FileGroup key={group} group={group} handover={handover} title={title} />
      ))}
      {isSheetOpen && (
        <SheetPage
          title={title}
          body={sheetBody(handover.sheet, handover.pictures)}
          onClose={() => setSheetOpen(false)}
        />
      )}
    </>
  );
}

/** Whether what goes out holds, in the sheet's own words. */
function Standing({ handover }: { readonly handover: Handover }) {
  const failing = handover.sheet.verdicts.filter(({ holds }) => !holds);
  if (failing.length === 0) {
    return (
      <div className="plan-state" role="status">
        <h3>Holds</h3>
        <p>There is a plan, and every line of the ledger has something to spare.</p>
      </div>
    );
  }
  return (
    <div className="plan-state" data-state="fails" role="status">
      <h3>
        <b className="word-fails">Fails</b>, and the sheet will say so
      </h3>
      {failing.map(({ sentence }) => (
        <p key={sentence}>{sentence}</p>
      ))}
      {handover.noPlan !== undefined && <p>There is no schedule to hand over; the rest can go out.</p>}
    </div>
  );
}

interface FileGroupProps {
  readonly group: HandoverGroup;
  readonly handover: Handover;
  readonly title: string;
}

function FileGroup({ group, handover, title }: FileGroupProps) {
  const files = handover.files.filter((file) => file.group === group);
  if (files.length === 0) return null;
  return (
    <Group title={GROUP_WORDS[group]}>
      <ul className="handover-files">
        {group === 'pictures' && (
          <FileRow purpose="the stage, as it is seen now" detail="as large as on this screen">
            <SaveButton word="PNG" of="the stage" onSave={() => void saveStage(title)} />
          </FileRow>
        )}
        {files.map((file) => (
          <FileRow
            key={file.name}
            purpose={file.purpose}
            detail={`${file.name}, ${showSize(file.bytes.length)}`}
          >
            {file.type === 'image/svg+xml' && (
              <SaveButton word="PNG" of={file.purpose} onSave={() => void saveDrawn(file)} />
            )}
            <SaveButton word={ending(file.name)} of={file.purpose} onSave={() => save(file)} />
          </FileRow>
        ))}
      </ul>
    </Group>
  );
}

interface FileRowProps {
  readonly purpose: string;
  readonly detail: string;
  readonly children: ReactNode;
}

function FileRow({ purpose, detail, children }: FileRowProps) {
  return (
    <li>
      <span>
        {purpose[0]?.toUpperCase()}
        {purpose.slice(1)}
        <small>{detail}</small>
      </span>
      {children}
    </li>
  );
}

interface SaveButtonProps {
  readonly word: string;
  readonly of: string;
  readonly onSave: () => void;
}

function SaveButton({ word, of, onSave }: SaveButtonProps) {
  return (
    <button type="button" onClick={onSave} aria-label={`Save as ${word}: ${of}`}>
      {word}
    </button>
  );
}
