import type { WheelPart } from '../../../core/rig';
import { newWheelPart } from '../../fields/kindDefaults';
import { writeToLikeGyros } from '../../fields/likeGyros';
import { RigFields, RigKind, RigNumber } from '../../fields/RigFields';
import { writeAt } from '../../fields/rigPath';
import { optionWords } from '../../fields/words';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';

interface OfGyro {
  readonly gyro: number;
}

const at = (gyro: number, ...inner: (string | number)[]) => ['array', 'gyros', gyro, ...inner];

/** Limits of tilt, drive and frame; each gimbal's own place and axes once they are edited each on its own. */
export function GimbalFields({ gyro }: OfGyro) {
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  const count = useDocument((document) => document.rig.array.gyros.length);
  const name = useDocument((document) => document.rig.array.gyros[gyro]?.name);
  return (
    <>
      <Group title="Tilt limits">
        <RigNumber path={at(gyro, 'tilt', 'max')} />
        <RigNumber path={at(gyro, 'tilt', 'min')} />
      </Group>
      {(isEachOnItsOwn || count === 1) && (
        <>
          <Group title={`Place of ${name}`}>
            <RigFields path={at(gyro, 'name')} />
            <RigFields path={at(gyro, 'position')} />
          </Group>
          <Group title="Axes">
            <RigFields path={at(gyro, 'gimbalAxis')} />
            <RigFields path={at(gyro, 'spinAxis')} />
          </Group>
        </>
      )}
      <Group title="Frame">
        <RigFields path={at(gyro, 'gimbal')} />
      </Group>
    </>
  );
}

const PART_KINDS: readonly WheelPart['kind'][] = ['disc', 'rim', 'hub', 'balls', 'bolts'];
const MOST_PARTS = 24;

const radiusOf = (part: WheelPart): number =>
  part.kind === 'rim' ? part.outerRadius : 'radius' in part ? part.radius : part.pitchRadius;

/** Speed, sense and the stack of parts the wheel is made of. */
export function WheelFields({ gyro }: OfGyro) {
  const wheel = useDocument((document) => document.rig.array.gyros[gyro]?.wheel);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  if (!wheel) return null;

  const setParts = (label: string, parts: readonly WheelPart[]): void =>
    edit(label, (rig) =>
      isEachOnItsOwn
        ? writeAt(rig, at(gyro, 'wheel', 'parts'), parts)
        : writeToLikeGyros(rig, gyro, ['wheel', 'parts'], parts),
    );
  const radius = Math.max(...wheel.parts.map(radiusOf));

  return (
    <>
      <Group title="Wheel">
        <RigNumber path={at(gyro, 'speed')} />
        {isEachOnItsOwn && <RigFields path={at(gyro, 'sense')} />}
        <RigFields path={at(gyro, 'spin')} />
        <RigNumber path={at(gyro, 'wheel', 'balanceGrade')} />
      </Group>
      {wheel.parts.map((part, index) => (
        <Group
          // Two parts of a stack may be equal in everything, so their place is their name.
          // biome-ignore lint/suspicious/noArrayIndexKey: see above
          key={`${index}-${part.kind}`}
          title={`${index + 1} · ${optionWords(part.kind)}`}
          aside={
            <button
              type="button"
              className="quiet"
              disabled={isReadOnly || wheel.parts.length < 2}
              onClick={() =>
                setParts(
                  'Take a part off the wheel',
                  wheel.parts.filter((_, k) => k !== index),
                )
              }
            >
              Take off
            </button>
          }
        >
          <RigFields path={at(gyro, 'wheel', 'parts', index)} hidesKind />
        </Group>
      ))}
      <Group title="Add to the stack">
        <div className="choice-row">
          {PART_KINDS.map((kind) => (
            <button
              key={kind}
              type="button"
              disabled={isReadOnly || wheel.parts.length >= MOST_PARTS}
              onClick={() =>
                setParts('Add a part to the wheel', [...wheel.parts, newWheelPart(kind, radius)])
              }
            >
              {optionWords(kind)}
            </button>
          ))}
        </div>
      </Group>
    </>
  );
}

/** How the gimbal is moved, and the servo that does it. */
export function ServoFields({ gyro }: OfGyro) {
  const drive = useDocument((document) => document.rig.array.gyros[gyro]?.drive);
  if (!drive) return null;
  return (
    <>
      <Group title="Drive">
        <RigKind path={at(gyro, 'drive')} />
        {drive.kind !== 'servo' && <RigFields path={at(gyro, 'drive')} hidesKind />}
      </Group>
      {drive.kind === 'servo' && (
        <Group title="Servo">
          <RigFields path={at(gyro, 'drive', 'servo')} />
        </Group>
      )}
    </>
  );
}

/** What turns the wheel and what it turns in. */
export function MotorFields({ gyro }: OfGyro) {
  return (
    <>
      <Group title="Motor">
        <RigFields path={at(gyro, 'motor')} />
      </Group>
      <Group title="Bearing">
        <RigFields path={at(gyro, 'bearing')} />
      </Group>
      <Group title="Housing">
        <RigFields path={at(gyro, 'housing')} />
      </Group>
    </>
  );
}
