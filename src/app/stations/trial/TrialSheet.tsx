import { useEffect } from 'react';
import { USUAL_DOUBT } from '../../../core/trial';
import { formatQuantity } from '../../../core/units';
import { RigFields } from '../../fields/RigFields';
import { Toggle } from '../../fields/Toggle';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { SwitchFields } from '../../sheet/SwitchFields';
import { CompareFields } from './CompareFields';
import { ControlFields } from './ControlFields';
import { GainFields } from './GainFields';
import { ManyFields } from './ManyFields';
import { ShoveFields } from './ShoveFields';
import { TrialResult } from './TrialResult';
import { useTrial } from './trialStore';
import { startTrials } from './trialWork';
import './trial.css';

/** Does it hold? The run itself, the law and its gains, shoves, comparisons, and many runs of rigs not quite alike. */
export function TrialSheet() {
  useEffect(startTrials, []);
  return (
    <>
      <TrialResult />
      <Refusals />
      <ShoveFields />
      <Group title="Switched on">
        <RunFields />
      </Group>
      <ControlFields />
      <GainFields />
      <CompareFields />
      <ManyFields />
      <Group title="Sensor and loop">
        <RigFields path={['sensing']} />
      </Group>
    </>
  );
}

const AS_BUILT = `centre ${formatQuantity(USUAL_DOUBT.centreAcross, 'length', 'mm', 1)} off, wheels ${formatQuantity(1 - USUAL_DOUBT.wheelSpeed, 'ratio', '%', 1)} slow`;

function RunFields() {
  const isAsDrawn = useTrial((trial) => trial.isAsDrawn);
  const set = useTrial((trial) => trial.set);
  return (
    <>
      <SwitchFields />
      <Toggle
        label="Built as drawn"
        hint={isAsDrawn ? 'to the last gram' : AS_BUILT}
        isOn={isAsDrawn}
        onChange={(now) => set({ isAsDrawn: now })}
      />
    </>
  );
}
