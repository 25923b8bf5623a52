/** React's view of the stream: hooks that hear of new evaluations and of play and pause, never of frames. */
import { useSyncExternalStore } from 'react';
import type { Evaluation } from '../../core/trial';
import { type Evaluated, stream } from './stream';

export const useEvaluation = (): Evaluation | undefined =>
  useSyncExternalStore(stream.onEvaluation, () => stream.evaluation);

/** The newest evaluation that gave results. */
export const useShown = (): Evaluated | undefined =>
  useSyncExternalStore(stream.onEvaluation, () => stream.shown);

export const useIsPlaying = (): boolean => useSyncExternalStore(stream.onTransport, () => stream.isPlaying);
export const useIsLooping = (): boolean => useSyncExternalStore(stream.onTransport, () => stream.isLooping);
export const useSpeed = (): number => useSyncExternalStore(stream.onTransport, () => stream.speed);
