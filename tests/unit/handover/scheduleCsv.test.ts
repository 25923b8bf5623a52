import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { writeScheduleCsv } from '../../../src/core/handover/scheduleCsv';
import type { PlanCourse } from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';

const none = new Float64Array(0);
const course: PlanCourse = {
  time: Float64Array.of(0, 0.1, 0.2),
  gyros: 2,
  tilt: Float64Array.of(0, 0, 0.123456789123, -0.123456789123, 1e-12, -1e-12),
  tiltRate: Float64Array.of(1, -1, 2, -2, 3, -3),
  demand: none,
  torque: none,
  momentum: none,
  momentumLimit: none,
  centreOfPressure: none,
  supportRight: none,
  supportLeft: none,
  blocks: [],
};

describe('the tilt schedule as CSV', () => {
  it('has the units in its header and a line for each instant', () => {
    const lines = writeScheduleCsv(course, ['Front', 'Back']).split('\r\n');
    expect(lines[0]).toBe(
      'time (s),Front tilt (rad),Front tilt rate (rad/s),Back tilt (rad),Back tilt rate (rad/s)',
    );
    expect(lines).toHaveLength(5);
    expect(lines[4]).toBe('');
  });

  it('is read back by an independent reader to nine digits', () => {
    const read = Papa.parse<number[]>(writeScheduleCsv(course, ['a', 'b']), {
      dynamicTyping: true,
      skipEmptyLines: true,
    });
    expect(read.errors).toEqual([]);
    const rows = read.data.slice(1);
    expectClose(
      rows.map((row) => row[0]!),
      course.time,
      { abs: 1e-12 },
    ); // measured 0
    expectClose(
      rows.flatMap((row) => [row[1]!, row[3]!]),
      course.tilt,
      { rel: 1e-8 }, // measured 1e-9
    );
    expectClose(
      rows.flatMap((row) => [row[2]!, row[4]!]),
      course.tiltRate,
      { rel: 1e-12 },
    ); // measured 0
  });

  it('quotes names a reader would stumble on', () => {
    const read = Papa.parse<string[]>(writeScheduleCsv(course, ['Front, "left"', 'b']));
    expect(read.data[0]?.[1]).toBe('Front, "left" tilt (rad)');
    expect(read.data[0]).toHaveLength(5);
  });
});
