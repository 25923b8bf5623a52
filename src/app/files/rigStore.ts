/**
 * Rigs kept in the browser under their names. A rig is kept as the text of its file, so what is read back goes
 * through the same gate as a file from outside.
 */
import { type DBSchema, type IDBPDatabase, openDB } from 'idb';
import { type Rig, readRigText } from '../../core/rig';

/** One kept rig. While a newer text is not yet read back, `previous` still holds the older. */
interface KeptRig {
  readonly name: string;
  readonly text: string;
  readonly previous?: string;
  /** ms since 1970. */
  readonly savedAt: number;
}

interface Kept extends DBSchema {
  rigs: { key: string; value: KeptRig };
  /** What is being worked on and not saved yet, under one fixed key. */
  drafts: { key: string; value: { readonly text: string; readonly changedAt: number } };
}

const DATABASE = 'tiltwright';
const DATABASE_VERSION = 1;
const DRAFT = 'draft';

export type Saved = { readonly kind: 'saved' } | { readonly kind: 'failed'; readonly sentence: string };

export type Loaded =
  | { readonly kind: 'loaded'; readonly rig: Rig }
  | { readonly kind: 'missing' }
  | { readonly kind: 'failed'; readonly sentence: string };

export interface RigStore {
  readonly names: () => Promise<readonly { readonly name: string; readonly savedAt: number }[]>;
  readonly save: (rig: Rig, now: number) => Promise<Saved>;
  readonly load: (name: string) => Promise<Loaded>;
  readonly remove: (name: string) => Promise<void>;
  readonly keepDraft: (rig: Rig | undefined, now: number) => Promise<void>;
  readonly loadDraft: () => Promise<Rig | undefined>;
}

export const rigToText = (rig: Rig): string => `${JSON.stringify(rig, undefined, 2)}\n`;

const because = (error: unknown): string =>
  error instanceof Error && error.message ? error.message : String(error);

export function openRigStore(): RigStore {
  let opened: Promise<IDBPDatabase<Kept>> | undefined;
  const database = (): Promise<IDBPDatabase<Kept>> => {
    opened ??= openDB<Kept>(DATABASE, DATABASE_VERSION, {
      upgrade: (db) => {
        db.createObjectStore('rigs', { keyPath: 'name' });
        db.createObjectStore('drafts');
      },
      terminated: () => {
        opened = undefined;
      },
    });
    opened.catch(() => {
      opened = undefined;
    });
    return opened;
  };

  return {
    names: async () =>
      (await (await database()).getAll('rigs'))
        .map(({ name, savedAt }) => ({ name, savedAt }))
        .toSorted((a, b) => b.savedAt - a.savedAt),

    save: async (rig, now) => {
      const text = rigToText(rig);
      try {
        const db = await database();
        const old = await db.get('rigs', rig.name);
        await db.put('rigs', {
          name: rig.name,
          text,
          savedAt: now,
          ...(old ? { previous: old.text } : {}),
        });
        const back = await db.get('rigs', rig.name);
        if (back?.text !== text || readRigText(back.text).kind !== 'read') {
          return {
            kind: 'failed',
            sentence: `"${rig.name}" did not read back as it was written; the older one is kept. Save it to a file instead.`,
          };
        }
        await db.put('rigs', { name: rig.name, text, savedAt: now });
        return { kind: 'saved' };
      } catch (error) {
        return {
          kind: 'failed',
          sentence: `"${rig.name}" could not be kept in this browser (${because(error)}). It is still on screen; save it to a file instead.`,
        };
      }
    },

    load: async (name) => {
      try {
        const kept = await (await database()).get('rigs', name);
        if (!kept) return { kind: 'missing' };
        for (const text of [kept.text, kept.previous]) {
          const read = text === undefined ? undefined : readRigText(text);
          if (read?.kind === 'read') return { kind: 'loaded', rig: read.rig };
        }
        const read = readRigText(kept.text);
        const sentence =
          read.kind === 'newer'
            ? read.sentence
            : read.kind === 'refused'
              ? (read.refusals[0]?.sentence ?? '')
              : '';
        return { kind: 'failed', sentence: `"${name}" is kept here but cannot be read. ${sentence}` };
      } catch (error) {
        return {
          kind: 'failed',
          sentence: `"${name}" could not be read from this browser: ${because(error)}.`,
        };
      }
    },

    remove: async (name) => (await database()).delete('rigs', name),

    keepDraft: async (rig, now) => {
      const db = await database();
      if (rig) await db.put('drafts', { text: rigToText(rig), changedAt: now }, DRAFT);
      else await db.delete('drafts', DRAFT);
    },

    loadDraft: async () => {
      const kept = await (await database()).get('drafts', DRAFT);
      const read = kept && readRigText(kept.text);
      return read?.kind === 'read' ? read.rig : undefined;
    },
  };
}
