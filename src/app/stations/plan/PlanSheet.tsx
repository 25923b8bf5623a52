import { RigNumber } from '../../fields/RigFields';
import { Toggle } from '../../fields/Toggle';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { Fold } from './Fold';
import { GaitFields } from './GaitFields';
import { HoldingFold } from './HoldingFold';
import { PlanState } from './PlanState';
import { SequenceFields } from './SequenceFields';
import { SizeFold } from './SizeFold';
import { TradeFold } from './TradeFold';
import { WavesFold } from './WavesFold';
import './plan.css';

/** How must the gimbals tilt? The gait or the run of disturbances, whether there is a plan, and what would do. */
export function PlanSheet() {
  const isLegged = useDocument((document) => document.rig.body.kind === 'legged');
  const isFirm = useDocument((document) => document.rig.footing.kind === 'firm');
  return (
    <>
      <PlanState />
      <Refusals />
      <SequenceFields />
      <Group title="Run">
        <RigNumber path={['jobs', 'duration']} />
      </Group>
      <GaitFields />
      {isLegged && (
        <Fold title="Foot">
          <RigNumber path={['body', 'foot', 'width']} />
          <RigNumber path={['body', 'foot', 'length']} />
          {isFirm && <RigNumber path={['footing', 'margin']} />}
        </Fold>
      )}
      <Fold title="See what each does" isOpenAtFirst>
        <SwitchFields />
      </Fold>
      <SizeFold />
      <TradeFold />
      <HoldingFold />
      <WavesFold />
    </>
  );
}

function SwitchFields() {
  const switches = useSession((session) => session.switches);
  const set = useSession((session) => session.setSwitches);
  return (
    <>
      <Toggle
        label="Array"
        hint={switches.isArrayOn ? 'gimbals move' : 'gimbals locked'}
        isOn={switches.isArrayOn}
        onChange={(isArrayOn) => set({ isArrayOn })}
      />
      <Toggle
        label="Plan"
        hint={switches.isPlanOn ? 'tilts follow the schedule' : 'tilts rest at zero'}
        isOn={switches.isPlanOn}
        onChange={(isPlanOn) => set({ isPlanOn })}
      />
      <Toggle
        label="Feedback"
        hint={switches.isFeedbackOn ? 'the sensor is answered' : 'nothing answers the sensor'}
        isOn={switches.isFeedbackOn}
        onChange={(isFeedbackOn) => set({ isFeedbackOn })}
      />
    </>
  );
}
