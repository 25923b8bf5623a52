import type { PlanView } from '../../../core/trial';
import { useCures, useSentence } from '../../state/cures';
import { useDocument } from '../../state/document';
import { useShown } from '../../state/reading';
import { exportPlan, exportSchedule } from './exportSchedule';

/** Whether there is a plan; if none, what forbids it and what would cure it, each cure one tap. */
export function PlanState() {
  const shown = useShown();
  if (!shown) return <p className="plan-state waiting">Working it out…</p>;
  const { plan, outcome } = shown;
  const fall = outcome.kind === 'falls' && (
    <p>
      <b className="word-fails">Falls</b> in the preview after {outcome.at.toFixed(2)} s.
    </p>
  );
  switch (plan.kind) {
    case 'planned':
      return (
        <div className="plan-state" data-state={fall ? 'fails' : 'holds'}>
          <h2>Planned</h2>
          {fall || <p>The preview holds to the end.</p>}
          <p className="aside">
            {plan.course.time.length} instants · {plan.iterations} solver steps ·{' '}
            {(plan.solveSeconds * 1000).toFixed(0)} ms
          </p>
          <div className="plan-files">
            <button type="button" onClick={exportSchedule}>
              Schedule as CSV
            </button>
            <button type="button" onClick={exportPlan}>
              Plan as JSON
            </button>
          </div>
        </div>
      );
    case 'impossible':
      return (
        <div className="plan-state" data-state="fails">
          <h2>
            <b className="word-fails">No plan</b>
          </h2>
          <Why plan={plan} />
          {fall}
          <Cures />
        </div>
      );
    case 'unplanned':
      return (
        <div className="plan-state" data-state="notYet">
          <h2>Not planned</h2>
          <p>{plan.sentence}</p>
          {fall}
        </div>
      );
  }
}

function Why({ plan }: { readonly plan: Exclude<PlanView, { kind: 'planned' }> }) {
  return <p>{useSentence(plan)}</p>;
}

function Cures() {
  const state = useCures((cures) => cures.state);
  const edit = useDocument((document) => document.edit);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  if (state.kind === 'none') return null;
  if (state.kind === 'searching') return <p className="waiting">Looking for what would cure it…</p>;
  if (state.cures.length === 0) {
    return <p>No single change within the allowed ranges was found that would cure it.</p>;
  }
  return (
    <div className="cures">
      <p>{state.cures.length === 1 ? 'This would do:' : 'Any one of these would do:'}</p>
      {state.cures.map((cure) => (
        <button
          key={cure.sentence}
          type="button"
          className="wide"
          disabled={isReadOnly}
          onClick={() => edit(cure.sentence, () => cure.rig)}
        >
          {cure.sentence}
        </button>
      ))}
    </div>
  );
}
