import { readFileSync } from 'node:fs';
import Ajv from 'ajv';
import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import type { HandoverDocument } from '../../../src/core/handover';
import { hashRig } from '../../../src/core/handover';
import { PACER, type Rig, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, evaluate } from '../../../src/core/trial';
import { expectClose } from '../../support/closeTo';
import { fileEnding, handOver, textOf } from '../../support/madeHandover';

const strider = handOver(STRIDER);
const schema = JSON.parse(readFileSync('public/tiltwright-handover.schema.json', 'utf8')) as object;
const validate = new Ajv({ strict: false }).compile(schema);

const planOf = (rig: Rig) => {
  const evaluation = evaluate(
    rig,
    { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
    createEvaluationWork(() => 0),
  );
  if (evaluation.kind !== 'evaluated' || evaluation.plan.kind !== 'planned') throw new Error('no plan');
  return evaluation.plan.course;
};

/** Feet that may not sway: there is no plan for it. */
const stiff: Rig =
  STRIDER.jobs.gait.kind === 'pattern'
    ? { ...STRIDER, jobs: { ...STRIDER.jobs, gait: { ...STRIDER.jobs.gait, sway: 0.004 } } }
    : STRIDER;

describe('the control document', () => {
  it('holds to its published schema, and a document that does not is refused', () => {
    const document = JSON.parse(textOf(fileEnding(strider, '-control.json'))) as HandoverDocument;
    expect(validate(document), JSON.stringify(validate.errors)).toBe(true);
    expect(validate({ ...document, version: 2 })).toBe(false);
    expect(validate({ ...document, more: 1 })).toBe(false);
    expect(validate({ ...document, rig: { ...document.rig, sha256: 'abc' } })).toBe(false);
    expect(
      validate({ ...document, schedule: { kind: 'schedule', isCyclic: true, time: ['0'], gimbals: [] } }),
    ).toBe(false);
  });

  it('has the plan to the last digit, and the rig’s hash', () => {
    const document = JSON.parse(textOf(fileEnding(strider, '-control.json'))) as HandoverDocument;
    const course = planOf(STRIDER);
    if (document.schedule.kind === 'none' || document.gains.kind === 'none') throw new Error('empty');
    expect(document.schedule.time).toEqual(Array.from(course.time));
    document.schedule.gimbals.forEach(({ tilt, tiltRate }, gyro) => {
      expect(tilt).toEqual(Array.from(course.time, (_, k) => course.tilt[k * course.gyros + gyro]));
      expect(tiltRate).toEqual(Array.from(course.time, (_, k) => course.tiltRate[k * course.gyros + gyro]));
    });
    expect(document.rig.sha256).toBe(hashRig(STRIDER));
    expect(document.gains.loopRate).toBe(STRIDER.sensing.loopRate);
    expect(document.gyros[0]!.momentum).toBe(-document.gyros[1]!.momentum);
  });
});

describe('gains as CSV', () => {
  it('are read back as they stand in the document', () => {
    const document = JSON.parse(textOf(fileEnding(strider, '-control.json'))) as HandoverDocument;
    const { data, errors } = Papa.parse<Record<string, string>>(textOf(fileEnding(strider, '-gains.csv')), {
      header: true,
      skipEmptyLines: true,
    });
    expect(errors).toEqual([]);
    if (document.gains.kind === 'none') throw new Error('no gains');
    expect(data.map(({ gain }) => gain)).toEqual(document.gains.gains.map(({ name }) => name));
    expect(data.map((row) => row['unit (SI)'])).toEqual(document.gains.gains.map(({ unit }) => unit));
    expectClose(
      data.map(({ value }) => Number(value)),
      document.gains.gains.map(({ value }) => value),
      { rel: 1e-8 },
    ); // measured 1.4e-9
  });
});

describe('a rig with no plan', () => {
  it('hands over what can be written, and says why the rest is missing', () => {
    const handover = handOver(stiff);
    expect(handover.noPlan).toMatch(/falls short by/);
    const names = handover.files.map(({ name }) => name);
    expect(names.filter((name) => name.endsWith('.csv'))).toEqual(['strider-gains.csv']);
    expect(names).toEqual(
      expect.arrayContaining(['strider.urdf', 'strider.glb', 'strider-calculation-sheet.html']),
    );
    const document = JSON.parse(textOf(fileEnding(handover, '-control.json'))) as HandoverDocument;
    expect(validate(document), JSON.stringify(validate.errors)).toBe(true);
    expect(document.schedule).toEqual({ kind: 'none', sentence: handover.noPlan });
    expect(textOf(fileEnding(handover, '-calculation-sheet.txt'))).toContain(`FAILS: ${handover.noPlan}`);
  });
});

describe('file names', () => {
  it('are plain whatever the rig is called, and no two alike', () => {
    const gyros = PACER.array.gyros.map((gyro, i) => ({
      ...gyro,
      wheel: {
        ...gyro.wheel,
        name: '../Ünit/?',
        parts: gyro.wheel.parts.map((part) => ({ ...part, offset: part.offset + i * 1e-4 })),
      },
    }));
    const names = handOver({ ...PACER, name: '../../étude *', array: { gyros } }).files.map(
      ({ name }) => name,
    );
    for (const name of names) expect(name).toMatch(/^[a-z0-9][a-z0-9_.-]*$/);
    expect(new Set(names).size).toBe(names.length);
  });
});
