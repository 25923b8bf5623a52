import type { BeforeAfter, RetunedGains, Retuning } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { Choice } from '../../fields/Choice';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { type ChosenUnits, useSession } from '../../state/session';
import { breakOffRetuning, retuneFrom, useRetuning } from './retuning';

/** New gains and a new plan from the corrected rig, beside those of the rig as it was. */
export function RetunePanel() {
  const past = useDocument((document) => document.past);
  const rig = useDocument((document) => document.rig);
  const { answer, isRunning, chosen } = useRetuning();
  if (past.length === 0) {
    return (
      <p className="bench-note">
        Nothing was changed yet: put a result into the rig under Identify, then see here what it does to gains
        and plan.
      </p>
    );
  }
  const steps = past.map((step, place) => ({ value: place, label: `before: ${step.label}` })).toReversed();
  const from = chosen !== undefined && chosen < past.length ? chosen : past.length - 1;
  const before = past[from];
  return (
    <>
      <Choice
        label="Compare with the rig"
        options={steps}
        value={from}
        onChange={(place) => useRetuning.setState({ chosen: place })}
      />
      {isRunning ? (
        <div className="bench-reading" role="status">
          <p>Planning and tuning twice…</p>
          <progress aria-label="Retuning" />
          <button type="button" onClick={breakOffRetuning}>
            Break off
          </button>
        </div>
      ) : (
        <button
          type="button"
          className="wide strong bench-go"
          onClick={() => before && void retuneFrom(before.rig, rig)}
        >
          Retune
        </button>
      )}
      {answer && !isRunning && answer.after !== rig && (
        <p className="bench-remark">The rig has changed since: retune again.</p>
      )}
      {answer && !isRunning && <Report outcome={answer.outcome} />}
    </>
  );
}

function Report({ outcome }: { readonly outcome: Retuning }) {
  const units = useSession((session) => session.units);
  if (outcome.kind === 'refused') {
    return (
      <div className="plan-state" data-state="fails">
        <h3>
          <b className="word-fails">Cannot be retuned</b>
        </h3>
        {outcome.sentences.map((sentence) => (
          <p key={sentence}>{sentence}</p>
        ))}
      </div>
    );
  }
  const { planBefore, planAfter } = outcome;
  return (
    <>
      <Gains gains={outcome.gains} />
      <Group title="Plan">
        <p>Before: {describePlan(planBefore)}</p>
        <p>After: {describePlan(planAfter)}</p>
        <table className="matrix bench-compare">
          <thead>
            <tr>
              <th scope="col">Spare</th>
              <th scope="col">before</th>
              <th scope="col">after</th>
            </tr>
          </thead>
          <tbody>
            {outcome.ledger.map((line) => (
              <tr key={line.name + line.label}>
                <th scope="row">{line.label}</th>
                <Spare spare={line.spareBefore} />
                <Spare spare={line.spareAfter} />
              </tr>
            ))}
          </tbody>
        </table>
      </Group>
      <Group title="Figures">
        <table className="matrix bench-compare">
          <thead>
            <tr>
              <th scope="col">Figure</th>
              <th scope="col">before</th>
              <th scope="col">after</th>
            </tr>
          </thead>
          <tbody>
            {outcome.figures.map((figure) => (
              <tr key={figure.name}>
                <th scope="row">{figure.label}</th>
                <td>{showFigure(figure.before, units)}</td>
                <td>{showFigure(figure.after, units)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </Group>
    </>
  );
}

const describePlan = (plan: Extract<Retuning, { kind: 'retuned' }>['planBefore']): string =>
  plan.kind === 'planned' ? 'planned.' : plan.sentence;

const showFigure = (figure: BeforeAfter['before'], units: ChosenUnits): string =>
  figure ? showQuantity(figure.value, figure.dimension, units[figure.dimension]) : '–';

const Spare = ({ spare }: { readonly spare: number | undefined }) => (
  <td className={spare !== undefined && spare < 0 ? 'word-fails' : ''}>
    {spare === undefined ? '–' : `${formatNumber(100 * spare, 2)} %`}
  </td>
);

function Gains({ gains }: { readonly gains: RetunedGains }) {
  if (gains.kind === 'none') {
    return (
      <Group title="Gains">
        <p>{gains.sentence}</p>
      </Group>
    );
  }
  const { names, before, after, oldOnNew } = gains;
  const value = (design: typeof before, place: number): string =>
    design.kind === 'designed' ? formatNumber(design.gains[place] as number, 4) : 'none';
  return (
    <Group title="Gains">
      <table className="matrix bench-compare">
        <thead>
          <tr>
            <th scope="col">Gain</th>
            <th scope="col">before</th>
            <th scope="col">after</th>
          </tr>
        </thead>
        <tbody>
          {names.map((name, place) => (
            <tr key={name}>
              <th scope="row">{name}</th>
              <td>{value(before, place)}</td>
              <td>{value(after, place)}</td>
            </tr>
          ))}
        </tbody>
      </table>
      {oldOnNew && (
        <p>
          The gains of before on the corrected rig:{' '}
          {oldOnNew.kind === 'fails' ? (
            <b className="word-fails">the loop fails.</b>
          ) : (
            `the loop holds, and bears ${formatNumber(oldOnNew.margins.delay * 1e3, 3)} ms more delay.`
          )}
        </p>
      )}
    </Group>
  );
}
