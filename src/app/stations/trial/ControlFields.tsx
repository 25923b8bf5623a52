import { useState } from 'react';
import { buildController, explainTerms, type Law } from '../../../core/control';
import type { Control } from '../../../core/rig';
import { Choice } from '../../fields/Choice';
import { RigFields } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useTrial } from './trialStore';
import { computeInto } from './trialWork';

const LAWS: readonly { readonly value: Control['kind']; readonly label: string }[] = [
  { value: 'computed', label: 'Computed' },
  { value: 'feedback', label: 'State feedback' },
  { value: 'pidTilt', label: 'PID to tilt' },
  { value: 'pidTiltRate', label: 'PID to tilt rate' },
  { value: 'passive', label: 'Passive gimbal' },
  { value: 'reactionWheel', label: 'Reaction wheel' },
];

const ON_PLAN = 'With the plan switched on it acts on what differs from the plan.';

const LAW_WORDS: Readonly<Record<Control['kind'], string>> = {
  computed: `Gains worked out for this rig’s own servo, sensor and loop whenever it changes. ${ON_PLAN}`,
  feedback: `Tilt rate from lean, lean rate and tilt, so that the gimbal comes back to the middle. ${ON_PLAN}`,
  pidTilt: 'Tilt angle from lean, lean gathered and lean rate.',
  pidTiltRate: 'Tilt rate from lean, lean gathered and lean rate.',
  passive: 'No servo: the gimbals must be free, which is set under Assemble.',
  reactionWheel: 'Motor torque from lean, lean rate and wheel speed.',
};

/** Which law the firmware runs, its gains, and what each term does. */
export function ControlFields() {
  const control = useDocument((document) => document.rig.control);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const [refusal, setRefusal] = useState<string>();

  const choose = async (kind: Control['kind']): Promise<void> => {
    setRefusal(undefined);
    if (kind === 'computed' || kind === 'passive')
      edit('Law in the firmware', (rig) => ({ ...rig, control: { kind } }));
    else setRefusal(await computeInto(kind, 'Law in the firmware'));
  };

  return (
    <Group title="Law in the firmware">
      <Choice
        label="Controller"
        options={LAWS}
        value={control.kind}
        isReadOnly={isReadOnly}
        onChange={(kind) => void choose(kind)}
      />
      <p className="aside">{LAW_WORDS[control.kind]}</p>
      {refusal && <p role="alert">{refusal}</p>}
      <RigFields path={['control']} hidesKind />
      <Terms />
    </Group>
  );
}

function Terms() {
  const shown = useTrial((trial) => trial.shown);
  if (!shown) return null;
  if (shown.gains.kind === 'none') {
    return (
      <>
        <p className="aside">{shown.gains.sentence}</p>
        {shown.rig.control.kind === 'passive' && <TermList law="passive" topples />}
      </>
    );
  }
  const { loop, gains } = shown.gains.report;
  return <TermList law={loop.law} gains={gains} topples={loop.topples} />;
}

const GAIN_WORDS: Readonly<Record<string, string>> = {
  kp: 'P',
  ki: 'I',
  kd: 'D',
  lean: 'Lean',
  leanRate: 'Lean rate',
  tilt: 'Tilt',
  tiltRate: 'Tilt rate',
  trim: 'Trim',
  speed: 'Wheel speed',
  none: 'Free',
};
export const gainWord = (name: string): string => GAIN_WORDS[name] ?? name;

function TermList({
  law,
  gains,
  topples,
}: {
  readonly law: Law | 'passive';
  readonly gains?: Float64Array;
  readonly topples: boolean;
}) {
  const controller = law === 'passive' ? ({ kind: 'passive' } as const) : buildController(law, gains ?? []);
  return (
    <dl className="trial-terms">
      {explainTerms(controller, topples).map(({ gain, does }) => (
        <div key={gain}>
          <dt>{gainWord(gain)}</dt>
          <dd>{does}</dd>
        </div>
      ))}
    </dl>
  );
}
