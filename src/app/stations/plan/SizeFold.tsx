import { useState } from 'react';
import { type SizeAsk, type SizeOutcome, safeRimSpeed, usualSizeAsk } from '../../../core/planning';
import { MATERIAL_NAMES, type MaterialName } from '../../../core/rig';
import { formatQuantity } from '../../../core/units';
import { Choice } from '../../fields/Choice';
import { Toggle } from '../../fields/Toggle';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { Fold } from './Fold';
import { OwnNumber } from './OwnNumber';
import { planPool } from './planPool';
import { usePlanTask } from './usePlanTask';

/** The smallest wheels that would do, and one tap to put them in the rig. */
export const SizeFold = () => (
  <Fold title="Smallest wheel">
    <SizeFields />
  </Fold>
);

function SizeFields() {
  const rig = useDocument((document) => document.rig);
  const usual = usualSizeAsk(rig);
  const [changes, setChanges] = useState<Partial<SizeAsk>>({});
  const { state, start, end } = usePlanTask<SizeOutcome>();
  if (!usual) return <p>The rig has no wheel yet: lay out an array in Assemble.</p>;
  const ask: SizeAsk = { ...usual, ...changes };
  const change = (part: Partial<SizeAsk>): void => {
    end();
    setChanges((before) => ({ ...before, ...part }));
  };
  return (
    <>
      <OwnNumber
        label="Spare to keep"
        dimension="ratio"
        min={0}
        max={0.9}
        value={ask.spare}
        onChange={(spare) => change({ spare })}
      />
      {ask.lean !== undefined && (
        <OwnNumber
          label="Most roll"
          dimension="angle"
          min={0.002}
          max={0.35}
          value={ask.lean}
          onChange={(lean) => change({ lean })}
        />
      )}
      <OwnNumber
        label="Wheel radius"
        dimension="length"
        min={0.003}
        max={1}
        value={ask.radius}
        onChange={(radius) => change({ radius })}
      />
      <OwnNumber
        label="Rim width"
        dimension="length"
        min={0.0005}
        max={0.5}
        value={ask.width}
        onChange={(width) => change({ width })}
      />
      <Choice<MaterialName>
        label="Rim material"
        options={MATERIAL_NAMES.map((value) => ({ value, label: value }))}
        value={ask.material}
        onChange={(material) => change({ material })}
      />
      <Toggle
        label="Rim speed of my own"
        hint={ask.rimSpeed === undefined ? 'as fast as stress and motor allow' : 'as below, if it is safe'}
        isOn={ask.rimSpeed !== undefined}
        onChange={(isOn) => change({ rimSpeed: isOn ? Math.round(safeRimSpeed(ask.material)) : undefined })}
      />
      {ask.rimSpeed !== undefined && (
        <OwnNumber
          label="Safe rim speed"
          dimension="speed"
          min={1}
          max={1000}
          value={ask.rimSpeed}
          onChange={(rimSpeed) => change({ rimSpeed })}
        />
      )}
      {state.kind === 'working' ? (
        <button type="button" className="wide" onClick={end}>
          Stop
        </button>
      ) : (
        <button type="button" className="wide" onClick={() => start(planPool.size(rig, ask))}>
          Find the smallest wheel
        </button>
      )}
      {state.kind === 'working' && <p className="waiting">Working it out…</p>}
      {state.kind === 'done' && <SizeResults outcome={state.answer} />}
    </>
  );
}

const LIMIT_WORDS = {
  'as asked': 'the rim speed asked for',
  stress: 'the safe stress of the wheel',
  motor: 'what the motor holds on this battery',
  'thinnest rim': 'a rim as thin as it is made, run slower',
} as const;

function SizeResults({ outcome }: { readonly outcome: SizeOutcome }) {
  const edit = useDocument((document) => document.edit);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const units = useSession((session) => session.units);
  if (outcome.kind === 'none') return <p role="status">{outcome.sentence}</p>;
  const { rig, wheels, axes, refused, share } = outcome;
  const first = wheels[0];
  const show = (value: number, dimension: 'mass' | 'length' | 'spinRate' | 'angularMomentum' | 'speed') =>
    formatQuantity(value, dimension, units[dimension]);
  return (
    <div className="size-results" role="status">
      {axes.map(({ axis, momentum }) => (
        <p key={axis}>
          Least momentum in {axis}, spare included: <b>{show(momentum, 'angularMomentum')}</b>,{' '}
          {(100 * share).toFixed(0)} % of what there is.
        </p>
      ))}
      {refused !== undefined && <p className="word-fails">{refused}</p>}
      {first && rig && (
        <>
          <p>
            Lightest wheel: <b>{show(first.mass, 'mass')}</b> in place of {show(first.massNow, 'mass')}; rim
            from {show(first.innerRadius, 'length')} outwards, {show(first.speed, 'spinRate')},{' '}
            {show(first.rimSpeed, 'speed')} at the rim, held there by {LIMIT_WORDS[first.limit]}.
          </p>
          <p className="aside">
            A spinning wheel can burst: check the part, use a guard, follow local codes, and ask a licensed
            engineer.
          </p>
          <button
            type="button"
            className="wide"
            disabled={isReadOnly}
            onClick={() => edit('Smallest wheels', () => rig)}
          >
            Put {wheels.length === 1 ? 'it' : `all ${wheels.length}`} in the rig
          </button>
        </>
      )}
    </div>
  );
}
