/** The parts that can be selected, and what they are called. */
import type { Rig } from '../../core/rig';
import type { Selection } from '../state/session';

/** In the order the keyboard goes through them. */
export function selectableParts(rig: Rig): readonly Selection[] {
  const legs = rig.body.kind === 'legged' ? rig.body.legs : 0;
  return [
    { kind: 'body', index: 0 },
    ...(legs > 0 ? [{ kind: 'hip', index: 0 } as const] : []),
    ...Array.from({ length: legs }, (_, index) => ({ kind: 'foot', index }) as const),
    ...rig.array.gyros.map((_, index) => ({ kind: 'gyro', index }) as const),
    ...rig.payloads.map((_, index) => ({ kind: 'payload', index }) as const),
  ];
}

const PAIR_NAMES: Readonly<Record<number, readonly string[]>> = {
  2: [''],
  4: ['Front ', 'Back '],
  6: ['Front ', 'Middle ', 'Back '],
};

function footName(legs: number, index: number): string {
  const pair = PAIR_NAMES[legs]?.[Math.floor(index / 2)] ?? '';
  const name = `${pair}${index % 2 === 0 ? 'left' : 'right'} foot`;
  return name.charAt(0).toUpperCase() + name.slice(1);
}

const BODY_NAMES = { legged: 'Torso', hull: 'Hull', inline: 'Frame' } as const;

/** What a selected part is called. */
export function partName(rig: Rig, { kind, index }: Selection): string {
  switch (kind) {
    case 'none':
      return 'Nothing selected';
    case 'body':
      return BODY_NAMES[rig.body.kind];
    case 'hip':
      return 'Hips';
    case 'foot':
      return rig.body.kind === 'legged' ? footName(rig.body.legs, index) : 'Foot';
    case 'gyro':
      return rig.array.gyros[index]?.name ?? 'Gyro';
    case 'payload':
      return rig.payloads[index]?.name ?? 'Payload';
  }
}
