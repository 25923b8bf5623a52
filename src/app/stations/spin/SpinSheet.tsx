import { type ReactNode, useEffect, useState } from 'react';
import type { GyroSpinSheet, SpinSheet as Sheet } from '../../../core/physics';
import type { Figure } from '../../../core/units';
import { createSpinner } from '../../../workers';
import { GyroChoice } from '../../fields/GyroChoice';
import { RigFields, RigNumber } from '../../fields/RigFields';
import { OwnParts } from '../../parts/OwnParts';
import { PartsFiles } from '../../parts/PartsFiles';
import { FigureRow } from '../../sheet/FigureRow';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { BalanceFields } from './BalanceFields';
import { BearingFields } from './BearingFields';
import { CautionStrip, Cautions } from './Cautions';
import { ChoiceField } from './ChoiceField';
import { SpinCurve } from './SpinCurve';
import { StressFigures } from './StressFigures';
import { startSpinning, useSpinAnswer } from './spinAnswer';
import { Verdict } from './Verdict';
import { WheelSection } from './WheelSection';
import { WheelStack } from './WheelStack';
import './spin.css';

const TOPICS = ['wheel', 'stress', 'balance', 'bearings', 'drive', 'run', 'parts'] as const;
type Topic = (typeof TOPICS)[number];

const TOPIC_WORDS: Readonly<Record<Topic, string>> = {
  wheel: 'Wheel',
  stress: 'Stress',
  balance: 'Balance',
  bearings: 'Bearings',
  drive: 'Drive',
  run: 'Run',
  parts: 'My parts',
};

/** Can the wheel be spun, safely, on this motor and battery? */
export function SpinSheet() {
  const count = useDocument((document) => document.rig.array.gyros.length);
  const selected = useSession((session) => (session.selection.kind === 'gyro' ? session.selection.index : 0));
  const gyro = Math.min(selected, Math.max(0, count - 1));
  const outcome = useSpinAnswer((state) => state.outcome);
  const sheet = useSpinAnswer((state) => state.sheet);
  const [topic, setTopic] = useState<Topic>('wheel');
  useEffect(() => startSpinning(createSpinner()), []);

  if (count === 0) return <p className="waiting">There is no wheel yet: lay out an array in Assemble.</p>;
  const shown = sheet?.gyros[Math.min(gyro, sheet.gyros.length - 1)];
  return (
    <>
      <div className="spin-head">
        <KeySpin shown={shown} runTime={sheet?.runTime} />
        {sheet && <CautionStrip cautions={sheet.cautions} />}
      </div>
      <Verdict outcome={outcome} />
      <nav className="topics" aria-label="Of the wheel">
        {TOPICS.map((each) => (
          <button key={each} type="button" aria-pressed={each === topic} onClick={() => setTopic(each)}>
            {TOPIC_WORDS[each]}
          </button>
        ))}
      </nav>
      {count > 1 && topic !== 'run' && topic !== 'parts' && <GyroChoice />}
      {sheet && shown && <TopicSheet topic={topic} gyro={gyro} sheet={sheet} shown={shown} />}
      {sheet && <Cautions cautions={sheet.cautions} />}
    </>
  );
}

/** Speed, what is safe, what a burst would let loose, and how long the battery lasts: always in sight. */
function KeySpin({
  shown,
  runTime,
}: {
  readonly shown: GyroSpinSheet | undefined;
  readonly runTime: number | undefined;
}) {
  const units = useSession((session) => session.units);
  if (!shown || runTime === undefined) return <p className="waiting">Working it out…</p>;
  const [low, high] = shown.safeSpeed;
  const rate = (value: number): string => showQuantity(value, 'spinRate', units.spinRate);
  return (
    <dl className="key-figures">
      <div>
        <dt>Speed</dt>
        <dd>{rate(shown.speed)}</dd>
        <dd className="aside">of {shown.name}</dd>
      </div>
      <div>
        <dt>Safe speed</dt>
        <dd>{rate(low)}</dd>
        <dd className="aside">
          {high > low * 1.001 ? `to ${rate(high)}, printed` : 'on the least allowable'}
        </dd>
      </div>
      <div>
        <dt>Energy of a burst</dt>
        <dd>{showQuantity(shown.burstEnergy, 'energy', units.energy)}</dd>
        <dd className="aside">one wheel</dd>
      </div>
      <div>
        <dt>Run time</dt>
        <dd>{showQuantity(runTime, 'time', units.time)}</dd>
        <dd className="aside">on one charge</dd>
      </div>
    </dl>
  );
}

interface TopicProps {
  readonly topic: Topic;
  readonly gyro: number;
  readonly sheet: Sheet;
  readonly shown: GyroSpinSheet;
}

function TopicSheet({ topic, gyro, sheet, shown }: TopicProps) {
  const path = (...inner: string[]) => ['array', 'gyros', gyro, ...inner];
  const group = (name: string): ReactNode => <Figures title={name} figures={groupOf(shown, name)} />;
  const limit = useDocument((document) => document.rig.array.gyros[gyro]?.motor.currentLimit ?? 1);
  switch (topic) {
    case 'wheel':
      return (
        <WheelTopic gyro={gyro} shown={shown}>
          {group('Wheel')}
        </WheelTopic>
      );
    case 'stress':
      return (
        <>
          <Group title="Safe speed">
            <RigNumber path={path('speed')} />
            <ChoiceField choice="factor" usual={2} />
          </Group>
          {group('Stress')}
          <StressFigures gyro={gyro} shown={shown} />
        </>
      );
    case 'balance':
      return (
        <>
          <BalanceFields gyro={gyro} />
          {group('Balance')}
          <Figures title="At the sensor" figures={shown.shake} />
        </>
      );
    case 'bearings':
      return (
        <>
          <BearingFields gyro={gyro} />
          <p className="spin-note">Of the load, {shown.rulingLoad}.</p>
          {group('Bearings')}
          <OwnParts list="bearings" gyro={gyro} />
        </>
      );
    case 'drive':
      return (
        <>
          <Group title="Spin-up">
            {shown.spinUp ? (
              <SpinCurve sheet={shown} />
            ) : (
              <p>
                <b className="word-fails">Not reached.</b> This motor on this battery comes to{' '}
                {showQuantity(shown.topSpeed, 'spinRate')}.
              </p>
            )}
            <RigNumber path={path('speed')} />
          </Group>
          {group('Drive')}
          {group('Drag')}
          <Group title="Housing">
            <RigFields path={path('housing')} />
          </Group>
          <Group title="Motor and controller">
            <RigFields path={path('motor')} />
            <ChoiceField choice="brakeCurrent" usual={limit / 2} most={limit} />
          </Group>
          <OwnParts list="motors" gyro={gyro} />
        </>
      );
    case 'run':
      return (
        <>
          <Figures title="All wheels on the one battery" figures={sheet.figures} />
          <Group title="Battery">
            <RigFields path={['power']} />
          </Group>
        </>
      );
    case 'parts':
      return (
        <>
          <PartsFiles />
          <OwnParts list="wheels" gyro={gyro} />
          <OwnParts list="motors" gyro={gyro} />
          <OwnParts list="bearings" gyro={gyro} />
          <OwnParts list="servos" gyro={gyro} />
        </>
      );
  }
}

const groupOf = (shown: GyroSpinSheet, name: string): readonly Figure[] =>
  shown.groups.find((group) => group.name === name)?.figures ?? [];

function Figures({ title, figures }: { readonly title: string; readonly figures: readonly Figure[] }) {
  return (
    <Group title={title}>
      {figures.map((figure) => (
        <FigureRow key={figure.id} figure={figure} />
      ))}
    </Group>
  );
}

function WheelTopic({
  gyro,
  shown,
  children,
}: {
  readonly gyro: number;
  readonly shown: GyroSpinSheet;
  readonly children: ReactNode;
}) {
  const parts = useDocument((document) => document.rig.array.gyros[gyro]?.wheel.parts);
  const [opened, setOpened] = useState<number>();
  if (!parts) return null;
  return (
    <>
      <WheelSection parts={parts} stress={shown.stress} selected={opened} onSelect={setOpened} />
      <RigNumber path={['array', 'gyros', gyro, 'speed']} />
      <WheelStack gyro={gyro} stress={shown.stress} opened={opened} onOpen={setOpened} />
      {children}
      <OwnParts list="wheels" gyro={gyro} />
    </>
  );
}
