/**
 * The yard as the app sees it: opened and closed by the user, fed by snapshots from its worker, read once for each
 * frame. Between two snapshots the picture goes along the straight line; it lags the yard by one of them.
 */
import { create } from 'zustand';
import type { Rig } from '../../core/rig';
import type { Switches } from '../../core/trial';
import { createYardHandle, type OpenedYard, type Triple, type YardHandle } from '../../workers';
import type { YardBox } from '../../yard';
import { useDocument } from '../state/document';
import { useNotices } from '../state/notices';
import { useSession } from '../state/session';
import { stream } from '../state/stream';
import { type GroundName, groundFor } from './yardGrounds';

export interface YardState {
  readonly isOpen: boolean;
  readonly ground: GroundName;
  /** What was opened; undefined while it is being set up. */
  readonly opened: OpenedYard | undefined;
  readonly loose: readonly YardBox[];
  /** s since the yard was opened at which the rig went over; NaN while it stands. */
  readonly toppledAt: number;
}

export const useYard = create<YardState>()(() => ({
  isOpen: false,
  ground: 'flat',
  opened: undefined,
  loose: [],
  toppledAt: Number.NaN,
}));

let handle: YardHandle | undefined;
let before: Float64Array | undefined;
let after: Float64Array | undefined;
let arrivedAt = 0;
/** ms between the last two snapshots as they arrived, smoothed. */
let gap = 16;
/** Counts openings, so that what comes late from an earlier one is not taken. */
let opening = 0;

type Listener = () => void;
const listeners = new Set<Listener>();

/** Called for each frame while the yard is open. Returns the way out. */
export function onYardFrame(listener: Listener): Listener {
  listeners.add(listener);
  return () => {
    listeners.delete(listener);
  };
}

function take(snapshot: Float64Array, of: number): void {
  if (of !== opening) return;
  const now = performance.now();
  if (after) gap += 0.1 * (Math.min(100, now - arrivedAt) - gap);
  before = after ?? snapshot;
  after = snapshot;
  arrivedAt = now;
  const { opened, toppledAt } = useYard.getState();
  const told = opened ? (snapshot[opened.layout.toppledAt] as number) : Number.NaN;
  if (!Object.is(told, toppledAt)) useYard.setState({ toppledAt: told });
}

function raiseFrames(of: number): void {
  if (of !== opening || !useYard.getState().isOpen) return;
  for (const listener of listeners) listener();
  requestAnimationFrame(() => raiseFrames(of));
}

/** The two snapshots the picture is between, and how far it has come from one to the other; undefined at first. */
export function readYard():
  | { readonly before: Float64Array; readonly after: Float64Array; readonly share: number }
  | undefined {
  if (!before || !after) return undefined;
  return { before, after, share: Math.min(1, (performance.now() - arrivedAt) / gap) };
}

async function open(rig: Rig, switches: Switches, ground: GroundName): Promise<void> {
  handle ??= createYardHandle();
  const mine = ++opening;
  const outcome = await handle.open(rig, groundFor(ground, rig), switches, (snapshot) =>
    take(snapshot, mine),
  );
  if (mine !== opening) return;
  if (outcome.kind === 'refused') {
    useNotices.getState().show({
      id: 'yard',
      kind: 'fault',
      sentences: outcome.refusals.map(({ sentence }) => sentence),
    });
    closeYard();
    return;
  }
  useYard.setState({ opened: outcome, loose: outcome.loose, toppledAt: Number.NaN });
  requestAnimationFrame(() => raiseFrames(mine));
}

/** Sets the rig up afresh: at the start, on another ground, and when rig or switches are changed. */
export function resetYard(): void {
  before = undefined;
  after = undefined;
  useYard.setState({ opened: undefined, loose: [], toppledAt: Number.NaN });
  void open(useDocument.getState().rig, useSession.getState().switches, useYard.getState().ground);
}

let stopFollowing: Listener | undefined;

/** Opens the yard: the rig as it is, on the ground last chosen. */
export function openYard(): void {
  if (useYard.getState().isOpen) return;
  stream.pause();
  stream.seek(0);
  useYard.setState({ isOpen: true });
  const stopDocument = useDocument.subscribe((now, was) => now.rig !== was.rig && resetYard());
  const stopSession = useSession.subscribe((now, was) => now.switches !== was.switches && resetYard());
  // The ribbon's playhead and the yard do not move the picture at once: playing goes back to the plan.
  const stopTransport = stream.onTransport(() => stream.isPlaying && closeYard());
  stopFollowing = () => {
    stopDocument();
    stopSession();
    stopTransport();
  };
  resetYard();
}

export function closeYard(): void {
  opening++;
  stopFollowing?.();
  stopFollowing = undefined;
  handle?.close();
  handle = undefined;
  before = undefined;
  after = undefined;
  useYard.setState({ isOpen: false, opened: undefined, loose: [], toppledAt: Number.NaN });
  for (const listener of listeners) listener();
}

export function chooseGround(ground: GroundName): void {
  useYard.setState({ ground });
  resetYard();
}

export const touchRig = (point: Triple, target: Triple): void => handle?.touch(point, target);
export const releaseRig = (): void => handle?.release();
export const kickRig = (impulse: Triple, point: Triple): void => handle?.kick(impulse, point);

/** Lets a block fall, its place given from the body's origin. */
export async function dropBlock(box: YardBox): Promise<void> {
  const mine = opening;
  const loose = await handle?.drop(box);
  if (loose && mine === opening) useYard.setState({ loose });
}
