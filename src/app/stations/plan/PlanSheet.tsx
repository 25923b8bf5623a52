import { RigFields, RigKind, RigNumber } from '../../fields/RigFields';
import { Toggle } from '../../fields/Toggle';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { PlanState } from './PlanState';
import { SequenceFields } from './SequenceFields';

/** How must the gimbals tilt? The gait or the run of disturbances, what to switch off, and whether there is a plan. */
export function PlanSheet() {
  const isLegged = useDocument((document) => document.rig.body.kind === 'legged');
  const gait = useDocument((document) => document.rig.jobs.gait.kind);
  return (
    <>
      <PlanState />
      <Refusals />
      <Group title="See what each does">
        <SwitchFields />
      </Group>
      {isLegged && (
        <Group title="Gait">
          {gait === 'keyframes' ? (
            <p>This rig brings its own keyframes; they are kept as they are.</p>
          ) : (
            <>
              <RigKind path={['jobs', 'gait']} label="On its feet" options={['stand', 'pattern']} />
              <RigFields path={['jobs', 'gait']} hidesKind />
            </>
          )}
        </Group>
      )}
      {isLegged && (
        <Group title="Foot">
          <RigNumber path={['body', 'foot', 'width']} />
          <RigNumber path={['body', 'foot', 'length']} />
          <RigNumber path={['footing', 'margin']} />
        </Group>
      )}
      <SequenceFields />
      <Group title="Run">
        <RigNumber path={['jobs', 'duration']} />
      </Group>
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
