import { writeScheduleCsv } from '../../core/handover';
import { createEvaluationWork, evaluate, findCures } from '../../core/trial';
import type { Command } from '../command';

export const planCommand: Command = {
  name: 'plan',
  purpose: 'tilt schedule and ledger of the rig’s jobs; with --csv the schedule as a table',
  example: 'plan public/rigs/strider.json --csv',
  options: [
    { name: 'cures', meaning: 'yes or no: look for changes that cure a rig with no plan', fallback: 'yes' },
  ],
  reads: 'rig',
  run: ({ rig, options }) => {
    const wantsCures = options.choice('cures', ['yes', 'no']) === 'yes';
    if (options.faults.length > 0) return { kind: 'refused', sentences: options.faults };
    const work = createEvaluationWork(() => performance.now() / 1000);
    const evaluation = evaluate(rig, { isArrayOn: true, isPlanOn: true, isFeedbackOn: true }, work);
    if (evaluation.kind === 'refused') {
      return { kind: 'refused', sentences: evaluation.refusals.map(({ sentence }) => sentence) };
    }
    const { plan, ledger } = evaluation;
    const lines = ledger.lines.map(({ name, label, ask, have, spare, at }) => ({
      name,
      label,
      dimension: ask.dimension,
      ask: ask.value,
      have: have.value,
      spare,
      at: at ?? null,
    }));
    const names = rig.array.gyros.map(({ name }) => name);
    switch (plan.kind) {
      case 'planned': {
        const kind = lines.every(({ spare }) => spare >= 0) ? 'done' : 'failing';
        return {
          kind,
          output: { rig: rig.name, plan: plan.course, ledger: lines },
          csv: writeScheduleCsv(plan.course, names),
        };
      }
      case 'impossible': {
        const cures = wantsCures ? findCures(rig).map(({ sentence }) => sentence) : [];
        return {
          kind: 'failing',
          output: { rig: rig.name, line: plan.line, sentence: plan.sentence, cures },
        };
      }
      case 'unplanned':
        return { kind: 'failing', output: { rig: rig.name, sentence: plan.sentence } };
    }
  },
};
