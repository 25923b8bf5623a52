import { Toggle } from '../fields/Toggle';
import { useSession } from '../state/session';

/** Array, plan and feedback, each switched on or off to see what it is good for. */
export function SwitchFields() {
  const switches = useSession((session) => session.switches);
  const setSwitches = useSession((session) => session.setSwitches);
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
    </>
  );
}
