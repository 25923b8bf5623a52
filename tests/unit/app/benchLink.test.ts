import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { createLinkSession } from '../../../src/app/link/linkSession';
import { createRigBody } from '../../../src/app/link/loopbackBody';
import { createLoopbackPlug } from '../../../src/app/link/loopbackPort';
import {
  createLoopbackDevice,
  encodeGains,
  encodeSchedule,
  type LoopbackBody,
} from '../../../src/core/bench';
import { SKIFF, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, evaluate } from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';

beforeEach(() => vi.useFakeTimers());
afterEach(() => vi.useRealTimers());

const clock = (): number => performance.now() / 1000;
const counter: LoopbackBody & { heard: string[] } = {
  heard: [],
  names: ['x'],
  sample: (t, out) => {
    out[0] = t;
  },
  obey: (word, fields) => {
    counter.heard.push(`${word} ${fields.join(' ')}`);
    return word === 'gain' && fields[0] === 'bad' ? 'no such gain' : undefined;
  },
  release: () => counter.heard.push('released'),
};
const plugFor = (format: 'csv' | 'json') =>
  createLoopbackPlug(createLoopbackDevice(counter, { rate: 1000, format, stopLine: 'LET GO' }), 1);

describe('a link session', () => {
  it.each(['csv', 'json'] as const)('keeps what came before and after a pulled cable, %s', (format) => {
    const plug = plugFor(format);
    const session = createLinkSession(clock);
    session.connect(plug.plugIn());
    vi.advanceTimersByTime(2000);
    plug.unplug();
    const before = session.snapshot();
    expect(before.state).toBe('gone');
    expect(before.rows).toBeGreaterThan(1900);
    expect(before.counts.missing).toBe(0);
    vi.advanceTimersByTime(1000);
    expect(session.snapshot().rows).toBe(before.rows);
    session.connect(plug.plugIn());
    vi.advanceTimersByTime(2000);
    const after = session.snapshot();
    const n = session.recording.read('n', 0);
    expect(after.counts.breaks).toBe(1);
    expect(after.counts.bad + after.counts.fragments).toBe(0);
    // Every number the device gave out is either recorded or counted as lost.
    expect(after.rows + after.counts.missing).toBe((n?.at(-1) ?? 0) - (n?.[0] ?? 0) + 1);
    expect(after.counts.missing).toBeGreaterThan(900);
    session.close();
    const rows = session.snapshot().rows;
    vi.advanceTimersByTime(1000);
    expect(session.snapshot().rows).toBe(rows);
  });

  it('sends nothing by itself, then each line once its forerunner is answered', () => {
    counter.heard = [];
    const session = createLinkSession(clock);
    session.connect(plugFor('csv').plugIn());
    vi.advanceTimersByTime(1000);
    expect(counter.heard).toEqual([]);
    expect(session.send(encodeGains({ kp: 1, kd: 2 }))).toBe(true);
    expect(counter.heard).toEqual(['gain kp 1']);
    expect(session.send(encodeGains({ ki: 3 }))).toBe(false);
    vi.advanceTimersByTime(100);
    expect(counter.heard).toEqual(['gain kp 1', 'gain kd 2']);
    expect(session.snapshot().queue).toEqual({ kind: 'done', total: 2 });
    session.send(encodeGains({ bad: 1, kp: 2 }));
    vi.advanceTimersByTime(100);
    expect(session.snapshot().queue).toMatchObject({ kind: 'refused', reason: 'no such gain', done: 0 });
    session.close();
  });

  it('a release goes out at once, drops the rest, and says when it could not', async () => {
    counter.heard = [];
    const plug = plugFor('csv');
    const session = createLinkSession(clock);
    session.connect(plug.plugIn());
    session.send(encodeSchedule([0, 1, 2], [[0, 0.1, 0]]));
    session.release('LET GO');
    expect(counter.heard).toEqual(['clear schedule', 'released']);
    await vi.advanceTimersByTimeAsync(500);
    expect(counter.heard.length).toBe(2);
    expect(session.snapshot()).toMatchObject({ stop: 'sent', queue: { kind: 'stopped', done: 0, total: 5 } });
    plug.unplug();
    session.release('LET GO');
    await vi.advanceTimersByTimeAsync(1);
    expect(session.snapshot().stop).toBe('not sent');
    session.close();
  });

  it('a batch cut by a pulled cable goes on after it, no line acted on twice', () => {
    counter.heard = [];
    const plug = plugFor('csv');
    const session = createLinkSession(clock);
    session.connect(plug.plugIn());
    session.send(encodeSchedule([0, 1, 2, 3], [[0, 0.1, 0.1, 0]]));
    vi.advanceTimersByTime(40);
    plug.unplug();
    vi.advanceTimersByTime(5000);
    session.connect(plug.plugIn());
    vi.advanceTimersByTime(1000);
    expect(session.snapshot().queue).toEqual({ kind: 'done', total: 6 });
    expect(counter.heard).toEqual([
      'clear schedule',
      'point 0 0 0',
      'point 1 1 0.1',
      'point 2 2 0.1',
      'point 3 3 0',
      'use schedule 4',
    ]);
    session.close();
  });

  it('a new recording begins with a whole line and needs no new header', () => {
    const session = createLinkSession(clock);
    session.connect(plugFor('csv').plugIn());
    vi.advanceTimersByTime(500);
    session.clear();
    vi.advanceTimersByTime(500);
    const { rows, counts } = session.snapshot();
    expect(rows).toBeGreaterThan(300);
    expect(rows).toBeLessThan(700);
    expect(counts.bad + counts.fragments + counts.missing).toBe(0);
    session.close();
  });
});

describe('the simulated device', () => {
  const out = new Float64Array(8);
  it('runs the rig’s roll loop: it holds, lets go when told to, and takes gains it knows', () => {
    const made = createRigBody(SKIFF, undefined);
    if (made.kind === 'refused') throw new Error(made.sentence);
    const { body } = made;
    let most = 0;
    for (let t = 0; t < 10; t += 0.01) {
      body.sample(t, out);
      expect(out.slice(0, 4).every(Number.isFinite)).toBe(true);
      most = Math.max(most, Math.abs(out[0] as number));
    }
    expect(most).toBeGreaterThan(1e-3);
    expect(most).toBeLessThan(0.3); // measured 0.107
    expect(body.obey('gain', ['nonsense', '1'])).toContain('no gain nonsense');
    expect(body.obey('gain', ['lean', 'much'])).toBe('no number');
    expect(body.obey('gain', ['lean', '1.5'])).toBeUndefined();
    expect(body.obey('dance', [])).toBe('no command dance');
    body.release();
    // Let go, the servos are asked for rest, and the waves have their way with the boat.
    let unaided = 0;
    for (let t = 10; t < 18; t += 0.01) {
      body.sample(t, out);
      if (t > 10.1) expect(Math.abs(out[3] as number)).toBe(0);
      unaided = Math.max(unaided, Math.abs(out[0] as number));
    }
    expect(unaided).toBeGreaterThan(1.5 * most); // measured 2.39 times
  });
  it('follows a schedule where the feet stand flat, and has nothing to feed back', () => {
    const evaluation = evaluate(
      STRIDER,
      { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
      createEvaluationWork(() => 0),
    );
    if (evaluation.kind === 'refused') throw new Error('the demonstration is refused');
    const made = createRigBody(STRIDER, evaluation.motion);
    if (made.kind === 'refused') throw new Error(made.sentence);
    const { body } = made;
    expect(body.obey('gain', ['kp', '1'])).toMatch(/no lean to feed back/);
    expect(body.obey('clear', ['schedule'])).toBeUndefined();
    expect(body.obey('point', ['1', '0', '0'])).toMatch(/where 0 is next/);
    expect(body.obey('point', ['0', '0', '0.1', '-0.1'])).toBeUndefined();
    expect(body.obey('point', ['1', '2', '0.3', '-0.3'])).toBeUndefined();
    expect(body.obey('use', ['schedule', '3'])).toBe('2 points are here');
    expect(body.obey('use', ['schedule', '2'])).toBeUndefined();
    body.sample(1, out);
    expectClose([out[1] as number], [0.2], { abs: 1e-12 });
    body.release();
    body.sample(1.5, out);
    const held = out[1];
    body.sample(2.5, out);
    expect(out[1]).toBe(held);
    expect(createRigBody(STRIDER, undefined).kind).toBe('refused');
  });
});
