import { describe, expect, test } from 'vitest';
import { eventRows } from '../../../src/app/ribbon/ribbonBlocks';
import type { Disturbance } from '../../../src/core/rig';

const load = (time: number, duration: number): Disturbance => ({
  kind: 'sideLoad',
  time,
  duration,
  force: 1,
  height: 0.3,
  direction: 0,
});

describe('rows of disturbances', () => {
  test('one row serves while none lies over another', () => {
    expect(eventRows([load(0, 1), load(2, 1), load(5, 2)], 10)).toEqual([0, 0, 0]);
  });

  test('what overlaps goes to the next row that is free', () => {
    expect(eventRows([load(0, 5), load(1, 1), load(3, 1), load(3.5, 4)], 10)).toEqual([0, 1, 1, 2]);
  });

  test('shoves of no length keep room for a finger', () => {
    const shove: Disturbance = { kind: 'shove', time: 1, impulse: 1, height: 0.3, direction: 0 };
    expect(eventRows([shove, { ...shove, time: 1.2 }, { ...shove, time: 2 }], 10)).toEqual([0, 1, 0]);
  });
});
