import type { ThreeEvent } from '@react-three/fiber';
import { type Selection, useSession } from '../state/session';

interface Hit {
  readonly object: { readonly userData: Record<string, unknown> };
}

const isSame = (a: Selection, b: Selection): boolean => a.kind === b.kind && a.index === b.index;

/**
 * Which part a tap means: the nearest one under it, or, when that is already selected, the next one behind, so
 * that what lies inside the body can be reached by tapping again.
 */
export function partUnder(hits: readonly Hit[], selected: Selection): Selection | undefined {
  const parts: Selection[] = [];
  for (const hit of hits) {
    const part = hit.object.userData.part as Selection | undefined;
    if (part && !parts.some((p) => isSame(p, part))) parts.push(part);
  }
  const place = parts.findIndex((part) => isSame(part, selected));
  return parts[(place + 1) % parts.length];
}

/** A press that moved further than this was a drag of the view, px. */
const LONGEST_TAP = 6;

/** Handler for the group that holds all parts. */
export function selectTapped(event: ThreeEvent<MouseEvent>): void {
  if (event.delta > LONGEST_TAP) return;
  event.stopPropagation();
  const { selection, select } = useSession.getState();
  const part = partUnder(event.intersections, selection);
  if (part) select(part);
}

export const useIsChosen = (kind: Selection['kind'], index = 0): boolean =>
  useSession((state) => state.selection.kind === kind && (kind === 'hip' || state.selection.index === index));
