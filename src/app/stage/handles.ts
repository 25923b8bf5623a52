/** What can be taken hold of on the selected part. */
import type { Rig } from '../../core/rig';
import type { Selection } from '../state/session';
import { bodyHandles, footHandles, hipHandles } from './bodyHandles';
import { boxDiagonal, rigBox } from './bodyPlaces';
import { gyroHandles, payloadHandles } from './cargoHandles';
import { lengthStep } from './dragMaths';
import type { HandleSet } from './handleTypes';

const NO_HANDLES: HandleSet = { frame: 'body', handles: [] };

/** Everything that can be dragged on what is selected; none for things that are not there. */
export function handlesOf(rig: Rig, selection: Selection, isEachOnItsOwn: boolean): HandleSet {
  const { kind, index } = selection;
  const step = lengthStep(boxDiagonal(rigBox(rig)));
  switch (kind) {
    case 'none':
      return NO_HANDLES;
    case 'body':
      return { frame: 'body', handles: bodyHandles(rig, step) };
    case 'foot':
      return { frame: 'foot', handles: footHandles(rig, index, step) };
    case 'hip':
      return { frame: 'body', handles: hipHandles(rig, step) };
    case 'gyro': {
      const gyro = rig.array.gyros[index];
      return gyro ? { frame: 'body', handles: gyroHandles(gyro, index, isEachOnItsOwn, step) } : NO_HANDLES;
    }
    case 'payload': {
      const payload = rig.payloads[index];
      return payload ? { frame: 'body', handles: payloadHandles(payload, index, step) } : NO_HANDLES;
    }
  }
}
