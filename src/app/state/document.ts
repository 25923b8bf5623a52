/** The document: the rig and its jobs. Immutable, undoable, saved; nothing else in the app may hold a rig of its own. */
import { create } from 'zustand';
import { type Rig, STRIDER } from '../../core/rig';

/** One step that can be undone: what it was called, and the rig as it stood before. */
interface Step {
  readonly label: string;
  readonly rig: Rig;
}

export interface DocumentState {
  readonly rig: Rig;
  readonly past: readonly Step[];
  readonly future: readonly Step[];
  /** True from the first edit until the rig is saved. */
  readonly isDirty: boolean;
  /** A document made by a newer program may be looked at, not changed. */
  readonly isReadOnly: boolean;
  /** Changes the rig. Outside begin/commit each call is one step; inside, all calls together are one. */
  readonly edit: (label: string, change: (rig: Rig) => Rig) => void;
  /** Starts a drag: every edit until `commit` goes under one step. */
  readonly begin: (label: string) => void;
  readonly commit: () => void;
  /** Ends a drag by putting back the rig as it was at `begin`. */
  readonly cancel: () => void;
  readonly undo: () => void;
  readonly redo: () => void;
  /** Replaces the document; what was there before can be had back by undo. */
  readonly open: (rig: Rig, how?: OpenHow) => void;
  readonly markSaved: () => void;
}

export interface OpenHow {
  readonly isReadOnly?: boolean;
  readonly isDirty?: boolean;
  /** Start with an empty history, as on the first load. */
  readonly forgetsHistory?: boolean;
}

const LONGEST_HISTORY = 200;

const remember = (past: readonly Step[], step: Step): readonly Step[] => [
  ...past.slice(-(LONGEST_HISTORY - 1)),
  step,
];

export const createDocument = (first: Rig) =>
  create<DocumentState>()((set, get) => {
    /** The drag under way: its label and the rig as it was when it started. */
    let drag: Step | undefined;
    let saved: Rig = first;

    const settleDrag = (): void => {
      const finished = drag;
      drag = undefined;
      if (finished && finished.rig !== get().rig) {
        set((state) => ({ past: remember(state.past, finished), future: [] }));
      }
    };

    return {
      rig: first,
      past: [],
      future: [],
      isDirty: false,
      isReadOnly: false,

      edit: (label, change) => {
        const { rig, isReadOnly, past } = get();
        if (isReadOnly) return;
        const next = change(rig);
        if (next === rig) return;
        if (drag) set({ rig: next, isDirty: next !== saved });
        else set({ rig: next, past: remember(past, { label, rig }), future: [], isDirty: next !== saved });
      },

      begin: (label) => {
        settleDrag();
        drag = { label, rig: get().rig };
      },
      commit: settleDrag,
      cancel: () => {
        const started = drag;
        drag = undefined;
        if (started) set({ rig: started.rig, isDirty: started.rig !== saved });
      },

      undo: () => {
        settleDrag();
        const { past, future, rig, isReadOnly } = get();
        const step = past.at(-1);
        if (!step || isReadOnly) return;
        set({
          rig: step.rig,
          past: past.slice(0, -1),
          future: [...future, { label: step.label, rig }],
          isDirty: step.rig !== saved,
        });
      },
      redo: () => {
        settleDrag();
        const { past, future, rig } = get();
        const step = future.at(-1);
        if (!step) return;
        set({
          rig: step.rig,
          past: remember(past, { label: step.label, rig }),
          future: future.slice(0, -1),
          isDirty: step.rig !== saved,
        });
      },

      open: (rig, how = {}) => {
        settleDrag();
        if (!how.isDirty) saved = rig;
        set((state) => ({
          rig,
          isReadOnly: how.isReadOnly ?? false,
          isDirty: how.isDirty ?? false,
          past:
            how.forgetsHistory || how.isReadOnly
              ? []
              : remember(state.past, { label: `Open ${rig.name}`, rig: state.rig }),
          future: [],
        }));
      },
      markSaved: () => {
        saved = get().rig;
        set({ isDirty: false });
      },
    };
  });

/** The app's one document. */
export const useDocument = createDocument(STRIDER);
