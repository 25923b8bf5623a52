/** A drag of a handle from press to release: one step of undo, and the number beside the pointer. */
import { invalidate } from '@react-three/fiber';
import { type Matrix4, type PerspectiveCamera, Vector2, Vector3 } from 'three';
import { formatQuantity } from '../../core/units';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { stream } from '../state/stream';
import { angleInPlane, clamp, placeOnLine, type Ray, snap, unwrapAngle } from './dragMaths';
import type { Handle } from './handleTypes';

export interface DragEnds {
  readonly camera: PerspectiveCamera;
  readonly canvas: HTMLElement;
  /** From the renderer's axes into the frame of the handle, as it stood when the drag began. */
  readonly inverse: Matrix4;
  readonly controls: { enabled: boolean } | null;
}

/** What is shown beside the pointer while something is dragged. */
export interface DragNote {
  readonly text: string;
  /** CSS pixels from the left and top of the stage. */
  readonly x: number;
  readonly y: number;
}

type NoteListener = (note: DragNote | undefined) => void;
const listeners = new Set<NoteListener>();

export function onDragNote(listener: NoteListener): () => void {
  listeners.add(listener);
  return () => {
    listeners.delete(listener);
  };
}

const tell = (note: DragNote | undefined): void => {
  for (const listener of listeners) listener(note);
};

/** A handle's value in words: its name, the number in the unit chosen for it, and the unit. */
const describeValue = (handle: Pick<Handle, 'info'>, value: number): string =>
  `${handle.info.label} ${formatQuantity(value, handle.info.dimension, useSession.getState().units[handle.info.dimension], 4)}`;

/** The nearest value a handle may take. */
export const settle = (handle: Handle, value: number): number =>
  clamp(snap(value, handle.step), handle.info.min, handle.info.max);

let dragsUnderWay = 0;

export const isDragging = (): boolean => dragsUnderWay > 0;

/** Follows a press on a grip until it is released or taken away. */
export function beginDrag(handle: Handle, press: PointerEvent, ends: DragEnds): void {
  const { canvas, controls } = ends;
  const documentState = useDocument.getState();
  if (documentState.isReadOnly) {
    showReason(press, canvas, 'This rig was made by a newer version and can only be looked at.');
    return;
  }
  const startOf = placeOf(handle, rayOf(press, ends), undefined);
  if (startOf === undefined) return;
  let last = startOf;
  if (controls) controls.enabled = false;
  dragsUnderWay += 1;
  stream.pause();
  documentState.begin(handle.info.label);

  const follow = (event: PointerEvent): void => {
    if (event.pointerId !== press.pointerId) return;
    const now = placeOf(handle, rayOf(event, ends), last);
    if (now !== undefined) last = now;
    const gain = handle.kind === 'slide' ? handle.gain : 1;
    const value = settle(handle, handle.value + gain * (last - startOf));
    useDocument.getState().edit(handle.info.label, (rig) => handle.write(rig, value));
    noteAt(event, canvas, describeValue(handle, value));
  };
  const finish = (isKept: boolean): void => {
    removeEventListener('pointermove', follow);
    removeEventListener('pointerup', release);
    removeEventListener('pointercancel', takeAway);
    removeEventListener('keydown', giveUp, true);
    if (controls) controls.enabled = true;
    dragsUnderWay -= 1;
    if (isKept) useDocument.getState().commit();
    else useDocument.getState().cancel();
    tell(undefined);
    // The body goes where the new motion has it.
    invalidate();
  };
  const release = (event: PointerEvent): void => {
    if (event.pointerId === press.pointerId) finish(true);
  };
  const takeAway = (event: PointerEvent): void => {
    if (event.pointerId === press.pointerId) finish(false);
  };
  const giveUp = (event: KeyboardEvent): void => {
    if (event.key !== 'Escape') return;
    event.stopPropagation();
    finish(false);
  };
  addEventListener('pointermove', follow);
  addEventListener('pointerup', release);
  addEventListener('pointercancel', takeAway);
  addEventListener('keydown', giveUp, true);
  noteAt(press, canvas, describeValue(handle, handle.value));
}

/** Where the pointer stands on a handle's line (m) or arc (rad), nearest to where it was. */
function placeOf(handle: Handle, ray: Ray, near: number | undefined): number | undefined {
  if (handle.kind === 'slide') return placeOnLine(ray, handle.at, handle.axis);
  const angle = angleInPlane(ray, handle.centre, handle.normal, handle.zero);
  return angle === undefined ? undefined : unwrapAngle(angle, near ?? (handle.isAbsolute ? handle.value : 0));
}

/** The pointer's ray in the frame of the handle. */
function rayOf(event: PointerEvent, { camera, canvas, inverse }: DragEnds): Ray {
  const box = canvas.getBoundingClientRect();
  const at = new Vector2(
    ((event.clientX - box.left) / box.width) * 2 - 1,
    1 - ((event.clientY - box.top) / box.height) * 2,
  );
  const origin = new Vector3().setFromMatrixPosition(camera.matrixWorld);
  const direction = new Vector3(at.x, at.y, 0.5).unproject(camera).sub(origin).normalize();
  origin.applyMatrix4(inverse);
  direction.transformDirection(inverse);
  return {
    origin: [origin.x, origin.y, origin.z],
    direction: [direction.x, direction.y, direction.z],
  };
}

function noteAt(event: PointerEvent, canvas: HTMLElement, text: string): void {
  const box = canvas.getBoundingClientRect();
  tell({ text, x: event.clientX - box.left, y: event.clientY - box.top });
}

/** How long a reason for not dragging stays, ms. */
const REASON_STAYS = 2500;

function showReason(event: PointerEvent, canvas: HTMLElement, text: string): void {
  noteAt(event, canvas, text);
  setTimeout(() => tell(undefined), REASON_STAYS);
}
