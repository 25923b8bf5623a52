import type { QuantityInfo } from '../../../core/rig';
import type { LargestShove } from '../../../core/trial';
import { NumberField } from '../../fields/NumberField';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useTrial } from './trialStore';
import { findLargestNow, shoveNow } from './trialWork';

const IMPULSE: QuantityInfo = { label: 'Shove', dimension: 'impulse', min: 0, max: 1e5 };
const HEIGHT: QuantityInfo = { label: 'Height above ground', dimension: 'length', min: -5, max: 20 };

/** Shoves the run at the playhead, and finds the largest it survives. */
export function ShoveFields() {
  const { impulse, height, surprises, set } = useTrial();
  return (
    <Group title="Shove it">
      <NumberField info={IMPULSE} value={impulse} onChange={(value) => set({ impulse: value })} />
      <NumberField info={HEIGHT} value={height} onChange={(value) => set({ height: value })} />
      <div className="trial-buttons">
        <button type="button" onClick={() => shoveNow(impulse)}>
          ← To the left
        </button>
        <button type="button" onClick={() => shoveNow(-impulse)}>
          To the right →
        </button>
      </div>
      {surprises.length > 0 && (
        <ul className="trial-shoves" aria-label="Shoves">
          {surprises.map((shove, index) => (
            // Two shoves may be equal in everything, so their place is their name.
            // biome-ignore lint/suspicious/noArrayIndexKey: see above
            <li key={index}>
              <span>
                {shove.time.toFixed(2)} s: {showQuantity(Math.abs(shove.impulse), 'impulse')} to the{' '}
                {shove.impulse > 0 ? 'left' : 'right'}
              </span>
              <button
                type="button"
                className="quiet"
                aria-label={`Take out the shove at ${shove.time.toFixed(2)} s`}
                onClick={() => set({ surprises: surprises.filter((_, k) => k !== index) })}
              >
                Take out
              </button>
            </li>
          ))}
        </ul>
      )}
      <Largest />
    </Group>
  );
}

function Largest() {
  const task = useTrial((trial) => trial.largest);
  const rig = useDocument((document) => document.rig);
  return (
    <>
      <button
        type="button"
        className="wide"
        disabled={task.kind === 'busy'}
        onClick={() => void findLargestNow()}
      >
        {task.kind === 'busy' ? 'Looking…' : 'Largest shove it survives'}
      </button>
      {task.kind === 'fault' && <p>{task.sentence}</p>}
      {task.kind === 'done' && (
        <>
          <table className="matrix trial-table">
            <thead>
              <tr>
                <th scope="col">to the</th>
                <th scope="col">survived</th>
                <th scope="col">closed form</th>
              </tr>
            </thead>
            <tbody>
              <LargestRow side="left" found={task.result.left} />
              <LargestRow side="right" found={task.result.right} />
            </tbody>
          </table>
          {task.rig !== rig && <p className="aside">Of the rig before its last change.</p>}
          <LargestTerms found={task.result.left} />
        </>
      )}
    </>
  );
}

function LargestRow({ side, found }: { readonly side: 'left' | 'right'; readonly found: LargestShove }) {
  return (
    <tr>
      <th scope="row">{side}</th>
      <td>{showQuantity(found.held, 'impulse')}</td>
      <td>{found.bound === undefined ? '–' : showQuantity(found.bound, 'impulse')}</td>
    </tr>
  );
}

function LargestTerms({ found: { terms } }: { readonly found: LargestShove }) {
  if (!terms) return <p className="aside">The body rights itself, so no closed form bounds the shove.</p>;
  return (
    <div className="grounds">
      <p className="grounds-formula">
        P z = M (1 − e<sup>−a ΔH / M</sup>) / a{terms.rest > 0 && ' + 2 I a sin(φ/2)'}
      </p>
      <p className="grounds-source">
        a = √(k/I) = {Math.sqrt(terms.stiffness / terms.inertia).toFixed(2)} 1/s, ΔH ={' '}
        {showQuantity(terms.momentum, 'angularMomentum')} left to give, M ={' '}
        {showQuantity(terms.torque, 'torque')} at the speed the servo keeps
        {terms.rest > 0 &&
          `, φ = ${showQuantity(terms.rest, 'angle')} before weight topples it over the sole`}
        . For a body that stands; a gait’s later steps and its plan are in the survived one only.
      </p>
    </div>
  );
}
