import { RigFields } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';

/** The battery and what else it feeds. */
export function PowerFields() {
  return (
    <Group title="Battery">
      <RigFields path={['power']} />
    </Group>
  );
}

/** The rate gyro, the accelerometer and the loop that reads them. */
export function SensorFields() {
  return (
    <Group title="Sensor and loop">
      <RigFields path={['sensing']} />
    </Group>
  );
}
