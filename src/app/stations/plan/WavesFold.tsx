import type { Seakeeping, SeakeepingOutcome, Waves } from '../../../core/planning';
import type { Figure } from '../../../core/units';
import { FigureRow } from '../../sheet/FigureRow';
import { useDocument } from '../../state/document';
import { CourseStrip } from './CourseStrip';
import { Fold } from './Fold';
import { planPool } from './planPool';
import { useSettledAnswer } from './usePlanTask';

/** Roll in the run's own waves, with and without the array, by frequency and in time; for hulls. */
export function WavesFold() {
  const isAfloat = useDocument((document) => document.rig.footing.kind === 'float');
  return isAfloat ? (
    <Fold title="Roll in waves">
      <WavesFields />
    </Fold>
  ) : null;
}

function WavesFields() {
  const rig = useDocument((document) => document.rig);
  const waves = rig.jobs.sequence.find((d): d is Waves => d.kind === 'waves' || d.kind === 'sea');
  const outcome = useSettledAnswer<SeakeepingOutcome>(
    () =>
      waves
        ? planPool.seakeeping(rig, waves)
        : {
            done: Promise.resolve({ kind: 'none', sentence: 'Add waves or a sea to the sequence.' }),
            end: () => {},
          },
    rig,
  );
  if (!outcome) return <p className="waiting">Working it out…</p>;
  if (outcome.kind === 'none') return <p>{outcome.sentence}</p>;
  return <WaveResults seakeeping={outcome.seakeeping} />;
}

const degrees = (values: Float64Array): Float64Array => values.map((value) => (value * 180) / Math.PI);

function WaveResults({ seakeeping }: { readonly seakeeping: Seakeeping }) {
  const { bare, held, response, gain, runReduction, spectralReduction } = seakeeping;
  const of = (
    id: string,
    label: string,
    value: number,
    dimension: Figure['dimension'],
    formula: string,
  ): Figure => ({
    id,
    label,
    value,
    dimension,
    formula,
    inputs: [{ label: 'Momentum held for each radian of roll', value: gain, dimension: 'angularMomentum' }],
    source: 'Lloyd, Seakeeping: Ship Behaviour in Rough Weather (1989)',
  });
  return (
    <>
      <p className="reduction">
        Root-mean-square roll <b>angle</b> less by <b>{runReduction.toFixed(0)} %</b> in this run,{' '}
        {spectralReduction.toFixed(0)} % by frequencies.
      </p>
      <FigureRow
        figure={of(
          'rmsBare',
          'RMS roll angle, array off',
          bare.run.rmsRoll,
          'angle',
          '√(mean φ²) over the run',
        )}
      />
      <FigureRow
        figure={of(
          'rmsHeld',
          'RMS roll angle, array on',
          held.run.rmsRoll,
          'angle',
          '√(mean φ²) over the run',
        )}
      />
      <FigureRow figure={of('rmsTilt', 'RMS tilt', held.run.rmsTilt, 'angle', '√(mean δ²) over the run')} />
      <FigureRow
        figure={of(
          'drivePower',
          'Mean power of the gimbal drives',
          held.run.drivePower,
          'power',
          'mean |T dδ/dt|',
        )}
      />
      <CourseStrip
        label="Roll in time (°)"
        time={bare.run.time}
        values={[degrees(held.run.roll), degrees(bare.run.roll)]}
        names={['array on', 'off']}
        unit="°"
      />
      <CourseStrip
        label="Roll over wave slope"
        time={response.frequency}
        values={[response.held, response.bare]}
        names={['array on', 'off']}
        unit=""
        acrossUnit="rad/s"
      />
    </>
  );
}
