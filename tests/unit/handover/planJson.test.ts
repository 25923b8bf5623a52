import { describe, expect, test } from 'vitest';
import { readPlanJson, writePlanJson } from '../../../src/core/handover';
import { SKIFF, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, evaluate } from '../../../src/core/trial';

const evaluationOf = (rig: typeof STRIDER) => {
  const evaluation = evaluate(
    rig,
    { isArrayOn: true, isPlanOn: true, isFeedbackOn: true },
    createEvaluationWork(() => 0),
  );
  if (evaluation.kind !== 'evaluated' || evaluation.plan.kind !== 'planned') throw new Error('it has a plan');
  return { course: evaluation.plan.course, ledger: evaluation.ledger };
};

describe('a plan as JSON', () => {
  test.each([STRIDER, SKIFF].map((rig) => [rig.name, rig] as const))(
    '%s: reads back to the last digit',
    (_, rig) => {
      const { course, ledger } = evaluationOf(rig);
      const back = readPlanJson(writePlanJson(rig, course, ledger));
      if (back.kind !== 'read') throw new Error(back.sentences.join(' '));
      const { plan } = back;
      expect(plan.time).toEqual([...course.time]);
      expect(plan.gimbals).toHaveLength(course.gyros);
      const k = 57;
      expect(plan.gimbals[1]?.tilt[k]).toBe(course.tilt[k * course.gyros + 1]);
      expect(plan.roll.torque).toEqual([...course.torque]);
      expect(plan.centreOfPressure === null).toBe(rig === SKIFF);
      expect(plan.ledger.map(({ label }) => label)).toEqual(ledger.lines.map(({ label }) => label));
    },
  );

  test('a spoiled file is refused with the field', () => {
    const { course, ledger } = evaluationOf(STRIDER);
    const text = writePlanJson(STRIDER, course, ledger).replace('"version": 1', '"version": 7');
    const back = readPlanJson(text);
    expect(back.kind).toBe('refused');
    if (back.kind === 'refused') expect(back.sentences[0]).toMatch(/^version: /);
    expect(readPlanJson('{').kind).toBe('refused');
  });
});
