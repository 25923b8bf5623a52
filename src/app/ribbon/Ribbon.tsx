import { useMemo } from 'react';
import type { Jobs } from '../../core/rig';
import type { Evaluation } from '../../core/trial';
import { useDocument } from '../state/document';
import { useIsNarrow } from '../state/looks';
import { useShown } from '../state/reading';
import { useSession } from '../state/session';
import { courseOf, type Evaluated } from '../state/stream';
import { EventBlock } from './EventBlock';
import './events.css';
import { Playhead } from './Playhead';
import { RibbonPlot } from './RibbonPlot';
import { countRows, eventRows, placeBlocks } from './ribbonBlocks';
import { lineCurves, momentCurves, momentumCurves, pressureCurves, tiltCurves } from './ribbonCurves';
import { Transport } from './Transport';

/** The time strip: blocks, curves on one time axis, and the playhead. */
export function Ribbon() {
  const shown = useShown();
  return (
    <section className="ribbon" aria-label="Ribbon">
      <Transport />
      {shown ? <RibbonBody shown={shown} /> : <p className="waiting">Working it out…</p>}
    </section>
  );
}

function RibbonBody({ shown }: { readonly shown: Evaluated }) {
  const rig = useDocument((document) => document.rig);
  const units = useSession((session) => session.units);
  const openedLine = useSession((session) => session.openedLine);
  const lowerCurves = useSession((session) => session.lowerCurves);
  const isNarrow = useIsNarrow();
  const { motion } = shown;
  const length = motion.samples > 1 ? (motion.time[motion.samples - 1] as number) : 0;

  const { sequence, gait } = rig.jobs;
  const cycle = cycleOf(shown, gait.kind !== 'stand' && sequence.length === 0);
  const tilt = useMemo(() => tiltCurves(shown, rig, units), [shown, rig, units]);
  const lower = useMemo(() => {
    const line = shown.ledger.lines.find((candidate) => candidate.label === openedLine);
    const ofLine =
      line && (line.name === 'centreOfPressure' ? undefined : lineCurves(line, cycle, length, units));
    if (ofLine) return ofLine;
    const wanted = line?.name === 'centreOfPressure' ? 'pressure' : lowerCurves;
    const pressure = wanted === 'pressure' ? pressureCurves(shown, cycle, length, units) : undefined;
    return pressure ?? (wanted === 'momentum' ? momentumCurves(shown, units) : momentCurves(shown, units));
  }, [shown, openedLine, lowerCurves, cycle, length, units]);

  return (
    <div className="ribbon-body">
      <Blocks shown={shown} cycle={cycle} length={length} />
      {sequence.length > 0 && <Events sequence={sequence} length={length} />}
      {!isNarrow && <RibbonPlot data={tilt} length={length} hasTimeAxis={false} />}
      <RibbonPlot data={isNarrow && openedLine === undefined ? tilt : lower} length={length} hasTimeAxis />
      <Fall outcome={shown.outcome} length={length} />
      <Playhead />
    </div>
  );
}

/** s, after which the plan repeats itself; 0 for a run that is gone through once. */
const cycleOf = (shown: Evaluated, isGait: boolean): number =>
  isGait ? (courseOf(shown)?.time.at(-1) ?? 0) : 0;

interface BlocksProps {
  readonly shown: Evaluated;
  readonly length: number;
  readonly cycle: number;
}

function Blocks({ shown, length, cycle }: BlocksProps) {
  const course = courseOf(shown);
  // Disturbances have blocks of their own, drawn from the rig so that they follow a finger at once.
  const phases = useMemo(() => course?.blocks.filter(({ kind }) => kind === 'phase') ?? [], [course]);
  const placed = useMemo(() => placeBlocks(phases, cycle, length), [phases, cycle, length]);
  const rows = countRows(phases);
  if (rows === 0) return null;
  return (
    <ol className="blocks" style={{ gridTemplateRows: `repeat(${rows}, var(--block-height))` }}>
      {placed.map(({ block, key, left, width }) => (
        <li
          key={key}
          data-kind={block.kind}
          style={{ gridRow: block.row + 1, left: `${left}%`, width: `${width}%` }}
          title={block.label}
        >
          <span>{block.label}</span>
        </li>
      ))}
    </ol>
  );
}

/** Disturbances in as few rows as keep them from lying over one another. */
function Events({ sequence, length }: { readonly sequence: Jobs['sequence']; readonly length: number }) {
  const rows = eventRows(sequence, length);
  return (
    <ol className="events" aria-label="Sequence">
      {sequence.map((event, index) => (
        // Two events may be equal in everything, so their place is their name.
        // biome-ignore lint/suspicious/noArrayIndexKey: see above
        <EventBlock key={index} event={event} index={index} row={rows[index] ?? 0} length={length} />
      ))}
    </ol>
  );
}

type Outcome = Extract<Evaluation, { kind: 'evaluated' }>['outcome'];

/** From the instant at which the body goes over, the ribbon is hatched and says so. */
function Fall({ outcome, length }: { readonly outcome: Outcome; readonly length: number }) {
  if (outcome.kind === 'holds' || !(length > 0)) return null;
  return (
    <div className="fall">
      <div style={{ left: `${Math.min(100, (100 * outcome.at) / length)}%` }}>
        <b className="word-fails">Falls</b>
      </div>
    </div>
  );
}
