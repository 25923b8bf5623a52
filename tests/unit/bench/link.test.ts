import { describe, expect, it } from 'vitest';
import {
  createCommandQueue,
  encodeCommand,
  encodeGains,
  encodeSchedule,
} from '../../../src/core/bench/link/commandQueue';
import { createLineAssembler } from '../../../src/core/bench/link/lineAssembler';
import { createLineReader } from '../../../src/core/bench/link/lineFormat';
import { createLoopbackDevice } from '../../../src/core/bench/link/loopbackDevice';
import { createRecording } from '../../../src/core/bench/link/recording';
import { createSeededStream } from '../../support/seededStream';

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);

describe('lines', () => {
  it('come whole whatever the pieces, and a broken one comes as a fragment', () => {
    const text = 'a,b\r\n1,2\n\n3,°4\r5,6';
    const stream = createSeededStream(4);
    for (let round = 0; round < 50; round++) {
      const assembler = createLineAssembler();
      const all = bytes(text);
      const got: string[] = [];
      for (let i = 0; i < all.length; ) {
        const n = 1 + Math.floor(4 * stream.uniform());
        got.push(...assembler.push(all.subarray(i, i + n)).map((l) => l.text));
        i += n;
      }
      expect(got).toEqual(['a,b', '1,2', '3,°4']);
      expect(assembler.breakOff()).toEqual([{ text: '5,6', isWhole: false }]);
      expect(assembler.breakOff()).toEqual([]);
    }
  });
  it('a line with no end is cut at the limit, and nothing is dropped', () => {
    const assembler = createLineAssembler(10);
    const out = assembler.push(bytes('0123456789abcdef\n'));
    expect(out).toEqual([
      { text: '0123456789', isWhole: false },
      { text: 'abcdef', isWhole: true },
    ]);
  });
  it('are read as documented', () => {
    const csv = createLineReader();
    expect(csv.read('1,2')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/Line 1: numbers before any header/),
    });
    expect(csv.read('t, roll')).toMatchObject({ kind: 'header', names: ['t', 'roll'], isChange: false });
    expect(csv.read('0.5,-1e-3')).toMatchObject({ kind: 'sample', values: Float64Array.of(0.5, -1e-3) });
    expect(csv.read('0.5,')).toMatchObject({ kind: 'sample', values: Float64Array.of(0.5, Number.NaN) });
    expect(csv.read('0.5')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/1 cells where the header has 2/),
    });
    expect(csv.read('0.5,1x')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/column "roll" is "1x"/),
    });
    expect(csv.read('0.5,inf')).toMatchObject({ kind: 'bad' });
    expect(csv.read('# battery low')).toEqual({ kind: 'note', text: 'battery low' });
    expect(csv.read('<7,ok')).toEqual({ kind: 'answer', id: 7, isDone: true, reason: '' });
    expect(csv.read('<8,no,too fast')).toEqual({ kind: 'answer', id: 8, isDone: false, reason: 'too fast' });
    expect(csv.read('t,t')).toMatchObject({ kind: 'bad' });
    expect(csv.read('t,yaw')).toMatchObject({ kind: 'header', isChange: true });
    const json = createLineReader();
    expect(json.read('{"t":1,"roll":2}')).toMatchObject({ kind: 'sample', values: Float64Array.of(1, 2) });
    expect(json.read('{"roll":3}')).toMatchObject({ kind: 'sample', values: Float64Array.of(Number.NaN, 3) });
    expect(json.read('{"roll":"x"}')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/"roll" is "x"/),
    });
    expect(json.read('{"yaw":3}')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/"yaw" is not among/),
    });
    expect(json.read('{"roll":')).toMatchObject({
      kind: 'bad',
      sentence: expect.stringMatching(/no whole JSON/),
    });
  });
});

describe('commands', () => {
  it('refuse to be built with what would break a line', () => {
    expect(encodeCommand(3, { word: 'gain', fields: ['kp', 1.25] })).toBe('>3,gain,kp,1.25');
    expect(() => encodeCommand(3, { word: 'gain', fields: ['k\np', 1] })).toThrow();
    expect(() => encodeCommand(3, { word: 'gain', fields: ['kp', Number.NaN] })).toThrow();
  });
  it('go out one at a time, each after its answer', () => {
    const queue = createCommandQueue({ timeout: 0.5 });
    expect(queue.start(encodeGains({ kp: 1, kd: 2 }))).toBe(true);
    expect(queue.start([])).toBe(false);
    expect(queue.poll(0)).toEqual(['>1,gain,kp,1']);
    expect(queue.poll(0.1)).toEqual([]);
    expect(queue.hear(9, true, '')).toBe(false);
    expect(queue.hear(1, true, '')).toBe(true);
    expect(queue.state).toEqual({ kind: 'sending', done: 1, total: 2 });
    expect(queue.poll(0.1)).toEqual(['>2,gain,kd,2']);
    expect(queue.hear(2, true, '')).toBe(true);
    expect(queue.state).toEqual({ kind: 'done', total: 2 });
  });
  it('are sent again when no answer comes, and given up in words', () => {
    const queue = createCommandQueue({ timeout: 0.5, attempts: 3 });
    queue.start(encodeGains({ kp: 1 }));
    expect([0, 0.2, 0.5, 1, 1.4].map((t) => queue.poll(t).length)).toEqual([1, 0, 1, 1, 0]);
    queue.poll(1.5);
    expect(queue.state).toMatchObject({
      kind: 'silent',
      sentence: expect.stringMatching(/does not answer ">1,gain,kp,1" \(sent 3 times.*0 of 1/),
    });
  });
  it('stop at a refusal, and at the stop line', () => {
    const queue = createCommandQueue();
    queue.start(encodeGains({ kp: 1, kd: 2 }));
    queue.poll(0);
    queue.hear(1, false, 'out of range');
    expect(queue.state).toMatchObject({ kind: 'refused', reason: 'out of range', done: 0, total: 2 });
    queue.start(encodeGains({ kp: 1, kd: 2 }));
    queue.poll(0);
    expect(queue.stop('RELEASE')).toBe('RELEASE');
    expect(queue.state).toMatchObject({ kind: 'stopped', done: 0, total: 2 });
    expect(queue.poll(9)).toEqual([]);
    expect(queue.hear(3, true, '')).toBe(false);
  });
});

describe('the loop through a device made of code', () => {
  const makeDevice = (format: 'csv' | 'json') => {
    const obeyed: string[] = [];
    let released = 0;
    const device = createLoopbackDevice(
      {
        names: ['roll'],
        sample: (t, out) => {
          out[0] = Math.sin(t);
        },
        obey: (word, fields) => {
          if (fields[0] === 'forbidden') return 'no such gain';
          obeyed.push([word, ...fields].join(' '));
          return undefined;
        },
        release: () => released++,
      },
      { rate: 1000, format, stopLine: 'RELEASE' },
    );
    return { device, obeyed, released: () => released };
  };
  for (const format of ['csv', 'json'] as const) {
    it(`${format}: 60 s at 1 kHz in ragged pieces, unplugged in the middle: nothing received is lost, what was not sent is counted`, () => {
      const { device } = makeDevice(format);
      const recording = createRecording();
      const stream = createSeededStream(8);
      let lostOnTheWire = 0;
      const feed = (all: Uint8Array): void => {
        for (let i = 0; i < all.length; ) {
          const n = 1 + Math.floor(200 * stream.uniform());
          recording.push(all.subarray(i, i + n));
          i += n;
        }
      };
      for (let t = 0.05; t < 60.001; t += 0.05) {
        if (Math.abs(t - 30) < 0.01) {
          // The plug comes out in the middle of a line: its first bytes are there, the rest of the burst is not.
          const burst = device.say(t);
          const cut = burst.lastIndexOf(10, burst.length - 2) + 5;
          feed(burst.subarray(0, cut));
          recording.breakOff();
          device.unplug();
          lostOnTheWire++;
        } else if (t > 32 && t < 32.04) {
          const before = device.samples;
          device.say(t);
          lostOnTheWire += device.samples - before;
          device.plugIn();
        } else if (t > 30 && t < 32) {
          const before = device.samples;
          device.say(t);
          lostOnTheWire += device.samples - before;
        } else feed(device.say(t));
      }
      const { counts } = recording;
      expect(counts.bad).toBe(0);
      expect(counts).toMatchObject({ breaks: 1, fragments: 1, headers: format === 'csv' ? 2 : 0 });
      expect(recording.rows + lostOnTheWire).toBe(device.samples);
      expect(counts.missing).toBe(lostOnTheWire);
      expect(counts.lines).toBe(counts.rows + counts.headers);
      const n = recording.read('n', 0) as Float64Array;
      const roll = recording.read('roll', 0) as Float64Array;
      for (let i = 0; i < n.length; i += 97) expect(roll[i]).toBe(Math.sin(n[i] / 1000));
    });
  }
  it('loads a schedule, is not fooled by a lost answer, and lets go at the stop line', () => {
    const { device, obeyed, released } = makeDevice('csv');
    const recording = createRecording();
    const queue = createCommandQueue({ timeout: 0.2 });
    queue.start(
      encodeSchedule(
        [0, 0.5, 1],
        [
          [0, 0.1, 0],
          [0, -0.1, 0],
        ],
      ),
    );
    let answers = 0;
    for (let t = 0; t < 5 && queue.state.kind === 'sending'; t += 0.05) {
      for (const line of queue.poll(t)) device.hear(bytes(`${line}\n`));
      for (const line of recording.push(device.say(t))) {
        // The second answer is lost on the way.
        if (line.kind === 'answer' && ++answers !== 2) queue.hear(line.id, line.isDone, line.reason);
      }
    }
    expect(queue.state).toEqual({ kind: 'done', total: 5 });
    expect(obeyed).toEqual([
      'clear schedule',
      'point 0 0 0 0',
      'point 1 0.5 0.1 -0.1',
      'point 2 1 0 0',
      'use schedule 3',
    ]);
    device.hear(bytes('RELEASE\n'));
    expect(released()).toBe(1);
    queue.start([{ word: 'gain', fields: ['forbidden', 1] }]);
    device.hear(bytes(`${queue.poll(9)[0]}\n`));
    for (const line of recording.push(device.say(9)))
      if (line.kind === 'answer') queue.hear(line.id, line.isDone, line.reason);
    expect(queue.state).toMatchObject({ kind: 'refused', reason: 'no such gain' });
  });
});
