import { describe, expect, test } from 'vitest';
import {
  createPlanWork,
  ledgerLines,
  type TradeAsk,
  tradeCell,
  tradeNumbers,
  tradeRig,
  tradeRow,
  tradeValue,
} from '../../../src/core/planning';
import { DEMONSTRATIONS, type Rig, readRig, STRIDER } from '../../../src/core/rig';
import { rowOrder } from '../../../src/workers/planPool';
import { expectClose } from '../../support/closeTo';
import { heldPlanOf } from '../../support/plannedRigs';

const askFor = (rig: Rig, across: string, up: string, cells = 5): TradeAsk => {
  const range = (id: string) => {
    const found = tradeNumbers(rig).find((one) => one.id === id);
    if (!found) throw new Error(`no ${id}`);
    return { id, from: found.from, to: found.to };
  };
  return { across: range(across), up: range(up), columns: cells, rows: cells };
};

describe('numbers to map over', () => {
  test.each(DEMONSTRATIONS.map(({ rig }) => [rig.name, rig] as const))(
    '%s: each can be put in and read back',
    (_, rig) => {
      const numbers = tradeNumbers(rig);
      expect(numbers.length).toBeGreaterThan(5);
      expect(new Set(numbers.map(({ id }) => id)).size).toBe(numbers.length);
      for (const { id, from, to, put } of numbers) {
        for (const value of [from, to]) {
          const changed = put(rig, value);
          expect(readRig(changed).kind, `${id} at ${value}`).toBe('read');
          expectClose(tradeNumbers(changed).find((one) => one.id === id)?.now as number, value, {
            abs: 1e-12,
          });
        }
      }
    },
  );
});

describe('a map', () => {
  const ask = askFor(STRIDER, 'stepTime', 'sway');

  test('cells hold what a plan of that rig holds', () => {
    const row = tradeRow(STRIDER, ask, 2);
    expect(row).toHaveLength(5);
    const kinds = new Set([...row, ...tradeRow(STRIDER, ask, 0)].map(({ kind }) => kind));
    expect(kinds).toContain('planned');
    expect(kinds).toContain('impossible');
    const at = row.findIndex(({ kind }) => kind === 'planned');
    const rig = tradeRig(STRIDER, ask, at, 2) as Rig;
    const { setting, schedules } = heldPlanOf(rig);
    const least = Math.min(...ledgerLines(setting, schedules).map(({ spare }) => spare));
    const cell = row[at];
    // a gait's cell is the gait's own plan: measured 0 apart
    if (cell?.kind === 'planned') expectClose(cell.spare, least, { abs: 1e-9 }, 'spare');
  });

  test('tapping a cell gives the rig with both numbers and nothing else changed', () => {
    const rig = tradeRig(STRIDER, ask, 4, 1) as Rig;
    if (rig.jobs.gait.kind !== 'pattern' || STRIDER.jobs.gait.kind !== 'pattern')
      throw new Error('a pattern');
    expectClose(rig.jobs.gait.stepTime, 2, { abs: 1e-12 });
    expectClose(rig.jobs.gait.sway, tradeValue(ask.up, 5, 1), { abs: 1e-12 });
    expect({ ...rig, jobs: STRIDER.jobs }).toEqual(STRIDER);
  });

  test('numbers that make no rig are refused with a sentence, not drawn', () => {
    const cell = tradeCell({ ...STRIDER, array: { gyros: [] } }, createPlanWork());
    expect(cell.kind).toBe('refused');
    if (cell.kind === 'refused') expect(cell.sentence).toMatch(/no wheels/);
    expect(tradeRig(STRIDER, { ...ask, up: { id: 'wave0Height', from: 0, to: 1 } }, 0, 0)).toBeUndefined();
  });

  test('rows come coarse first and each once', () => {
    expect(rowOrder(20).toSorted((a, b) => a - b)).toEqual(Array.from({ length: 20 }, (_, k) => k));
    expect(rowOrder(20).slice(0, 5)).toEqual([0, 4, 8, 12, 16]);
  });
});
