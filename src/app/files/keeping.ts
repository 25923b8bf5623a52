/** Saving, opening and the draft: what stands between the document and the browser's storage. */
import { LARGEST_RIG_FILE, RIG_VERSION, type Rig, readRig, readRigText } from '../../core/rig';
import { useDocument } from '../state/document';
import { useNotices } from '../state/notices';
import { fileNameFor, offerFile } from './offerFile';
import { openRigStore, rigToText } from './rigStore';

export const rigStore = openRigStore();

const LAST_OPENED = 'tiltwright-last-rig';
const DRAFT_DELAY = 600;

const show = (notice: Parameters<ReturnType<typeof useNotices.getState>['show']>[0]): void =>
  useNotices.getState().show(notice);

const rememberLast = (name: string): void => {
  try {
    localStorage.setItem(LAST_OPENED, name);
  } catch {
    // Without it the next start opens the demonstration rig; the kept rigs are still in their list.
  }
};

/** Keeps the rig in this browser under its name. */
export async function saveToBrowser(): Promise<void> {
  const { rig, isReadOnly } = useDocument.getState();
  if (isReadOnly) return;
  const saved = await rigStore.save(rig, Date.now());
  if (saved.kind === 'failed') {
    show({
      id: 'save',
      kind: 'fault',
      sentences: [saved.sentence],
      actions: [{ label: 'Save to a file', run: saveToFile }],
    });
    return;
  }
  if (useDocument.getState().rig === rig) {
    useDocument.getState().markSaved();
    await rigStore.keepDraft(undefined, Date.now()).catch(() => undefined);
  }
  rememberLast(rig.name);
  show({ id: 'save', kind: 'done', sentences: [`"${rig.name}" is kept in this browser.`] });
  // Asked for only now: before anything was saved there was nothing to protect.
  await navigator.storage?.persist?.().catch(() => false);
}

/** Offers the rig as a file. */
export function saveToFile(): void {
  const { rig } = useDocument.getState();
  offerFile(fileNameFor(rig.name, 'rig.json'), rigToText(rig), 'application/json');
}

/** Makes a rig the document; what was there can be had back by undo. */
export function openRig(rig: Rig, isKept: boolean): void {
  useDocument.getState().open(rig);
  if (isKept) rememberLast(rig.name);
  useNotices.getState().dismiss('open');
}

export async function openFromBrowser(name: string): Promise<void> {
  const loaded = await rigStore.load(name);
  if (loaded.kind === 'loaded') openRig(loaded.rig, true);
  else
    show({
      id: 'open',
      kind: 'fault',
      sentences: [loaded.kind === 'missing' ? `"${name}" is not kept here any more.` : loaded.sentence],
    });
}

/** Reads a file and makes it the document, or says why not and leaves everything as it is. */
export async function openFile(file: File): Promise<void> {
  const unchanged = 'The rig on screen is unchanged.';
  const refuse = (sentences: readonly string[]): void =>
    show({ id: 'open', kind: 'fault', sentences: [`${file.name} was not opened.`, ...sentences, unchanged] });

  if (file.size > LARGEST_RIG_FILE) {
    const megabytes = (bytes: number): string => `${(bytes / 1024 / 1024).toFixed(1)} MB`;
    return refuse([
      `The file is ${megabytes(file.size)}; a rig file is at most ${megabytes(LARGEST_RIG_FILE)}.`,
    ]);
  }
  let text: string;
  try {
    text = await file.text();
  } catch {
    return refuse(['The file could not be read from where it is.']);
  }
  const read = readRigText(text);
  if (read.kind === 'read') {
    openRig(read.rig, false);
    if (read.migratedFrom !== undefined) {
      show({
        id: 'open',
        kind: 'done',
        sentences: [
          `"${read.rig.name}" was version ${read.migratedFrom}; it is saved as version ${RIG_VERSION} from now on.`,
        ],
      });
    }
    return;
  }
  if (read.kind === 'refused') return refuse(read.refusals.map((refusal) => refusal.sentence));
  const asIs = readAsThisVersion(text);
  show({
    id: 'open',
    kind: 'fault',
    sentences: [`${file.name} was not opened.`, read.sentence, unchanged],
    ...(asIs ? { actions: [{ label: 'Look at it, unchangeable', run: () => openToLookAt(asIs) }] } : {}),
  });
}

/** A newer document that happens to hold nothing this program does not know can at least be looked at. */
function readAsThisVersion(text: string): Rig | undefined {
  const read = readRig({ ...(JSON.parse(text) as object), version: RIG_VERSION });
  return read.kind === 'read' ? read.rig : undefined;
}

function openToLookAt(rig: Rig): void {
  useDocument.getState().open(rig, { isReadOnly: true });
  useNotices.getState().dismiss('open');
}

/**
 * Brings back what was there at the last visit: the unsaved draft if there is one, else the rig last saved.
 * Leaves the demonstration rig where there is neither.
 */
export async function restoreLast(): Promise<void> {
  try {
    const draft = await rigStore.loadDraft();
    if (draft) return useDocument.getState().open(draft, { isDirty: true, forgetsHistory: true });
    const name = localStorage.getItem(LAST_OPENED);
    const loaded = name ? await rigStore.load(name) : undefined;
    if (loaded?.kind === 'loaded') useDocument.getState().open(loaded.rig, { forgetsHistory: true });
    else if (loaded?.kind === 'failed') show({ id: 'open', kind: 'fault', sentences: [loaded.sentence] });
  } catch {
    // No storage here: the app works all the same, and saving will say that it cannot.
  }
}

/** Keeps a draft of unsaved work, so that a closed page loses nothing. */
export function keepDrafts(): void {
  let timer: ReturnType<typeof setTimeout> | undefined;
  const keep = (): void => {
    clearTimeout(timer);
    timer = undefined;
    const { rig, isDirty, isReadOnly } = useDocument.getState();
    if (isReadOnly) return;
    rigStore.keepDraft(isDirty ? rig : undefined, Date.now()).catch(() => undefined);
  };
  useDocument.subscribe((now, before) => {
    if (now.rig === before.rig && now.isDirty === before.isDirty) return;
    clearTimeout(timer);
    timer = setTimeout(keep, DRAFT_DELAY);
  });
  document.addEventListener('visibilitychange', () => {
    if (document.visibilityState === 'hidden' && timer !== undefined) keep();
  });
}
