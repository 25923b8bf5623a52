/** Off the main thread: what the Spin up station says of a rig. */
import { expose } from 'comlink';
import { spinSheet } from '../core/physics';

const calls = { spinSheet };

export type SpinCalls = typeof calls;

expose(calls);
