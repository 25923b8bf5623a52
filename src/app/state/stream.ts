/**
 * The stream: the motion on screen and where its playhead stands. It lives outside React. Whatever draws per
 * frame subscribes with `onFrame` and reads the fields; React hears only of new evaluations and of play/pause.
 */
import type { Evaluation, Motion, PlanCourse } from '../../core/trial';

/** An evaluation that gave results. */
export type Evaluated = Extract<Evaluation, { kind: 'evaluated' }>;

/** The plan's curves; undefined while nothing could be planned or proved impossible. */
export const courseOf = (shown: Evaluated): PlanCourse | undefined =>
  shown.plan.kind === 'unplanned' ? undefined : shown.plan.course;

/** N*m*s, the most momentum the tilt limits allow in roll at any instant of the plan; undefined without one. */
export function mostMomentum(shown: Evaluated): number | undefined {
  const limit = courseOf(shown)?.momentumLimit;
  return limit && limit.length > 0 ? limit.reduce((most, value) => Math.max(most, value), 0) : undefined;
}

type Listener = () => void;

/** The clock the stream runs by: asks for one call at the next frame, with the time in ms. */
export interface FrameClock {
  readonly request: (call: (milliseconds: number) => void) => number;
  readonly cancel: (handle: number) => void;
}

export interface Stream {
  /** The newest answer of the evaluator, a refusal included. */
  readonly evaluation: Evaluation | undefined;
  /** The newest that gave results: what the stage and ribbon show. */
  readonly shown: Evaluated | undefined;
  /** Where the playhead stands, s; from 0 to `length`. */
  readonly seconds: number;
  /** Length of the motion shown, s; 0 while there is none. */
  readonly length: number;
  readonly isPlaying: boolean;
  readonly isLooping: boolean;
  /** 1 is real time. */
  readonly speed: number;
  readonly setEvaluation: (evaluation: Evaluation) => void;
  readonly seek: (seconds: number) => void;
  readonly play: () => void;
  readonly pause: () => void;
  readonly setLooping: (isLooping: boolean) => void;
  readonly setSpeed: (speed: number) => void;
  /** Called when the picture must be drawn anew: the playhead moved or another motion came. Returns the way out. */
  readonly onFrame: (listener: Listener) => Listener;
  /** Called when another evaluation came. */
  readonly onEvaluation: (listener: Listener) => Listener;
  /** Called on play, pause, loop and speed. */
  readonly onTransport: (listener: Listener) => Listener;
}

/** Longest step of the playhead for one frame, s: after a stall the playhead goes on from where it was. */
const LONGEST_STEP = 0.1;

const createSignal = () => {
  const listeners = new Set<Listener>();
  return {
    on: (listener: Listener): Listener => {
      listeners.add(listener);
      return () => {
        listeners.delete(listener);
      };
    },
    raise: (): void => {
      for (const listener of listeners) listener();
    },
  };
};

const lengthOf = (motion: Motion): number => (motion.samples > 1 ? motion.time[motion.samples - 1]! : 0);

export function createStream(clock: FrameClock): Stream {
  const frame = createSignal();
  const arrival = createSignal();
  const transport = createSignal();
  let handle: number | undefined;
  let last: number | undefined;

  const stop = (): void => {
    if (handle !== undefined) clock.cancel(handle);
    handle = undefined;
    last = undefined;
  };

  const tick = (milliseconds: number): void => {
    handle = undefined;
    if (!state.isPlaying) return;
    const step = last === undefined ? 0 : Math.min(LONGEST_STEP, (milliseconds - last) / 1000);
    last = milliseconds;
    const next = state.seconds + step * state.speed;
    if (next < state.length) state.seconds = next;
    else if (state.isLooping && state.length > 0) state.seconds = next % state.length;
    else {
      state.seconds = state.length;
      state.isPlaying = false;
      transport.raise();
    }
    frame.raise();
    if (state.isPlaying) handle = clock.request(tick);
    else last = undefined;
  };

  const state = {
    evaluation: undefined as Evaluation | undefined,
    shown: undefined as Evaluated | undefined,
    seconds: 0,
    length: 0,
    isPlaying: false,
    isLooping: true,
    speed: 1,

    setEvaluation: (evaluation: Evaluation): void => {
      state.evaluation = evaluation;
      if (evaluation.kind === 'evaluated') {
        state.shown = evaluation;
        state.length = lengthOf(evaluation.motion);
        if (state.seconds > state.length) state.seconds = state.isLooping ? 0 : state.length;
      }
      arrival.raise();
      frame.raise();
    },
    seek: (seconds: number): void => {
      const next = Math.min(state.length, Math.max(0, seconds));
      if (next === state.seconds) return;
      state.seconds = next;
      frame.raise();
    },
    play: (): void => {
      if (state.isPlaying || state.length === 0) return;
      if (state.seconds >= state.length) state.seconds = 0;
      state.isPlaying = true;
      transport.raise();
      handle = clock.request(tick);
    },
    pause: (): void => {
      if (!state.isPlaying) return;
      state.isPlaying = false;
      stop();
      transport.raise();
    },
    setLooping: (isLooping: boolean): void => {
      state.isLooping = isLooping;
      transport.raise();
    },
    setSpeed: (speed: number): void => {
      state.speed = speed;
      transport.raise();
    },
    onFrame: frame.on,
    onEvaluation: arrival.on,
    onTransport: transport.on,
  };
  return state;
}

/** The app's one stream. */
export const stream: Stream = createStream({
  request: (call) => requestAnimationFrame(call),
  cancel: (handle) => cancelAnimationFrame(handle),
});
