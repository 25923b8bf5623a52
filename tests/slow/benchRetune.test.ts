import { describe, expect, it } from 'vitest';
import type { Patch } from '../../src/core/bench/identify/result';
import { closedLoopRigOf, retune } from '../../src/core/bench/retune';
import { patchRig } from '../../src/core/bench/rigPatch';
import { DEMONSTRATIONS, SKIFF, STRIDER } from '../../src/core/rig';
import { createEvaluationWork } from '../../src/core/trial';

const patch = (quantity: Patch['quantity'], value: number, unit = ''): Patch => ({
  quantity,
  value,
  low: 0.9 * value,
  high: 1.1 * value,
  unit,
});
const work = createEvaluationWork(() => 0);

describe('retuning', () => {
  it('shows plan, ledger and gains before and after; a slower servo leaves less margin to the old gains', () => {
    const { rig } = patchRig(SKIFF, [patch('servoDelay', 0.05), patch('servoLag', 0.09)]);
    const outcome = retune(SKIFF, rig, work);
    if (outcome.kind === 'refused') throw new Error(outcome.sentences.join());
    expect(outcome.ledger.length).toBeGreaterThan(5);
    expect(outcome.ledger.every((l) => l.before && l.after)).toBe(true);
    const { gains } = outcome;
    if (gains.kind !== 'retuned') throw new Error(gains.sentence);
    expect([gains.before.kind, gains.after.kind]).toEqual(['designed', 'designed']);
    if (gains.before.kind !== 'designed' || gains.after.kind !== 'designed') return;
    expect(
      gains.oldOnNew?.kind === 'fails' || (gains.oldOnNew?.margins.delay ?? 0) < gains.before.margins.delay,
    ).toBe(true);
    expect([...gains.after.gains]).not.toEqual([...gains.before.gains]);
  });
  it('an unchanged rig comes out the same', () => {
    const outcome = retune(SKIFF, SKIFF, work);
    if (outcome.kind === 'refused') throw new Error(outcome.sentences.join());
    for (const line of outcome.figures) expect(line.after?.value).toBe(line.before?.value);
    const { gains } = outcome;
    if (gains.kind !== 'retuned' || gains.before.kind !== 'designed') throw new Error('no gains');
    expect(gains.oldOnNew?.kind === 'holds' && gains.oldOnNew.margins).toEqual(gains.before.margins);
  });
  it('says why there is nothing to tune with the feet flat', () => {
    const outcome = retune(STRIDER, STRIDER, work);
    expect(outcome.kind === 'retuned' && outcome.gains).toMatchObject({
      kind: 'none',
      sentence: expect.stringMatching(/feet flat/),
    });
  });
  it('tells what a closed-loop run is compared with, for every demonstration that leans', () => {
    const found = DEMONSTRATIONS.map(({ rig }) => closedLoopRigOf(rig)).filter((r) => !('kind' in r));
    expect(found.length).toBeGreaterThan(0);
    for (const r of found) if (!('kind' in r)) expect(r.inertia * r.momentum * r.weight).toBeGreaterThan(0);
  });
});
