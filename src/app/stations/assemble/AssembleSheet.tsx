import { useState } from 'react';
import { GyroChoice } from '../../fields/GyroChoice';
import { KeyFigures } from '../../sheet/KeyFigures';
import { Refusals } from '../../sheet/Refusals';
import { useDocument } from '../../state/document';
import { NOTHING_SELECTED, useSession } from '../../state/session';
import { ArrayFields } from './ArrayFields';
import { BodyFields } from './BodyFields';
import { GroundFields } from './GroundFields';
import { GimbalFields, MotorFields, ServoFields, WheelFields } from './GyroFields';
import { PayloadFields } from './PayloadFields';
import { groupOf, groupWord, isGyroGroup, PART_GROUPS, type PartGroup, selectionFor } from './partGroups';
import { PowerFields, SensorFields } from './RigWideFields';

/** What am I building? One part at a time, the whole rig's key figures always in sight. */
export function AssembleSheet() {
  const rig = useDocument((document) => document.rig);
  const selection = useSession((session) => session.selection);
  const select = useSession((session) => session.select);
  const [chosen, setChosen] = useState<PartGroup>('layout');
  const open = groupOf(selection, chosen);
  const gyroCount = rig.array.gyros.length;

  const openGroup = (group: PartGroup): void => {
    setChosen(group);
    select(selectionFor(group, selection) ?? NOTHING_SELECTED);
  };

  return (
    <>
      <KeyFigures />
      <Refusals />
      <nav className="parts" aria-label="Parts of the rig">
        {PART_GROUPS.map((group) => (
          <button
            key={group}
            type="button"
            aria-pressed={group === open}
            disabled={isGyroGroup(group) && gyroCount === 0}
            onClick={() => openGroup(group)}
          >
            {groupWord(group, rig)}
          </button>
        ))}
      </nav>
      {isGyroGroup(open) && gyroCount > 1 && <GyroChoice />}
      <PartFields group={open} />
    </>
  );
}

function PartFields({ group }: { readonly group: PartGroup }) {
  const count = useDocument((document) => document.rig.array.gyros.length);
  const selected = useSession((session) => (session.selection.kind === 'gyro' ? session.selection.index : 0));
  const gyro = Math.min(selected, Math.max(0, count - 1));
  switch (group) {
    case 'body':
      return <BodyFields />;
    case 'ground':
      return <GroundFields />;
    case 'payloads':
      return <PayloadFields />;
    case 'layout':
      return <ArrayFields />;
    case 'gimbal':
      return <GimbalFields gyro={gyro} />;
    case 'wheel':
      return <WheelFields gyro={gyro} />;
    case 'servo':
      return <ServoFields gyro={gyro} />;
    case 'motor':
      return <MotorFields gyro={gyro} />;
    case 'power':
      return <PowerFields />;
    case 'sensor':
      return <SensorFields />;
  }
}
