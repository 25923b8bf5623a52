import { describe, expect, test } from 'vitest';
import { PACER, STRIDER } from '../../../src/core/rig';
import { createEvaluationWork, evaluate } from '../../../src/core/trial';
import { withLayout } from '../../support/plannedRigs';

const evaluationOf = (rig: typeof PACER) => {
  const work = createEvaluationWork(() => 0);
  const all = { isArrayOn: true, isPlanOn: true, isFeedbackOn: true };
  const evaluation = evaluate(rig, all, work);
  if (evaluation.kind !== 'evaluated') throw new Error('it is a rig');
  return evaluation;
};

const meanMiss = ({ motion }: ReturnType<typeof evaluationOf>, gyro: number): number => {
  let sum = 0;
  for (let k = 0; k < motion.samples; k++) {
    const at = k * motion.gyros + gyro;
    sum += Math.abs((motion.tilt[at] as number) - (motion.plannedTilt[at] as number));
  }
  return sum / motion.samples;
};

describe('a preview of servos that share a command', () => {
  test('a pyramid follows its steered plan through the gait and holds', () => {
    const evaluation = evaluationOf(withLayout(PACER, 'pyramid'));
    expect(evaluation.plan.kind).toBe('planned');
    expect(evaluation.outcome.kind).toBe('holds');
    for (let gyro = 0; gyro < 4; gyro++) {
      // delay and lag of the servo at the rates asked, and feedback: measured 0.059 rad at most
      expect(meanMiss(evaluation, gyro), `gimbal ${gyro}`).toBeLessThan(0.08);
    }
    const most = evaluation.motion.plannedTilt.reduce((a, b) => Math.max(a, Math.abs(b)), 0);
    expect(most).toBeGreaterThan(0.2);
  });

  test('pitch gimbals follow theirs beside those of roll', () => {
    const evaluation = evaluationOf(withLayout(STRIDER, 'two pairs'));
    if (evaluation.plan.kind !== 'planned') throw new Error('it has a plan');
    // measured 0.0145 rad
    expect(meanMiss(evaluation, 2)).toBeLessThan(0.02);
    const { plannedTilt } = evaluation.motion;
    const pitch = plannedTilt.filter((_, at) => at % 4 === 2).map(Math.abs);
    expect(Math.max(...pitch)).toBeGreaterThan(0.02);
  });
});
