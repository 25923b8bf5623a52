import type { Compared, Comparison } from '../../../core/trial';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { SmallPlot } from './SmallPlot';
import { useTrial } from './trialStore';
import { compareNow } from './trialWork';

const COMPARED_WORDS: Readonly<Record<Compared, string>> = {
  off: 'Wheels at rest',
  locked: 'Gimbals locked',
  plan: 'Plan only',
  feedback: 'Feedback only',
  both: 'Both',
};

/** The same run five ways, side by side. */
export function CompareFields() {
  const task = useTrial((trial) => trial.comparison);
  const rig = useDocument((document) => document.rig);
  return (
    <Group title="Side by side">
      <button
        type="button"
        className="wide"
        disabled={task.kind === 'busy'}
        onClick={() => void compareNow()}
      >
        {task.kind === 'busy' ? 'Running five…' : 'Compare with parts switched off'}
      </button>
      {task.kind === 'fault' && <p role="alert">{task.sentence}</p>}
      {task.kind === 'done' && (
        <>
          {task.rig !== rig && <p className="aside">Of the rig before its last change.</p>}
          <CompareTable rows={task.result} />
          <SmallMultiples rows={task.result} />
        </>
      )}
    </Group>
  );
}

function CompareTable({ rows }: { readonly rows: readonly Comparison[] }) {
  return (
    <table className="matrix trial-table">
      <thead>
        <tr>
          <th scope="col">run</th>
          <th scope="col">outcome</th>
          <th scope="col">lean</th>
          <th scope="col">tilt</th>
        </tr>
      </thead>
      <tbody>
        {rows.map(({ name, run: { figures } }) => (
          <tr key={name}>
            <th scope="row">{COMPARED_WORDS[name]}</th>
            <td>
              {figures.hasFallen ? (
                <>
                  <b className="word-fails">falls</b> {figures.fellAt.toFixed(2)} s
                </>
              ) : (
                'holds'
              )}
            </td>
            <td>{figures.hasFallen ? '–' : showQuantity(figures.peakLean, 'angle')}</td>
            <td>{showQuantity(figures.peakTilt, 'angle')}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}

/** rad: lean past this is off the picture; every picture has the same scale. */
const MOST_LEAN = 0.3;

function SmallMultiples({ rows }: { readonly rows: readonly Comparison[] }) {
  const lean = Math.min(
    MOST_LEAN,
    Math.max(0.01, ...rows.filter((r) => !r.run.figures.hasFallen).map((r) => 1.2 * r.run.figures.peakLean)),
  );
  const tilt = Math.max(0.05, ...rows.map(({ run }) => 1.1 * run.figures.peakTilt));
  return (
    <div className="small-multiples">
      {rows.map(({ name, run }) => (
        <figure key={name}>
          <figcaption>{COMPARED_WORDS[name]}</figcaption>
          <SmallPlot
            label={`Lean, ${COMPARED_WORDS[name]}`}
            look="lean"
            time={run.motion.time}
            values={run.columns.lean}
            most={lean}
          />
          <SmallPlot
            label={`Tilt, ${COMPARED_WORDS[name]}`}
            look="tilt"
            time={run.motion.time}
            values={run.motion.tilt}
            stride={Math.max(1, run.motion.gyros)}
            most={tilt}
          />
        </figure>
      ))}
      <p className="aside">
        Above lean, ±{showQuantity(lean, 'angle')}; below the first gimbal’s tilt, ±
        {showQuantity(tilt, 'angle')}. One scale for all.
      </p>
    </div>
  );
}
