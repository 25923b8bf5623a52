import 'fake-indexeddb/auto';
import { IDBFactory } from 'fake-indexeddb';
import { openDB } from 'idb';
import { beforeEach, describe, expect, it } from 'vitest';
import { fileNameFor } from '../../../src/app/files/offerFile';
import { openRigStore, rigToText } from '../../../src/app/files/rigStore';
import { PACER, STRIDER } from '../../../src/core/rig';

beforeEach(() => {
  globalThis.indexedDB = new IDBFactory();
});

describe('rigs kept in the browser', () => {
  it('come back as they were saved, newest first', async () => {
    const store = openRigStore();
    expect(await store.save(STRIDER, 1)).toEqual({ kind: 'saved' });
    expect(await store.save(PACER, 2)).toEqual({ kind: 'saved' });
    expect((await store.names()).map(({ name }) => name)).toEqual(['Pacer', 'Strider']);
    const loaded = await store.load('Strider');
    expect(loaded).toEqual({ kind: 'loaded', rig: STRIDER });
    await store.remove('Strider');
    expect(await store.load('Strider')).toEqual({ kind: 'missing' });
  });

  it('fall back to the older text when the newer cannot be read', async () => {
    const store = openRigStore();
    await store.save(STRIDER, 1);
    const db = await openDB('tiltwright', 1);
    await db.put('rigs', { name: 'Strider', text: '{"format"', previous: rigToText(STRIDER), savedAt: 2 });
    db.close();
    expect(await store.load('Strider')).toEqual({ kind: 'loaded', rig: STRIDER });
  });

  it('say why when neither can be read', async () => {
    const store = openRigStore();
    await store.save(STRIDER, 1);
    const db = await openDB('tiltwright', 1);
    await db.put('rigs', { name: 'Strider', text: '{"format"', savedAt: 2 });
    db.close();
    const loaded = await store.load('Strider');
    expect(loaded.kind).toBe('failed');
    expect(loaded.kind === 'failed' && loaded.sentence).toContain(
      '"Strider" is kept here but cannot be read',
    );
  });

  it('answer a closed storage with a sentence and an offer of a file, and throw nothing', async () => {
    globalThis.indexedDB = {
      open: () => {
        throw new Error('storage is closed');
      },
    } as unknown as IDBFactory;
    const store = openRigStore();
    const saved = await store.save(STRIDER, 1);
    expect(saved.kind).toBe('failed');
    expect(saved.kind === 'failed' && saved.sentence).toContain('save it to a file instead');
  });

  it('keep one draft and let it go', async () => {
    const store = openRigStore();
    expect(await store.loadDraft()).toBeUndefined();
    await store.keepDraft(PACER, 1);
    expect(await store.loadDraft()).toEqual(PACER);
    await store.keepDraft(undefined, 2);
    expect(await store.loadDraft()).toBeUndefined();
  });
});

describe('file names', () => {
  it('hold only what every disk takes', () => {
    expect(fileNameFor('Strider: 2/3 "new"', 'csv')).toBe('strider-2-3-new.csv');
    expect(fileNameFor('///', 'csv')).toBe('rig.csv');
  });
});
