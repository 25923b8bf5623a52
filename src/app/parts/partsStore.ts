/**
 * Parts of the user's own, kept in the browser as the text of their file: what is read back goes through the same gate
 * as a file from outside. A database of their own, so that rigs and parts may change their stores apart.
 */
import { type DBSchema, type IDBPDatabase, openDB } from 'idb';
import { NO_PARTS, type PartsFile, partsToText, readPartsText } from '../../core/rig';

/** While a newer text is not yet read back, `previous` still holds the older. */
interface KeptParts {
  readonly text: string;
  readonly previous?: string;
}

interface Kept extends DBSchema {
  parts: { key: string; value: KeptParts };
}

const DATABASE = 'tiltwright-parts';
const DATABASE_VERSION = 1;
const SHELF = 'own';

export type PartsSaved = { readonly kind: 'saved' } | { readonly kind: 'failed'; readonly sentence: string };
export type PartsLoaded =
  | { readonly kind: 'loaded'; readonly parts: PartsFile }
  | { readonly kind: 'failed'; readonly sentence: string };

export interface PartsStore {
  readonly load: () => Promise<PartsLoaded>;
  readonly save: (parts: PartsFile) => Promise<PartsSaved>;
}

const because = (error: unknown): string =>
  error instanceof Error && error.message ? error.message : String(error);

export function openPartsStore(): PartsStore {
  let opened: Promise<IDBPDatabase<Kept>> | undefined;
  const database = (): Promise<IDBPDatabase<Kept>> => {
    opened ??= openDB<Kept>(DATABASE, DATABASE_VERSION, {
      upgrade: (db) => {
        db.createObjectStore('parts');
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
    load: async () => {
      try {
        const kept = await (await database()).get('parts', SHELF);
        if (!kept) return { kind: 'loaded', parts: NO_PARTS };
        for (const text of [kept.text, kept.previous]) {
          const read = text === undefined ? undefined : readPartsText(text);
          if (read?.kind === 'read') return { kind: 'loaded', parts: read.parts };
        }
        const read = readPartsText(kept.text);
        const why =
          read.kind === 'newer' ? read.sentence : read.kind === 'refused' ? read.refusals[0]?.sentence : '';
        return { kind: 'failed', sentence: `Your parts are kept here but cannot be read. ${why ?? ''}` };
      } catch (error) {
        return {
          kind: 'failed',
          sentence: `Your parts could not be read from this browser: ${because(error)}.`,
        };
      }
    },

    save: async (parts) => {
      const text = partsToText(parts);
      const read = readPartsText(text);
      if (read.kind === 'refused') {
        return {
          kind: 'failed',
          sentence: `Your parts were not changed. ${read.refusals[0]?.sentence ?? ''}`,
        };
      }
      try {
        const db = await database();
        const old = await db.get('parts', SHELF);
        await db.put('parts', { text, ...(old ? { previous: old.text } : {}) }, SHELF);
        if ((await db.get('parts', SHELF))?.text !== text) {
          return {
            kind: 'failed',
            sentence: 'Your parts did not read back as they were written; the older are kept.',
          };
        }
        await db.put('parts', { text }, SHELF);
        return { kind: 'saved' };
      } catch (error) {
        return {
          kind: 'failed',
          sentence: `Your parts could not be kept in this browser (${because(error)}); save them to a file instead.`,
        };
      }
    },
  };
}
