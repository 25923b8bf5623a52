import { useEffect, useMemo, useReducer, useState } from 'react';
import {
  type CompiledRig,
  checkLayout,
  type GimbalDrive,
  type LayoutFaults,
  type LayoutLeftover,
  layoutLeftovers,
} from '../../../core/physics';
import { gimbalGroups, workingSpeed } from '../../../core/planning';
import type { QuantityInfo } from '../../../core/rig';
import { NumberField } from '../../fields/NumberField';
import { Toggle } from '../../fields/Toggle';
import { FigureRow } from '../../sheet/FigureRow';
import { Group } from '../../sheet/Group';
import { createInstant, readInstant } from '../../stage/motionInstant';
import { stream } from '../../state/stream';
import { useCompiled } from '../weigh/useCompiled';
import { useLayoutCheck, useLayoutOnStage } from './layoutCheckStore';
import './layoutCheck.css';

/** Momentum, torque, singularity and faults of the array at any tilt; worked out while it is open only. */
export function LayoutCheck() {
  const compiled = useCompiled();
  if (!compiled || compiled.rig.array.gyros.length === 0) return null;
  return <OpenCheck compiled={compiled} />;
}

const drivesOf = (compiled: CompiledRig): GimbalDrive[] =>
  gimbalGroups(compiled).map(({ members, servo }) => ({ members, rate: workingSpeed(servo) }));

/** ms between looks at the playhead while it moves: numbers that change faster cannot be read. */
const LOOK_EVERY = 200;

/** Tilts of the motion at the playhead; at rest while no motion fits the rig. */
function useTiltsAtPlayhead(compiled: CompiledRig, isOn: boolean): readonly number[] {
  const [looks, look] = useReducer((count: number) => count + 1, 0);
  useEffect(() => {
    if (!isOn) return;
    let timer: ReturnType<typeof setTimeout> | undefined;
    const wait = (): void => {
      timer ??= setTimeout(() => {
        timer = undefined;
        look();
      }, LOOK_EVERY);
    };
    const stops = [stream.onFrame(wait), stream.onEvaluation(wait)];
    return () => {
      clearTimeout(timer);
      for (const stop of stops) stop();
    };
  }, [isOn]);
  // biome-ignore lint/correctness/useExhaustiveDependencies: a look at the playhead is what it is read for.
  return useMemo(() => {
    const count = compiled.rig.array.gyros.length;
    const motion = stream.shown?.motion;
    if (!motion || motion.samples === 0 || motion.gyros !== count) return new Array<number>(count).fill(0);
    const instant = createInstant(motion.gyros, motion.legs);
    readInstant(motion, stream.seconds, instant);
    return Array.from(instant.tilt);
  }, [compiled, looks]);
}

function OpenCheck({ compiled }: { readonly compiled: CompiledRig }) {
  const { isAtPlayhead, isEnvelopeShown, areInnerShown, tilts, leak, change } = useLayoutCheck();
  const [faults, setFaults] = useState<LayoutFaults>({
    speed: 0.02,
    axis: Math.PI / 180,
    lag: Math.PI / 180,
  });
  const drives = useMemo(() => drivesOf(compiled), [compiled]);
  const read = useTiltsAtPlayhead(compiled, isAtPlayhead);
  const count = compiled.rig.array.gyros.length;
  const now = useMemo(
    () => (isAtPlayhead ? read : Array.from({ length: count }, (_, i) => tilts[i] ?? 0)),
    [isAtPlayhead, read, tilts, count],
  );
  const check = useMemo(() => checkLayout(compiled, now, drives), [compiled, now, drives]);
  const left = useMemo(() => {
    const rates = new Array<number>(count).fill(0);
    for (const { members, rate } of drives)
      for (const { index, ratio } of members) rates[index] = ratio * rate;
    return layoutLeftovers(compiled, now, rates, faults);
  }, [compiled, now, drives, faults, count]);
  const torque = left.find(({ id }) => id === leak)?.torque;
  useEffect(() => {
    useLayoutOnStage.setState({ torque, momentum: isAtPlayhead ? undefined : check.momentum });
  }, [torque, isAtPlayhead, check]);
  useEffect(() => () => useLayoutOnStage.setState({ torque: undefined, momentum: undefined }), []);

  return (
    <>
      <Group title="At a tilt">
        <Toggle
          label="At the playhead"
          hint="or at tilts set by hand"
          isOn={isAtPlayhead}
          onChange={(isOn) => change({ isAtPlayhead: isOn, tilts: now })}
        />
        {!isAtPlayhead && <TiltFields compiled={compiled} drives={drives} tilts={now} />}
        {check.figures.map((figure) => (
          <FigureRow key={figure.id} figure={figure} />
        ))}
      </Group>
      <Group title="Momentum envelope">
        <Toggle
          label="On the stage"
          hint="each gimbal by itself, tilt unlimited; the ball is the momentum now"
          isOn={isEnvelopeShown}
          onChange={(isOn) => change({ isEnvelopeShown: isOn })}
        />
        {count === 4 && (
          <Toggle
            label="Inner singular surfaces"
            isOn={areInnerShown}
            onChange={(isOn) => change({ areInnerShown: isOn, isEnvelopeShown: isOn || isEnvelopeShown })}
          />
        )}
      </Group>
      <Faults
        faults={faults}
        onChange={setFaults}
        left={left}
        name={compiled.rig.array.gyros.at(-1)?.name ?? ''}
      />
    </>
  );
}

interface TiltFieldsProps {
  readonly compiled: CompiledRig;
  readonly drives: readonly GimbalDrive[];
  readonly tilts: readonly number[];
}

/** One number for each gimbal that is turned by itself; those geared to it follow. */
function TiltFields({ compiled, drives, tilts }: TiltFieldsProps) {
  const { gyros } = compiled.rig.array;
  const geared = new Set(drives.flatMap(({ members }) => members.slice(1).map(({ index }) => index)));
  const turn = (leader: number, to: number): void => {
    const next = [...tilts];
    next[leader] = to;
    for (const { members } of drives)
      if (members[0]?.index === leader) for (const { index, ratio } of members) next[index] = ratio * to;
    useLayoutCheck.getState().change({ tilts: next });
  };
  return gyros.map(({ name }, i) => {
    if (geared.has(i)) return null;
    const info: QuantityInfo = { label: `Tilt of ${name}`, dimension: 'angle', min: -Math.PI, max: Math.PI };
    return (
      // biome-ignore lint/suspicious/noArrayIndexKey: gimbals have no name that is sure to differ.
      <NumberField key={i} info={info} value={tilts[i] ?? 0} onChange={(to) => turn(i, to)} />
    );
  });
}

const SPEED: QuantityInfo = { label: 'Wheel too fast by', dimension: 'ratio', min: -1, max: 1 };
const AXIS: QuantityInfo = { label: 'Gyro turned by', dimension: 'angle', min: -1, max: 1 };
const LAG: QuantityInfo = { label: 'Gimbal behind by', dimension: 'angle', min: -1, max: 1 };

interface FaultsProps {
  readonly faults: LayoutFaults;
  readonly onChange: (faults: LayoutFaults) => void;
  readonly left: readonly LayoutLeftover[];
  readonly name: string;
}

/** What each fault by itself leaves over, as numbers and, one at a time, as the leak on the stage. */
function Faults({ faults, onChange, left, name }: FaultsProps) {
  const { leak, change } = useLayoutCheck();
  return (
    <Group title={`Faults in ${name}`}>
      <NumberField info={SPEED} value={faults.speed} onChange={(speed) => onChange({ ...faults, speed })} />
      <NumberField info={AXIS} value={faults.axis} onChange={(axis) => onChange({ ...faults, axis })} />
      <NumberField info={LAG} value={faults.lag} onChange={(lag) => onChange({ ...faults, lag })} />
      {left.map(({ id, label, figures }) => (
        <section key={id} className="layout-fault">
          <button
            type="button"
            aria-pressed={leak === id}
            onClick={() => change({ leak: leak === id ? undefined : id })}
          >
            {label}: show the leak
          </button>
          {figures.map((figure) => (
            <FigureRow key={figure.id} figure={figure} />
          ))}
        </section>
      ))}
    </Group>
  );
}
