import { describe, expect, it } from 'vitest';
import { createLogReader } from '../../src/core/bench/logs/logReader';
import { makeLongLog, rollOf } from '../support/longLog';

describe('a long log', () => {
  it('of 20 MB is read right, row by row, in bounded memory', () => {
    const held = (): number => {
      const m = process.memoryUsage();
      return m.arrayBuffers + m.heapUsed;
    };
    const before = held();
    const reader = createLogReader({ totalBytes: 20e6 });
    let most = 0;
    let count = 0;
    for (const piece of makeLongLog(20e6)) {
      reader.push(piece);
      if (count++ % 16 === 0) most = Math.max(most, held() - before - 16 * reader.progress().rows);
    }
    const outcome = reader.finish();
    if (outcome.kind !== 'read') throw new Error('not read');
    const { table, remarks } = outcome;
    expect(remarks).toEqual([]);
    expect(table.names).toEqual(['time', 'roll']);
    expect(table.unitTexts).toEqual(['s', 'deg']);
    expect(table.rows).toBeGreaterThan(900_000);
    let wrong = 0;
    for (let i = 0; i < table.rows; i++) {
      if (table.columns[0][i] !== i / 1e4 || table.columns[1][i] !== rollOf(i) / 1e5) wrong++;
    }
    expect(wrong).toBe(0);
    console.log(`most memory beyond the columns ${(most / 1e6).toFixed(1)} MB`);
    // What this test itself throws away (pieces of 64 KiB) waits for the collector and is in the figure.
    expect(most).toBeLessThan(64e6);
  });
});
