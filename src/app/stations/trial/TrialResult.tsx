import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useTrial } from './trialStore';
import { exportRun } from './trialWork';

/** How the run went, in words and four numbers. */
export function TrialResult() {
  const { shown, isRunning, fault, seed, set } = useTrial();
  const rig = useDocument((document) => document.rig);
  if (fault) return <p className="plan-state">{fault}</p>;
  if (!shown) return <p className="plan-state waiting">Running the trial…</p>;
  const { figures } = shown.run;
  const isOld = shown.rig !== rig;
  const rate = rig.sensing.loopRate;
  return (
    <div className="plan-state trial-result" data-state={figures.hasFallen ? 'fails' : 'holds'}>
      <h3 aria-live="polite">
        {figures.hasFallen ? (
          <>
            <b className="word-fails">Falls</b> after {figures.fellAt.toFixed(2)} s
          </>
        ) : (
          'Holds to the end'
        )}
      </h3>
      <dl>
        <Figure term="Largest lean" value={showQuantity(figures.peakLean, 'angle')} />
        <Figure term="Lean, r.m.s." value={showQuantity(figures.meanLean, 'angle')} />
        <Figure term="Largest tilt" value={showQuantity(figures.peakTilt, 'angle')} />
        <Figure term="Servo torque" value={showQuantity(figures.peakTorque, 'torque')} />
      </dl>
      <p className="aside">
        {rate} Hz loop, noise {seed}
        {!shown.isPlanned && ', no plan: feedback alone'}
        {figures.saturatedTime > 0 &&
          `, servo at its limit for ${showQuantity(figures.saturatedTime, 'time')}`}
        {(isOld || isRunning) && ' · running again…'}
      </p>
      <div className="trial-buttons">
        <button type="button" onClick={() => set({ seed: seed + 1 })}>
          Other noise
        </button>
        <button type="button" onClick={exportRun}>
          Record as CSV
        </button>
      </div>
    </div>
  );
}

export function Figure({ term, value }: { readonly term: string; readonly value: string }) {
  return (
    <div>
      <dt>{term}</dt>
      <dd>{value}</dd>
    </div>
  );
}
