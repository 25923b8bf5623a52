import { useState } from 'react';
import type { Holding, HoldingAsk } from '../../../core/planning';
import { FigureRow } from '../../sheet/FigureRow';
import { useDocument } from '../../state/document';
import { CourseStrip } from './CourseStrip';
import { Fold } from './Fold';
import { OwnNumber } from './OwnNumber';
import { planPool } from './planPool';
import { useSettledAnswer } from './usePlanTask';

/** The largest shove, from rest and from every instant; how long a steady load is held; what brings the wheels back. */
export const HoldingFold = () => (
  <Fold title="Shoves and steady loads">
    <HoldingFields />
  </Fold>
);

function HoldingFields() {
  const rig = useDocument((document) => document.rig);
  const [ask, setAsk] = useState<HoldingAsk>({ height: 0.3, sideForce: 1, trimError: 0.005, recentring: 2 });
  const holding = useSettledAnswer(() => planPool.holding(rig, ask), rig, ask);
  const change = (part: Partial<HoldingAsk>) => setAsk((before) => ({ ...before, ...part }));
  return (
    <>
      <OwnNumber
        label="Shoved at a height of"
        dimension="length"
        min={0.001}
        max={20}
        value={ask.height}
        onChange={(height) => change({ height })}
      />
      <OwnNumber
        label="Steady side load"
        dimension="force"
        min={0}
        max={1e6}
        value={ask.sideForce}
        onChange={(sideForce) => change({ sideForce })}
      />
      <OwnNumber
        label="Trim error"
        dimension="length"
        min={0}
        max={2}
        value={ask.trimError}
        onChange={(trimError) => change({ trimError })}
      />
      <OwnNumber
        label="Time to come back to the middle"
        dimension="time"
        min={0.05}
        max={600}
        value={ask.recentring}
        onChange={(recentring) => change({ recentring })}
      />
      <HoldingResults holding={holding} />
    </>
  );
}

function HoldingResults({
  holding,
}: {
  readonly holding: Holding | { readonly sentence: string } | undefined;
}) {
  if (!holding) return <p className="waiting">Working it out…</p>;
  if ('sentence' in holding) return <p>{holding.sentence}</p>;
  return (
    <>
      <FigureRow figure={holding.fromRest} />
      {holding.figures.map((figure) => (
        <FigureRow key={figure.id} figure={figure} />
      ))}
      {holding.course && (
        <CourseStrip
          label="Largest shove at each instant (N·s)"
          time={holding.course.time}
          values={[holding.course.impulse]}
          names={['shove']}
          unit="N·s"
        />
      )}
    </>
  );
}
