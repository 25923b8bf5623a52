import { describe, expect, test } from 'vitest';
import { type Rig, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, diagnose, evaluate } from '../../../src/core/trial';

const switches = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };
const clock = () => 0;

const withStepTime = (stepTime: number): Rig => {
  const { gait } = STRIDER.jobs;
  if (gait.kind !== 'pattern') throw new Error('Strider walks');
  return { ...STRIDER, jobs: { ...STRIDER.jobs, gait: { ...gait, stepTime } } };
};

const planOf = (rig: Rig, isBrief: boolean) => {
  const evaluation = evaluate(rig, switches, createEvaluationWork(clock, isBrief));
  if (evaluation.kind !== 'evaluated') throw new Error('it is a rig');
  return evaluation.plan;
};

describe('a plan that cannot be', () => {
  const slow = withStepTime(3);

  test('is named at once and measured afterwards, with the same words as all in one', () => {
    const brief = planOf(slow, true);
    const full = planOf(slow, false);
    if (brief.kind !== 'impossible' || full.kind !== 'impossible') throw new Error('both are impossible');
    expect(brief.sentence).toMatch(/^No plan exists: .* falls short\.$/);
    expect(full.sentence).toMatch(/falls short by \d/);
    expect(diagnose(slow)).toEqual({ line: full.line, sentence: full.sentence });
  });

  test('a rig with a plan has nothing to explain', () => {
    expect(diagnose(STRIDER)).toBeUndefined();
  });
});
