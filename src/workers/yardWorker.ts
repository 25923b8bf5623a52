/** Off the main thread: the yard, stepping by its own clock, and snapshots of it some sixty times a second. */
import { expose, transfer } from 'comlink';
import { compileRig } from '../core/physics';
import type { Refusal, Rig } from '../core/rig';
import { type Switches, USUAL_DOUBT } from '../core/trial';
import { type GroundChoice, openYard, Pace, type SnapshotLayout, type Yard, type YardBox } from '../yard';

/** ms between snapshots. */
const INTERVAL = 16;
/** s of steps owed before the yard falls behind the wall clock. */
const MOST_OWED = 0.05;

export type Triple = readonly [number, number, number];

/** What a yard was opened with, for whoever draws it. */
export interface OpenedYard {
  readonly kind: 'opened';
  readonly layout: SnapshotLayout;
  /** Attitude of the ground plane, w first. */
  readonly attitude: readonly [number, number, number, number];
  /** Boxes that stand still, and loose ones in the order of the snapshots. */
  readonly standing: readonly YardBox[];
  readonly loose: readonly YardBox[];
}

export type OpenOutcome = OpenedYard | { readonly kind: 'refused'; readonly refusals: readonly Refusal[] };

/** Called with each snapshot; see SnapshotLayout. */
export type SnapshotListener = (snapshot: Float64Array) => void;

let yard: Yard | undefined;
let listener: SnapshotListener | undefined;
let pace = new Pace(1, 1);
let last = 0;
let timer: ReturnType<typeof setInterval> | undefined;

function tell(): void {
  if (!yard || !listener) return;
  const snapshot = new Float64Array(yard.layout.size);
  yard.snapshot(snapshot);
  listener(transfer(snapshot, [snapshot.buffer]));
}

function tick(): void {
  if (!yard) return;
  const now = performance.now() / 1000;
  yard.run(pace.stepsDue(now - last));
  last = now;
  tell();
}

const looseOf = (opened: Yard): readonly YardBox[] => opened.objects.map(({ box }) => box);

const calls = {
  open(rig: Rig, ground: GroundChoice, switches: Switches, listen: SnapshotListener): OpenOutcome {
    calls.close();
    const compiled = compileRig(rig);
    if (compiled.kind === 'refused') return compiled;
    const outcome = openYard({ compiled: compiled.compiled, ground, switches, doubt: USUAL_DOUBT });
    if (outcome.kind === 'refused') return outcome;
    yard = outcome.yard;
    listener = listen;
    pace = new Pace(yard.step, MOST_OWED);
    last = performance.now() / 1000;
    tell();
    timer = setInterval(tick, INTERVAL);
    return {
      kind: 'opened',
      layout: yard.layout,
      attitude: yard.groundAttitude,
      standing: yard.standing,
      loose: looseOf(yard),
    };
  },
  close(): void {
    clearInterval(timer);
    yard = undefined;
    listener = undefined;
  },
  touch: (point: Triple, target: Triple): void => yard?.hand.touch(point, target),
  release: (): void => yard?.hand.release(),
  kick: (impulse: Triple, point: Triple): void => yard?.kick(impulse, point),
  /** Lets a block fall from a place given from the body's origin, m, world axes; returns all loose boxes. */
  drop(box: YardBox): readonly YardBox[] {
    if (!yard) return [];
    const [x, y, z] = yard.worldPoint([0, 0, 0]);
    yard.drop({ ...box, place: [x + box.place[0], y + box.place[1], z + box.place[2]] });
    return looseOf(yard);
  },
};

export type YardCalls = typeof calls;

expose(calls);
