/** The user's own parts as the screen has them: loaded once, every change written through. */
import { create } from 'zustand';
import {
  dropPart,
  keepPart,
  LARGEST_PARTS_FILE,
  mergeParts,
  NO_PARTS,
  type PartList,
  type PartOf,
  type PartsFile,
  partsToText,
  readPartsText,
} from '../../core/rig';
import { offerFile } from '../files/offerFile';
import { useNotices } from '../state/notices';
import { openPartsStore, type PartsStore } from './partsStore';

interface OwnPartsState {
  readonly parts: PartsFile;
  /** `failed`: what is kept could not be read, and is not written over. */
  readonly state: 'unread' | 'ready' | 'failed';
}

export const useOwnParts = create<OwnPartsState>()(() => ({ parts: NO_PARTS, state: 'unread' }));

const show = (kind: 'done' | 'fault', sentences: readonly string[]): void =>
  useNotices.getState().show({ id: 'parts', kind, sentences });

let store: PartsStore | undefined;
const theStore = (): PartsStore => {
  store ??= openPartsStore();
  return store;
};

/** Loads what is kept, once. */
export async function loadOwnParts(): Promise<void> {
  if (useOwnParts.getState().state !== 'unread') return;
  const loaded = await theStore().load();
  if (useOwnParts.getState().state !== 'unread') return;
  if (loaded.kind === 'loaded') useOwnParts.setState({ parts: loaded.parts, state: 'ready' });
  else {
    useOwnParts.setState({ state: 'failed' });
    show('fault', [loaded.sentence]);
  }
}

/** On screen at once; if the browser does not keep it, it stays on screen and the sentence says so. */
async function change(parts: PartsFile, done: string): Promise<void> {
  const { state } = useOwnParts.getState();
  useOwnParts.setState({ parts });
  if (state === 'failed') {
    return show('fault', [
      `${done} What is kept in this browser cannot be read and is left as it is: save to a file.`,
    ]);
  }
  const saved = await theStore().save(parts);
  if (saved.kind === 'saved') show('done', [done]);
  else show('fault', [saved.sentence]);
}

export const keepOwnPart = <L extends PartList>(list: L, part: PartOf<L>): Promise<void> =>
  change(keepPart(useOwnParts.getState().parts, list, part), `"${part.name}" is among your parts.`);

export const dropOwnPart = (list: PartList, name: string): Promise<void> =>
  change(dropPart(useOwnParts.getState().parts, list, name), `"${name}" is no longer among your parts.`);

export function savePartsToFile(): void {
  offerFile('my.parts.json', partsToText(useOwnParts.getState().parts), 'application/json');
}

/** Takes the parts of a file in beside one's own, or says why not and leaves everything as it is. */
export async function openPartsFile(file: File): Promise<void> {
  const refuse = (sentences: readonly string[]): void =>
    show('fault', [`${file.name} was not taken in.`, ...sentences, 'Your parts are unchanged.']);
  if (file.size > LARGEST_PARTS_FILE) {
    return refuse([
      `The file is larger than the ${LARGEST_PARTS_FILE / 1024 / 1024} MB a parts file may have.`,
    ]);
  }
  let text: string;
  try {
    text = await file.text();
  } catch {
    return refuse(['The file could not be read from where it is.']);
  }
  const read = readPartsText(text);
  if (read.kind === 'newer') return refuse([read.sentence]);
  if (read.kind === 'refused') return refuse(read.refusals.map(({ sentence }) => sentence));
  const merged = mergeParts(useOwnParts.getState().parts, read.parts);
  const again = readPartsText(partsToText(merged.parts));
  if (again.kind === 'refused') return refuse(again.refusals.map(({ sentence }) => sentence));
  const count = merged.added === 1 ? 'One part is' : `${merged.added} parts are`;
  await change(merged.parts, `${file.name}: ${count} new among your parts.`);
}
