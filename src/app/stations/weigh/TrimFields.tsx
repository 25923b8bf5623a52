import { useState } from 'react';
import { type CompiledRig, trimBallast, trimFigures } from '../../../core/physics';
import type { Payload, QuantityInfo, Rig } from '../../../core/rig';
import { NumberField } from '../../fields/NumberField';
import { Group } from '../../sheet/Group';
import { rigBox } from '../../stage/bodyPlaces';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { FigureRows } from './FigureRows';

interface Box {
  readonly low: readonly [number, number, number];
  readonly high: readonly [number, number, number];
}

/** Steel, kg/m^3: what ballast is most often made of. */
const BALLAST_DENSITY = 7850;
/** A centre nearer the middle line than this is trimmed, m. */
const TRIMMED = 1e-5;
const AXES = ['x, forward', 'y, left', 'z, up'] as const;

const within = (label: string): QuantityInfo => ({ label, dimension: 'length', min: -50, max: 50 });
const MOST: QuantityInfo = { label: 'Heaviest ballast', dimension: 'mass', min: 0, max: 10_000 };

/** The middle half of the rig's own box: most bodies have room there. */
function roomOf(rig: Rig): Box {
  const { min, max } = rigBox(rig);
  const at = (axis: 0 | 1 | 2, share: number): number => {
    const value = min[axis] + share * (max[axis] - min[axis]);
    return Math.round(value * 1000) / 1000;
  };
  return { low: [at(0, 0.25), at(1, 0.1), at(2, 0.3)], high: [at(0, 0.75), at(1, 0.9), at(2, 0.7)] };
}

const replaced = <T extends readonly number[]>(triple: T, axis: number, value: number): T =>
  triple.map((old, k) => (k === axis ? value : old)) as unknown as T;

function ballastPayload(mass: number, position: readonly [number, number, number]): Payload {
  const side = Math.max(0.002, Math.cbrt(mass / BALLAST_DENSITY));
  return { name: 'Trim ballast', mass, size: [side, side, side], position: [...position] };
}

/** How far the centre stands off the middle line, and the ballast that brings it back from within a box. */
export function TrimFields({ compiled }: { readonly compiled: CompiledRig }) {
  const { rig, whole } = compiled;
  const [box, setBox] = useState(() => roomOf(rig));
  const [most, setMost] = useState(() => Math.ceil(whole.mass) / 10);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const isOff = Math.abs(whole.com[1]) > TRIMMED;
  const isBox = box.low.every((low, axis) => low <= (box.high[axis] as number));
  const ballast = isOff && isBox ? trimBallast(compiled, box, most) : undefined;

  const put = (): void => {
    if (!ballast) return;
    const payload = ballastPayload(ballast.mass, ballast.position);
    const index = useDocument.getState().rig.payloads.length;
    useDocument.getState().edit('Put trim ballast in', (before) => ({
      ...before,
      payloads: [...before.payloads, payload],
    }));
    useSession.getState().select({ kind: 'payload', index });
  };

  return (
    <Group title="Trim">
      <FigureRows figures={trimFigures(compiled, ballast)} />
      {!isOff && <p>The centre of mass stands over the middle line: no ballast is called for.</p>}
      {!isBox && <p role="alert">The box is inside out: each lower bound must not exceed its upper one.</p>}
      {ballast && ballast.mass === 0 && (
        <p role="alert">The box lies on the heavy side alone: no ballast in it can trim the rig.</p>
      )}
      {ballast && ballast.mass > 0 && Math.abs(ballast.offsetLeft) > TRIMMED && (
        <p role="alert">
          The heaviest ballast allowed is too little: the box must reach further, or allow more.
        </p>
      )}
      {isOff && (
        <>
          <NumberField info={MOST} value={most} onChange={setMost} />
          {AXES.map((axis, k) => (
            <div key={axis}>
              <NumberField
                info={within(`Ballast from ${axis}`)}
                value={box.low[k] as number}
                onChange={(to) => setBox({ ...box, low: replaced(box.low, k, to) })}
              />
              <NumberField
                info={within(`Ballast up to ${axis}`)}
                value={box.high[k] as number}
                onChange={(to) => setBox({ ...box, high: replaced(box.high, k, to) })}
              />
            </div>
          ))}
          <button
            type="button"
            className="wide"
            disabled={isReadOnly || !ballast || ballast.mass < 1e-3}
            onClick={put}
          >
            Put it in the rig
          </button>
        </>
      )}
    </Group>
  );
}
