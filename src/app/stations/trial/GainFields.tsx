import { useEffect, useState } from 'react';
import { LAW_GAINS } from '../../../core/control';
import { controlOf, type GainReport } from '../../../core/trial';
import { formatNumber } from '../../../core/units';
import type { GainMapView, SpeedView } from '../../../workers';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { gainWord } from './ControlFields';
import { GainMapPicture } from './GainMapPicture';
import { Figure } from './TrialResult';
import { useTrial } from './trialStore';
import { computeInto, trialPool } from './trialWork';

/** Gains computed for the hardware, how far they are from trouble, their map, and what a slower wheel does to them. */
export function GainFields() {
  const gains = useTrial((trial) => trial.shown?.gains);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const [tried, setTried] = useState<GainReport>();
  const [isComputing, setComputing] = useState(false);
  const [refusal, setRefusal] = useState<string>();
  const report = gains?.kind === 'report' ? gains.report : undefined;

  // A point being dragged is about these gains only.
  // biome-ignore lint/correctness/useExhaustiveDependencies: other gains end the trying
  useEffect(() => setTried(undefined), [report]);

  const compute = async (): Promise<void> => {
    setComputing(true);
    try {
      setRefusal(await computeInto('own', 'Compute gains'));
    } catch (error) {
      setRefusal(`The computation broke off: ${error instanceof Error ? error.message : String(error)}.`);
    }
    setComputing(false);
  };

  return (
    <Group title="Gains">
      <button
        type="button"
        className="wide"
        disabled={isComputing || isReadOnly}
        onClick={() => void compute()}
      >
        {isComputing ? 'Computing…' : 'Compute gains and write them in'}
      </button>
      {refusal && <p role="alert">{refusal}</p>}
      {report && (
        <>
          <MarginFigures report={tried ?? report} />
          <GainMap report={report} onTry={setTried} />
          <SpeedTable report={report} />
        </>
      )}
    </Group>
  );
}

function MarginFigures({ report }: { readonly report: GainReport }) {
  const { verdict, leastSpeed, loop } = report;
  if (verdict.kind === 'fails') {
    return (
      <p className="trial-verdict">
        <b className="word-fails">Does not hold</b>: its lean grows e-fold in{' '}
        {showQuantity(1 / verdict.growth, 'time')}.
      </p>
    );
  }
  const { margins, decay } = verdict;
  const times = (factor: number): string => (factor > 99 ? 'without end' : `× ${formatNumber(factor, 3)}`);
  return (
    <dl className="trial-margins" aria-label="Margins">
      <Figure term="Gain may grow" value={times(margins.gainUp)} />
      <Figure term="Gain may fall" value={margins.gainDown > 0 ? times(margins.gainDown) : 'to nothing'} />
      <Figure
        term="Phase margin"
        value={Number.isFinite(margins.phase) ? showQuantity(margins.phase, 'angle') : 'any'}
      />
      <Figure
        term="Delay margin"
        value={Number.isFinite(margins.delay) ? `${formatNumber(1000 * margins.delay, 3)} ms` : 'any'}
      />
      <Figure term="Largest sensitivity" value={formatNumber(margins.sensitivity, 3)} />
      <Figure term="Settles e-fold in" value={showQuantity(1 / decay, 'time')} />
      <Figure
        term="Least wheel speed"
        value={
          leastSpeed.kind === 'found'
            ? `${formatNumber(100 * leastSpeed.share, 3)} % of full`
            : leastSpeed.kind === 'always'
              ? 'holds at rest'
              : 'never holds'
        }
      />
      <Figure term="Delay now" value={`${formatNumber(1000 * loop.plant.delay, 3)} ms + lag`} />
    </dl>
  );
}

function GainMap({
  report,
  onTry,
}: {
  readonly report: GainReport;
  readonly onTry: (report: GainReport | undefined) => void;
}) {
  const [map, setMap] = useState<GainMapView>();
  const edit = useDocument((document) => document.edit);
  useEffect(() => {
    let isGone = false;
    trialPool()
      .ask.map(report)
      .then((found) => {
        if (!isGone) setMap(found);
      })
      // A worker that was stopped answers nothing: the next gains bring another map.
      .catch(() => {});
    return () => {
      isGone = true;
    };
  }, [report]);
  if (!map) return <p className="waiting">Drawing the map of stable gains…</p>;
  return (
    <GainMapPicture
      map={map}
      report={report}
      onTry={(gains) => {
        void trialPool().ask.judge(report, gains).then(onTry);
      }}
      onTake={(gains) =>
        edit('Drag the gains', (rig) => ({ ...rig, control: controlOf(report.loop.law, gains) }))
      }
    />
  );
}

function SpeedTable({ report }: { readonly report: GainReport }) {
  const [rows, setRows] = useState<readonly SpeedView[]>();
  useEffect(() => {
    let isGone = false;
    trialPool()
      .ask.speeds(report)
      .then((found) => {
        if (!isGone) setRows(found);
      })
      .catch(() => {});
    return () => {
      isGone = true;
    };
  }, [report]);
  if (!rows) return null;
  const names = LAW_GAINS[report.loop.law];
  const shown = [0, 1, 2].filter((i) => i < names.length);
  return (
    <>
      <h4>Against wheel speed</h4>
      <table className="matrix trial-table">
        <thead>
          <tr>
            <th scope="col">speed</th>
            {shown.map((i) => (
              <th scope="col" key={names[i]}>
                {gainWord(names[i] as string)}
              </th>
            ))}
            <th scope="col">unchanged</th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ share, scaled, holdsAsTheyAre }) => (
            <tr key={share}>
              <th scope="row">{Math.round(100 * share)} %</th>
              {shown.map((i) => (
                <td key={names[i]}>{formatNumber(scaled[i] as number, 3)}</td>
              ))}
              <td>{holdsAsTheyAre ? 'holds' : <b className="word-fails">fails</b>}</td>
            </tr>
          ))}
        </tbody>
      </table>
      <p className="aside">
        Gains so scaled leave the loop as it was, while tilt and servo have room; “unchanged” is what becomes
        of the present ones, as on a flat battery.
      </p>
    </>
  );
}
