import { describe, expect, it } from 'vitest';
import { createDocument } from '../../../src/app/state/document';
import { PACER, type Rig, STRIDER } from '../../../src/core/rig';

const named = (name: string) => (rig: Rig) => ({ ...rig, name });

describe('the document', () => {
  it('takes each edit as one step and gives them back in turn', () => {
    const document = createDocument(STRIDER);
    document.getState().edit('a', named('A'));
    document.getState().edit('b', named('B'));
    expect(document.getState().isDirty).toBe(true);
    document.getState().undo();
    expect(document.getState().rig.name).toBe('A');
    document.getState().undo();
    expect(document.getState().rig).toBe(STRIDER);
    expect(document.getState().isDirty).toBe(false);
    document.getState().undo();
    expect(document.getState().rig).toBe(STRIDER);
    document.getState().redo();
    document.getState().redo();
    expect(document.getState().rig.name).toBe('B');
    expect(document.getState().future).toHaveLength(0);
  });

  it('puts a whole drag under one step', () => {
    const document = createDocument(STRIDER);
    document.getState().begin('drag');
    for (const name of ['1', '2', '3']) document.getState().edit('drag', named(name));
    expect(document.getState().past).toHaveLength(0);
    document.getState().commit();
    expect(document.getState().past).toHaveLength(1);
    document.getState().undo();
    expect(document.getState().rig).toBe(STRIDER);
  });

  it('leaves no step behind for a drag that changed nothing or was called off', () => {
    const document = createDocument(STRIDER);
    document.getState().begin('drag');
    document.getState().commit();
    expect(document.getState().past).toHaveLength(0);
    document.getState().begin('drag');
    document.getState().edit('drag', named('x'));
    document.getState().cancel();
    expect(document.getState().rig).toBe(STRIDER);
    expect(document.getState().past).toHaveLength(0);
    expect(document.getState().isDirty).toBe(false);
  });

  it('settles a drag under way before it undoes, so that nothing is half-undone', () => {
    const document = createDocument(STRIDER);
    document.getState().edit('first', named('first'));
    document.getState().begin('drag');
    document.getState().edit('drag', named('dragged'));
    document.getState().undo();
    expect(document.getState().rig.name).toBe('first');
  });

  it('forgets what was undone once something else is done', () => {
    const document = createDocument(STRIDER);
    document.getState().edit('a', named('A'));
    document.getState().undo();
    document.getState().edit('b', named('B'));
    document.getState().redo();
    expect(document.getState().rig.name).toBe('B');
  });

  it('gives back by undo what was there before another rig was opened', () => {
    const document = createDocument(STRIDER);
    document.getState().open(PACER);
    expect(document.getState().isDirty).toBe(false);
    document.getState().undo();
    expect(document.getState().rig).toBe(STRIDER);
  });

  it('changes nothing in a document that may only be looked at', () => {
    const document = createDocument(STRIDER);
    document.getState().open(PACER, { isReadOnly: true });
    document.getState().edit('a', named('A'));
    document.getState().undo();
    expect(document.getState().rig).toBe(PACER);
    document.getState().open(STRIDER);
    document.getState().edit('a', named('A'));
    expect(document.getState().rig.name).toBe('A');
  });

  it('knows again that it is saved when it is undone to what was saved', () => {
    const document = createDocument(STRIDER);
    document.getState().edit('a', named('A'));
    document.getState().markSaved();
    document.getState().edit('b', named('B'));
    expect(document.getState().isDirty).toBe(true);
    document.getState().undo();
    expect(document.getState().isDirty).toBe(false);
  });
});
