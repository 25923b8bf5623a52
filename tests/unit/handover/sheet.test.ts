import { describe, expect, it } from 'vitest';
import { hashRig } from '../../../src/core/handover';
import { cautionsFor, describeTrigger, spinRig } from '../../../src/core/physics';
import { SKIFF, STRIDER } from '../../../src/core/rig';
import { fileEnding, handOver, IMPRINT, textOf } from '../../support/madeHandover';

const strider = handOver(STRIDER);
const html = textOf(fileEnding(strider, '-calculation-sheet.html'));
const text = textOf(fileEnding(strider, '-calculation-sheet.txt'));

describe('the calculation sheet', () => {
  it('names program, date and the rig’s hash', () => {
    for (const sheet of [html, text]) {
      expect(sheet).toContain(IMPRINT.program);
      expect(sheet).toContain(IMPRINT.date);
      expect(sheet).toContain(hashRig(STRIDER));
    }
  });

  it('gives every number a formula and a source', () => {
    const rows = strider.sheet.sections
      .filter(({ title }) => title !== 'The rig as entered')
      .flatMap(({ rows }) => rows);
    expect(rows.length).toBeGreaterThan(60);
    for (const { label, result, grounds } of rows) {
      expect(result, label).not.toMatch(/NaN|undefined/);
      expect(grounds.length, label).toBeGreaterThan(0);
      for (const { formula, source } of grounds)
        expect(formula.length * source.length, label).toBeGreaterThan(0);
    }
  });

  it('holds every ledger line with limit and spare, and says which fail', () => {
    const ledger = strider.sheet.sections[0]!;
    for (const row of ledger.rows) {
      expect(row.limit, row.label).toBeTruthy();
      expect(row.spare, row.label).toMatch(/%$|∞/);
      expect(row.isFailing).toBe(row.spare!.startsWith('−'));
    }
  });

  it('lists every number of the rig as entered', () => {
    const count = (value: unknown): number =>
      typeof value === 'object' && value !== null
        ? Object.values(value).reduce((sum: number, item) => sum + count(item), 0)
        : 1;
    const entries = strider.sheet.sections.find(({ title }) => title === 'The rig as entered')!.rows;
    expect(entries).toHaveLength(count(STRIDER));
    expect(entries.find(({ note }) => note === 'body.torso.mass')).toMatchObject({
      label: 'Torso mass',
      result: '3.500 kg',
    });
    expect(text).toContain('Torso mass (body.torso.mass)');
  });

  it.each([STRIDER, SKIFF])('prints every caution the rig calls for, with what set it off', (rig) => {
    const { cautions } = spinRig(rig);
    expect(cautions.length).toBeGreaterThan(4);
    const sheet = textOf(fileEnding(handOver(rig), '-calculation-sheet.txt'));
    for (const caution of cautions) {
      expect(sheet).toContain(caution.sentence);
      expect(sheet).toContain(describeTrigger(caution.trigger));
    }
  });

  it('keeps the cautions of a wheel whose stresses cannot be worked out', () => {
    const loose = {
      kind: 'balls',
      count: 12,
      diameter: 0.006,
      pitchRadius: 0.09,
      material: 'steel 52100',
      offset: 0,
    } as const;
    const gyros = STRIDER.array.gyros.map((gyro) => ({
      ...gyro,
      wheel: { ...gyro.wheel, parts: [...gyro.wheel.parts, loose] },
    }));
    const { sheet } = handOver({ ...STRIDER, array: { gyros } });
    expect(sheet.verdicts.some(({ sentence }) => /parts\[\d\]\.pitchRadius/.test(sentence))).toBe(true);
    expect(sheet.cautions.map(({ sentence }) => sentence)).toEqual(
      strider.sheet.cautions.map(({ sentence }) => sentence),
    );
    const rim = (STRIDER.array.gyros[0]!.speed * 0.093).toPrecision(3);
    expect(sheet.cautions[0]!.because).toContain(`Rim speed ${rim} m/s`);
  });

  it('has no cautions only where there is nothing to be careful of', () => {
    expect(
      cautionsFor({
        rimSpeed: 0,
        spinEnergy: 0,
        throwHeight: 0,
        printedParts: 0,
        gimbalTorque: 0,
        batteryEnergy: 0,
      }),
    ).toEqual([]);
  });

  it('carries the rig’s picture and every plot', () => {
    expect(html.match(/<figure>/g)).toHaveLength(
      1 +
        strider.files.filter(({ name }) =>
          /-(tilt|tilt-rate|torque|momentum|pressure|spin-up-.*)\.svg$/.test(name),
        ).length,
    );
  });

  it('takes names as words, never as markup', () => {
    const sheet = textOf(
      fileEnding(handOver({ ...STRIDER, name: '<script>x</script>' }), '-calculation-sheet.html'),
    );
    expect(sheet).not.toContain('<script>');
    expect(sheet).toContain('&lt;script&gt;');
  });
});
