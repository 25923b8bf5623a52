import { useEffect } from 'react';
import type { Gyro, PartList, PartOf, Rig } from '../../core/rig';
import { writeToLikeGyros } from '../fields/likeGyros';
import { type RigPath, writeAt } from '../fields/rigPath';
import { Group } from '../sheet/Group';
import { useDocument } from '../state/document';
import { useSession } from '../state/session';
import { dropOwnPart, keepOwnPart, loadOwnParts, useOwnParts } from './ownParts';

const WORDS: Readonly<Record<PartList, { readonly all: string; readonly one: string }>> = {
  motors: { all: 'My motors', one: 'motor' },
  servos: { all: 'My servos', one: 'servo' },
  wheels: { all: 'My wheels', one: 'wheel' },
  bearings: { all: 'My bearings', one: 'bearing' },
};

/** Where a gyro holds a part of a list; nothing for a servo where the gimbal has none. */
function placeOf(list: PartList, gyro: Gyro): RigPath | undefined {
  switch (list) {
    case 'motors':
      return ['motor'];
    case 'wheels':
      return ['wheel'];
    case 'bearings':
      return ['bearing'];
    case 'servos':
      return gyro.drive.kind === 'servo' ? ['drive', 'servo'] : undefined;
  }
}

function partOf(list: PartList, gyro: Gyro): PartOf<PartList> | undefined {
  switch (list) {
    case 'motors':
      return gyro.motor;
    case 'wheels':
      return gyro.wheel;
    case 'bearings':
      return gyro.bearing;
    case 'servos':
      return gyro.drive.kind === 'servo' ? gyro.drive.servo : undefined;
  }
}

/** One's own parts of a kind: used in the rig by one tap, and the rig's own kept by another. */
export function OwnParts({ list, gyro: index }: { readonly list: PartList; readonly gyro: number }) {
  const gyro = useDocument((document) => document.rig.array.gyros[index]);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const kept = useOwnParts((state) => state.parts[list]);
  useEffect(() => void loadOwnParts(), []);
  const place = gyro && placeOf(list, gyro);
  const current = gyro && partOf(list, gyro);
  if (!place || !current) return null;
  const { all, one } = WORDS[list];

  const use = (part: PartOf<PartList>): void =>
    edit(`Use ${part.name}`, (rig: Rig) =>
      isEachOnItsOwn
        ? writeAt(rig, ['array', 'gyros', index, ...place], part)
        : writeToLikeGyros(rig, index, place, part),
    );

  return (
    <Group title={all}>
      <ul className="own-parts">
        {kept.map((part) => (
          <li key={part.name}>
            <span>{part.name}</span>
            <button
              type="button"
              disabled={isReadOnly}
              aria-label={`Use ${part.name}`}
              onClick={() => use(part)}
            >
              Use
            </button>
            <button
              type="button"
              className="quiet"
              aria-label={`Delete ${part.name}`}
              onClick={() => void dropOwnPart(list, part.name)}
            >
              Delete
            </button>
          </li>
        ))}
      </ul>
      <button type="button" className="wide" onClick={() => void keepOwnPart(list, current)}>
        Keep this {one}: {current.name}
      </button>
    </Group>
  );
}
