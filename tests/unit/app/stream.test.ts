import { describe, expect, it } from 'vitest';
import { createStream, type Evaluated } from '../../../src/app/state/stream';
import { expectClose } from '../../support/closeTo';

/** A clock that is stepped by hand. */
function handClock() {
  let waiting: ((milliseconds: number) => void) | undefined;
  let now = 1000;
  return {
    request: (call: (milliseconds: number) => void) => {
      waiting = call;
      return 1;
    },
    cancel: () => {
      waiting = undefined;
    },
    isIdle: () => waiting === undefined,
    step: (milliseconds: number) => {
      now += milliseconds;
      const call = waiting;
      waiting = undefined;
      call?.(now);
    },
  };
}

const lasting = (seconds: number): Evaluated =>
  ({ kind: 'evaluated', motion: { samples: 2, time: Float64Array.of(0, seconds) } }) as unknown as Evaluated;

describe('the stream', () => {
  it('asks for frames only while it plays', () => {
    const clock = handClock();
    const stream = createStream(clock);
    stream.play();
    expect(clock.isIdle()).toBe(true);
    stream.setEvaluation(lasting(2));
    expect(clock.isIdle()).toBe(true);
    stream.play();
    expect(clock.isIdle()).toBe(false);
    stream.pause();
    expect(clock.isIdle()).toBe(true);
  });

  it('moves its playhead by the time that has gone by, times the speed', () => {
    const clock = handClock();
    const stream = createStream(clock);
    stream.setEvaluation(lasting(10));
    stream.setSpeed(0.5);
    stream.play();
    clock.step(16);
    for (let k = 0; k < 10; k++) clock.step(20);
    expectClose(stream.seconds, 0.1, { abs: 1e-12 }); // measured 1e-17
  });

  it('does not leap after a stall', () => {
    const clock = handClock();
    const stream = createStream(clock);
    stream.setEvaluation(lasting(10));
    stream.play();
    clock.step(16);
    clock.step(5000);
    expectClose(stream.seconds, 0.1, { abs: 1e-12 }); // measured 0
  });

  it('loops, or stops at the end and starts over', () => {
    const clock = handClock();
    const stream = createStream(clock);
    stream.setEvaluation(lasting(0.15));
    stream.play();
    clock.step(16);
    clock.step(100);
    clock.step(100);
    expectClose(stream.seconds, 0.05, { abs: 1e-12 }); // measured 3e-17
    stream.setLooping(false);
    clock.step(100);
    clock.step(100);
    expect(stream.seconds).toBe(0.15);
    expect(stream.isPlaying).toBe(false);
    expect(clock.isIdle()).toBe(true);
    stream.play();
    expect(stream.seconds).toBe(0);
  });

  it('tells listeners of frames, and no longer once they have gone', () => {
    const stream = createStream(handClock());
    stream.setEvaluation(lasting(3));
    let frames = 0;
    const leave = stream.onFrame(() => {
      frames++;
    });
    stream.seek(1);
    stream.seek(1);
    expect(frames).toBe(1);
    leave();
    stream.seek(2);
    expect(frames).toBe(1);
  });

  it('keeps the last result on show through a refusal, and the playhead inside a shorter motion', () => {
    const stream = createStream(handClock());
    stream.setEvaluation(lasting(3));
    stream.seek(2.5);
    stream.setEvaluation({ kind: 'refused', refusals: [] });
    expect(stream.shown?.kind).toBe('evaluated');
    expect(stream.seconds).toBe(2.5);
    stream.setEvaluation(lasting(1));
    expect(stream.seconds).toBeLessThanOrEqual(1);
  });
});
