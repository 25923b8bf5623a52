import type { Rig } from '../../../core/rig';
import type { Selection } from '../../state/session';

/** The parts of a rig as the Assemble sheet deals them out. */
export const PART_GROUPS = [
  'body',
  'ground',
  'payloads',
  'layout',
  'gimbal',
  'wheel',
  'servo',
  'motor',
  'power',
  'sensor',
] as const;
export type PartGroup = (typeof PART_GROUPS)[number];

const GYRO_GROUPS: readonly PartGroup[] = ['gimbal', 'wheel', 'servo', 'motor'];

export const isGyroGroup = (group: PartGroup): boolean => GYRO_GROUPS.includes(group);

export const groupWord = (group: PartGroup, rig: Rig): string =>
  ({
    body: rig.body.kind === 'hull' ? 'Hull' : 'Body',
    ground: rig.body.kind === 'hull' ? 'Water' : 'Feet',
    payloads: 'Payloads',
    layout: 'Array',
    gimbal: 'Gimbal',
    wheel: 'Wheel',
    servo: 'Servo',
    motor: 'Motor',
    power: 'Battery',
    sensor: 'Sensor',
  })[group];

/** The group that holds what is selected on stage; the one open stays when it holds it already. */
export function groupOf(selection: Selection, open: PartGroup): PartGroup {
  switch (selection.kind) {
    case 'none':
      return open;
    case 'body':
    case 'hip':
      return 'body';
    case 'foot':
      return 'ground';
    case 'payload':
      return 'payloads';
    case 'gyro':
      return isGyroGroup(open) ? open : 'gimbal';
  }
}

/** What is selected on stage when a group is opened from the sheet. */
export function selectionFor(group: PartGroup, now: Selection): Selection | undefined {
  if (isGyroGroup(group)) return now.kind === 'gyro' ? now : { kind: 'gyro', index: 0 };
  if (group === 'body') return { kind: 'body', index: 0 };
  if (group === 'ground') return { kind: 'foot', index: 0 };
  if (group === 'payloads') return now.kind === 'payload' ? now : { kind: 'payload', index: 0 };
  return { kind: 'none', index: 0 };
}
