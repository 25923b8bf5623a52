import { describe, expect, it } from 'vitest';
import { sparePercent, spareWords } from '../../../src/app/ledger/ledgerMarks';
import { countRows, placeBlocks } from '../../../src/app/ribbon/ribbonBlocks';
import { indexAt, lineCurves } from '../../../src/app/ribbon/ribbonCurves';
import type { LedgerLine } from '../../../src/core/planning';
import type { RibbonBlock } from '../../../src/core/trial';
import type { Figure } from '../../../src/core/units';
import { expectClose } from '../../support/closeTo';

const phase = (from: number, to: number, row = 0): RibbonBlock => ({
  kind: 'phase',
  label: 'down',
  from,
  to,
  row,
});

describe('blocks along the ribbon', () => {
  it('repeat with the cycle, cut at both ends', () => {
    const placed = placeBlocks([phase(0.5, 1.2)], 1, 2);
    expectClose(
      placed.map((p) => p.left),
      [0, 25, 75],
      { abs: 1e-9 },
    ); // measured 0
    expectClose(
      placed.map((p) => p.width),
      [10, 35, 25],
      { abs: 1e-9 },
    ); // measured 4e-15
  });

  it('leave events where they are, and nothing where there is no ribbon', () => {
    const event: RibbonBlock = { kind: 'event', label: 'Shove', from: 0.2, to: 0.4, row: 1 };
    expect(placeBlocks([event], 1, 4)).toHaveLength(1);
    expect(placeBlocks([event], 1, 0)).toHaveLength(0);
    expect(countRows([event, phase(0, 1)])).toBe(2);
  });
});

describe('curves along the ribbon', () => {
  const figure = (value: number): Figure => ({
    id: 'x',
    label: 'x',
    value,
    dimension: 'torque',
    formula: '',
    inputs: [],
    source: '',
  });
  const line: LedgerLine = {
    name: 'rollTorque',
    label: 'Torque in roll',
    ask: figure(1),
    have: figure(2),
    spare: 0.5,
    at: 0.5,
    course: {
      time: Float64Array.of(0, 0.5, 1),
      ask: Float64Array.of(0, 1, 0),
      have: Float64Array.of(2, 2, 2),
    },
  };

  it('repeat one cycle to the end, each instant once', () => {
    const data = lineCurves(line, 1, 3, {});
    expect(data?.time).toEqual([0, 0.5, 1, 1.5, 2, 2.5]);
    expect(data?.curves[1]?.values).toEqual([0, 1, 0, 1, 0, 1]);
  });

  it('are left alone where nothing repeats, and drawn in the unit chosen', () => {
    const data = lineCurves(line, 0, 3, { torque: 'mN·m' });
    expect(data?.time).toEqual([0, 0.5, 1]);
    expect(data?.curves[1]?.values).toEqual([0, 1000, 0]);
  });

  it('are read at the last instant that is not after the playhead', () => {
    expect([0, 0.49, 0.5, 7].map((seconds) => indexAt([0, 0.5, 1], seconds))).toEqual([0, 0, 1, 2]);
  });
});

describe('spare in words', () => {
  it('says how much is left or missing', () => {
    expect([0.32, 0.095, -0.12, Number.NEGATIVE_INFINITY].map(spareWords)).toEqual([
      '32 % spare',
      '9.5 % spare',
      'short by 12 %',
      'nothing to give',
    ]);
    expect([0.32, -0.12, Number.NEGATIVE_INFINITY].map(sparePercent)).toEqual(['32 %', '−12 %', '−∞']);
  });
});
