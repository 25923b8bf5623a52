import { useEffect } from 'react';
import { RigFields } from '../../fields/RigFields';
import { Toggle } from '../../fields/Toggle';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { useSession } from '../../state/session';
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
        <SwitchFields />
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

function SwitchFields() {
  const switches = useSession((session) => session.switches);
  const setSwitches = useSession((session) => session.setSwitches);
  const isAsDrawn = useTrial((trial) => trial.isAsDrawn);
  const set = useTrial((trial) => trial.set);
  return (
    <>
      <Toggle
        label="Array"
        hint={switches.isArrayOn ? 'gimbals move' : 'gimbals locked'}
        isOn={switches.isArrayOn}
        onChange={(isArrayOn) => setSwitches({ isArrayOn })}
      />
      <Toggle
        label="Plan"
        hint={switches.isPlanOn ? 'tilts follow the schedule' : 'tilts rest at zero'}
        isOn={switches.isPlanOn}
        onChange={(isPlanOn) => setSwitches({ isPlanOn })}
      />
      <Toggle
        label="Feedback"
        hint={switches.isFeedbackOn ? 'the sensor is answered' : 'nothing answers the sensor'}
        isOn={switches.isFeedbackOn}
        onChange={(isFeedbackOn) => setSwitches({ isFeedbackOn })}
      />
      <Toggle
        label="Built as drawn"
        hint={isAsDrawn ? 'to the last gram' : 'centre 4 mm off, wheels 3 % slow'}
        isOn={isAsDrawn}
        onChange={(now) => set({ isAsDrawn: now })}
      />
    </>
  );
}
