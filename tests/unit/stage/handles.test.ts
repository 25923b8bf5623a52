import { describe, expect, it } from 'vitest';
import { settle } from '../../../src/app/stage/dragging';
import { handlesOf } from '../../../src/app/stage/handles';
import { partName, selectableParts } from '../../../src/app/stage/parts';
import { partUnder } from '../../../src/app/stage/picking';
import type { Selection } from '../../../src/app/state/session';
import { DEMONSTRATIONS, PACER, type Rig, readRig, SKIFF, STRIDER } from '../../../src/core/rig';
import { expectClose } from '../../support/closeTo';

describe('every handle of every part of every demonstration rig', () => {
  const all = DEMONSTRATIONS.flatMap(({ rig }) =>
    selectableParts(rig).flatMap((part) =>
      handlesOf(rig, part, false).handles.map((handle) => ({ rig, part, handle })),
    ),
  );

  it('writes the value it is given, and is found again with that value', () => {
    for (const { rig, part, handle } of all) {
      const wanted = settle(
        handle,
        handle.value + 3 * handle.step * (handle.value >= handle.info.max ? -1 : 1),
      );
      const changed = handle.write(rig, wanted);
      const again = handlesOf(changed, part, false).handles.find((h) => h.id === handle.id);
      expectClose(again?.value ?? Number.NaN, wanted, { abs: 1e-11 }); // measured 5e-13, a turned axis
    }
  });

  it('makes a rig that still reads', () => {
    for (const { rig, handle } of all) {
      const changed = handle.write(rig, settle(handle, handle.value + handle.step));
      expect(readRig(changed).kind).toBe('read');
    }
  });

  it('keeps to the range of the schema however far it is dragged', () => {
    for (const { handle } of all) {
      expect(settle(handle, 1e9)).toBe(handle.info.max);
      expect(settle(handle, -1e9)).toBe(handle.info.min);
    }
  });

  it('has unit axes, so that a metre of drag is a metre', () => {
    for (const { handle } of all) {
      const axis = handle.kind === 'slide' ? handle.axis : handle.normal;
      expectClose(Math.hypot(...axis), 1, { abs: 1e-12 }); // measured 0
    }
  });
});

describe('parts', () => {
  it('have handles for body, hips, feet, gyros and payloads', () => {
    const ids = (rig: Rig, part: Selection) => handlesOf(rig, part, false).handles.map((handle) => handle.id);
    expect(ids(STRIDER, { kind: 'body', index: 0 })).toEqual(['torso length', 'torso width', 'torso height']);
    expect(ids(PACER, { kind: 'hip', index: 0 })).toContain('hip pitch');
    expect(ids(SKIFF, { kind: 'body', index: 0 })).toEqual(['hull length', 'beam', 'depth']);
    expect(ids(STRIDER, { kind: 'gyro', index: 1 })).toHaveLength(7);
    expect(ids(STRIDER, { kind: 'gyro', index: 9 })).toEqual([]);
    expect(ids(SKIFF, { kind: 'foot', index: 0 })).toEqual([]);
  });

  it('are named by where they are', () => {
    expect(partName(PACER, { kind: 'foot', index: 3 })).toBe('Back right foot');
    expect(partName(STRIDER, { kind: 'foot', index: 0 })).toBe('Left foot');
    expect(partName(STRIDER, { kind: 'payload', index: 0 })).toBe('Battery');
  });
});

describe('partUnder', () => {
  const hit = (part?: Selection) => ({ object: { userData: part ? { part } : {} } });
  const torso: Selection = { kind: 'body', index: 0 };
  const battery: Selection = { kind: 'payload', index: 0 };
  const hits = [hit(), hit(torso), hit(battery), hit(torso)];

  it('takes the nearest part first, then what lies behind it, then the nearest again', () => {
    expect(partUnder(hits, { kind: 'none', index: 0 })).toEqual(torso);
    expect(partUnder(hits, torso)).toEqual(battery);
    expect(partUnder(hits, battery)).toEqual(torso);
  });

  it('is nothing where there is no part', () => {
    expect(partUnder([hit()], torso)).toBeUndefined();
  });
});
