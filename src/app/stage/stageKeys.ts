/** The stage by keyboard: arrows nudge what is selected, brackets go from part to part. */
import type { KeyboardEvent } from 'react';
import { useDocument } from '../state/document';
import { NOTHING_SELECTED, type Selection, useSession } from '../state/session';
import { settle } from './dragging';
import { handlesOf } from './handles';
import type { HandleKeys } from './handleTypes';
import { selectableParts } from './parts';

const NUDGES: Readonly<Record<string, readonly [keys: HandleKeys, sign: number]>> = {
  // Left is positive y.
  ArrowLeft: ['across', 1],
  ArrowRight: ['across', -1],
  ArrowUp: ['up', 1],
  ArrowDown: ['up', -1],
  PageUp: ['along', 1],
  PageDown: ['along', -1],
};

/** With shift held a nudge is this many steps. */
const LONG_NUDGE = 10;

/** Widths grow by the right arrow; only places go by the direction of the arrow. */
const isPlace = (selection: Selection): boolean => selection.kind === 'gyro' || selection.kind === 'payload';

function nudge(key: string, steps: number): boolean {
  const { selection, isEachOnItsOwn } = useSession.getState();
  const { rig, edit } = useDocument.getState();
  const { handles } = handlesOf(rig, selection, isEachOnItsOwn);
  const [keys, sign] = NUDGES[key] ?? [];
  if (!keys || !sign) return false;
  const find = (wanted: HandleKeys) => handles.find((handle) => handle.keys === wanted);
  // A foot has no height to change: up and down lengthen it instead.
  const handle = find(keys) ?? (keys === 'up' ? find('along') : undefined);
  if (!handle) return false;
  const direction = keys === 'across' && !isPlace(selection) ? -sign : sign;
  const value = settle(handle, handle.value + direction * steps * handle.step);
  edit(handle.info.label, (before) => handle.write(before, value));
  return true;
}

/** Goes to the part before or after the selected one. */
function selectNext(by: 1 | -1): void {
  const { selection, select } = useSession.getState();
  const parts = selectableParts(useDocument.getState().rig);
  const at = parts.findIndex((part) => part.kind === selection.kind && part.index === selection.index);
  const next = at < 0 ? (by > 0 ? 0 : parts.length - 1) : (at + by + parts.length) % parts.length;
  select(parts[next] ?? NOTHING_SELECTED);
}

/** A key held down is one step of undo, from its first press to its release. */
let isNudging = false;

export function onStageKeyDown(event: KeyboardEvent): void {
  if (event.ctrlKey || event.metaKey || event.altKey) return;
  if (event.key === '[' || event.key === ']') {
    selectNext(event.key === ']' ? 1 : -1);
    event.preventDefault();
    return;
  }
  if (event.key === 'Escape') {
    useSession.getState().select(NOTHING_SELECTED);
    return;
  }
  if (!(event.key in NUDGES)) return;
  if (!isNudging) {
    useDocument.getState().begin('Nudge');
    isNudging = true;
  }
  if (nudge(event.key, event.shiftKey ? LONG_NUDGE : 1)) event.preventDefault();
}

export function onStageKeyUp(): void {
  if (!isNudging) return;
  isNudging = false;
  useDocument.getState().commit();
}
