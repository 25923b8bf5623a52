import { describe, expect, it } from 'vitest';
import {
  allanDeviation,
  modifiedAllanDeviation,
  overlappingAllanDeviation,
} from '../../../src/core/bench/identify/allan';
import { identifyStillSensor } from '../../../src/core/bench/identify/stillSensor';
import { expectClose } from '../../support/closeTo';
import { createSeededStream } from '../../support/seededStream';

describe('Allan deviations', () => {
  it('of the nine-point set (NIST SP 1065, table 30, Riley 2008)', () => {
    const y = [892, 809, 823, 798, 671, 644, 883, 903, 677];
    const of = (f: (r: number[], m: number) => number): number[] => [f(y, 1), f(y, 2)];
    expectClose(of(allanDeviation), [91.22945, 115.8082], { rel: 1e-6 }, 'original'); // measured 3e-7
    expectClose(of(overlappingAllanDeviation), [91.22945, 85.95287], { rel: 1e-6 }, 'overlapping');
    expectClose(of(modifiedAllanDeviation), [91.22945, 74.78849], { rel: 1e-6 }, 'modified');
  });
});

describe('a still sensor that cannot be judged', () => {
  const stream = createSeededStream(1);
  const still = Float64Array.from({ length: 4000 }, () => stream.normal());
  it('is refused in words when short, knocked, gappy or dead', () => {
    expect(identifyStillSensor(still.subarray(0, 500), 0.01)).toMatchObject({
      kind: 'refused',
      sentence: 'The log has 500 readings of the sensor; 2000 are needed.',
    });
    const knocked = Float64Array.from(still);
    knocked[2500] = 60;
    expect(identifyStillSensor(knocked, 0.01)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/not still: at (24.99|25) s it jumps/),
    });
    const gappy = Float64Array.from(still);
    gappy[99] = Number.NaN;
    expect(identifyStillSensor(gappy, 0.01)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/Reading 100/),
    });
    expect(identifyStillSensor(new Float64Array(4000), 0.01)).toMatchObject({
      kind: 'refused',
      sentence: expect.stringMatching(/same value/),
    });
  });
});
