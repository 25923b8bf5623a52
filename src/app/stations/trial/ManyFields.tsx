import type { CSSProperties } from 'react';
import type { QuantityInfo } from '../../../core/rig';
import {
  type Influence,
  type ManySummary,
  type SurvivalPoint,
  TOLERANCE_FIELDS,
  TOLERANCE_NAMES,
} from '../../../core/trial';
import { Choice } from '../../fields/Choice';
import { NumberField } from '../../fields/NumberField';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { type ManyChoice, useTrial } from './trialStore';
import { cancelMany, startMany } from './trialWork';

const SECONDS: QuantityInfo = { label: 'Length of each run', dimension: 'time', min: 0.5, max: 600 };
const MOST: QuantityInfo = { label: 'A shove of up to', dimension: 'impulse', min: 0, max: 1e5 };
const HEIGHT: QuantityInfo = { label: 'Shoved at a height of', dimension: 'length', min: -5, max: 20 };
const COUNTS = [200, 1000, 5000] as const;

/** Many rigs, none quite as drawn: how many hold, up to which shove, and which tolerance matters. */
export function ManyFields() {
  const { many, choice, set } = useTrial();
  const rig = useDocument((document) => document.rig);
  const change = (part: Partial<ManyChoice>): void => set({ choice: { ...choice, ...part } });
  const isBusy = many.kind === 'busy';
  return (
    <Group title="Randomised runs">
      <Choice
        label="Runs"
        options={COUNTS.map((value) => ({ value, label: String(value) }))}
        value={choice.runs}
        onChange={(runs) => change({ runs })}
      />
      <NumberField info={SECONDS} value={choice.seconds} onChange={(seconds) => change({ seconds })} />
      <NumberField info={MOST} value={choice.shoveMost} onChange={(shoveMost) => change({ shoveMost })} />
      <NumberField
        info={HEIGHT}
        value={choice.shoveHeight}
        onChange={(shoveHeight) => change({ shoveHeight })}
      />
      <details className="trial-tolerances">
        <summary>Tolerances</summary>
        {TOLERANCE_NAMES.map((name) => (
          <NumberField
            key={name}
            info={TOLERANCE_FIELDS[name]}
            value={choice.tolerances[name]}
            onChange={(value) => change({ tolerances: { ...choice.tolerances, [name]: value } })}
          />
        ))}
        <p className="aside">Each drawn evenly either way.</p>
      </details>
      {isBusy ? (
        <>
          <progress max={many.of} value={many.done} aria-label="Runs done" />
          <p aria-live="off">
            {many.done} of {many.of} runs
          </p>
          <button type="button" className="wide" onClick={cancelMany}>
            Cancel
          </button>
        </>
      ) : (
        <button type="button" className="wide" onClick={() => void startMany()}>
          Run {choice.runs} trials
        </button>
      )}
      {many.kind === 'fault' && <p role="alert">{many.sentence}</p>}
      {many.kind === 'done' && (
        <>
          {many.rig !== rig && <p className="aside">Of the rig before its last change.</p>}
          <Summary summary={many.result} seconds={many.seconds} />
        </>
      )}
    </Group>
  );
}

const percent = (share: number): string => `${(100 * share).toFixed(1)} %`;

function Summary({ summary, seconds }: { readonly summary: ManySummary; readonly seconds: number }) {
  const { success, medianLean, highLean, survival, influences } = summary;
  return (
    <div className="many-summary">
      <p className="many-rate">
        <b>{percent(success.rate)}</b> hold
        <span>
          {success.held} of {success.runs}; {percent(success.low)} to {percent(success.high)} with 95 %
          confidence
        </span>
      </p>
      <p className="aside">
        Largest lean {showQuantity(medianLean, 'angle')} in the middle run, {showQuantity(highLean, 'angle')}{' '}
        in one of twenty. {seconds.toFixed(1)} s.
      </p>
      {survival.length > 0 && <SurvivalPlot points={survival} />}
      <Influences influences={influences} />
    </div>
  );
}

const WIDTH = 300;
const TALL = 120;

/** Share that holds against size of shove, each with the interval it is known to. */
function SurvivalPlot({ points }: { readonly points: readonly SurvivalPoint[] }) {
  const most = points.at(-1)?.to ?? 1;
  const x = (value: number): number => (WIDTH * value) / most;
  const y = (share: number): number => TALL * (1 - share);
  const middle = (point: SurvivalPoint): number => x((point.from + point.to) / 2);
  const known = points.filter((point) => point.runs > 0);
  return (
    <figure className="survival">
      <figcaption>Held, against size of shove</figcaption>
      <svg viewBox={`-2 -6 ${WIDTH + 4} ${TALL + 12}`} role="img" aria-label="Survival against size of shove">
        <line className="small-plot-zero" x1="0" y1={TALL} x2={WIDTH} y2={TALL} />
        <line className="small-plot-zero" x1="0" y1="0" x2={WIDTH} y2="0" />
        {known.map((point) => (
          <line
            key={point.from}
            className="survival-interval"
            x1={middle(point)}
            y1={y(point.low)}
            x2={middle(point)}
            y2={y(point.high)}
          />
        ))}
        <polyline
          className="small-plot-tilt"
          points={known.map((point) => `${middle(point)},${y(point.rate)}`).join(' ')}
        />
        {known.map((point) => (
          <circle key={point.from} className="survival-point" cx={middle(point)} cy={y(point.rate)} r="3.5" />
        ))}
      </svg>
      <p className="survival-scale">
        <span>0</span>
        <span>{showQuantity(most, 'impulse')}</span>
      </p>
      <p className="aside">Top line: all hold. Bars: 95 % intervals (Wilson).</p>
    </figure>
  );
}

const KNOCK = 'Shove out of the blue';

function Influences({ influences }: { readonly influences: readonly Influence[] }) {
  return (
    <>
      <h4>What the largest lean depends on</h4>
      <ul className="influences">
        {influences.map(({ name, share }) => (
          <li key={name}>
            <span>{name === 'knock' ? KNOCK : TOLERANCE_FIELDS[name].label.replace(/, ±.*/, '')}</span>
            <i style={{ '--share': share } as CSSProperties} aria-hidden />
            <b>{share < 0.005 ? '–' : percent(share)}</b>
          </li>
        ))}
      </ul>
      <p className="aside">
        Share of its spread that each explains by itself: correlation ratio over classes, chance taken off
        (Pearson; Kelley 1935; as a first-order sensitivity, Plischke et al. 2013). What is missing from 100 %
        is noise and tolerances acting together.
      </p>
    </>
  );
}
