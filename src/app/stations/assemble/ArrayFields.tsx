import {
  BENCH_GYRO,
  LAYOUTS,
  type Layout,
  layOut,
  type QuantityInfo,
  type Rig,
  recogniseLayout,
} from '../../../core/rig';
import { NumberField } from '../../fields/NumberField';
import { RigNumber } from '../../fields/RigFields';
import { shapeAt } from '../../fields/rigPath';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { moveArray, placeOfArray, spreadArray } from './arrayPlace';
import { LayoutCheckFold } from './LayoutCheckFold';
import { LayoutPicture } from './LayoutPicture';

const USUAL_SPACING = 0.13;
/** The usual skew: the pyramid's envelope comes nearest a sphere. Wie, Space Vehicle Dynamics and Control, ch. 7. */
const USUAL_SKEW = (54.73 * Math.PI) / 180;

/** Lays the array out anew in the place of the old one, all gyros like its first. */
function layOutAnew(rig: Rig, layout: Layout): Rig {
  const first = rig.array.gyros[0] ?? BENCH_GYRO;
  const place = placeOfArray(rig.array.gyros) ?? { centre: first.position, spacing: 0 };
  const leader = rig.array.gyros.find((gyro) => gyro.drive.kind === 'servo');
  const pattern = {
    ...first,
    drive: leader?.drive ?? BENCH_GYRO.drive,
    // A reaction wheel rests; as the pattern of gimballed wheels it must turn again.
    speed: first.speed > 0 ? first.speed : BENCH_GYRO.speed,
  };
  const spacing = place.spacing > 0 ? place.spacing : USUAL_SPACING;
  const gyros = layOut(layout, pattern, { centre: place.centre, spacing, skew: USUAL_SKEW });
  return { ...rig, array: { gyros } };
}

/** Layouts by one tap, and the array moved and spread as one. */
export function ArrayFields() {
  const rig = useDocument((document) => document.rig);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const select = useSession((session) => session.select);
  const current = recogniseLayout(rig.array.gyros);
  const place = placeOfArray(rig.array.gyros);

  const choose = (layout: Layout): void => {
    select({ kind: 'none', index: 0 });
    edit(`Lay out: ${layout}`, (before) => layOutAnew(before, layout));
  };

  return (
    <>
      <Group title="Layout">
        <div className="layouts">
          {LAYOUTS.map((layout) => (
            <button
              key={layout}
              type="button"
              aria-pressed={layout === current}
              disabled={isReadOnly}
              onClick={() => choose(layout)}
            >
              <LayoutPicture layout={layout} />
              {layout.charAt(0).toUpperCase() + layout.slice(1)}
            </button>
          ))}
        </div>
        {place && <LayoutCheckFold />}
      </Group>
      {place && (
        <Group title="Place of the array">
          {([0, 1, 2] as const).map((axis) => (
            <PlaceNumber
              key={axis}
              path={['array', 'gyros', 0, 'position', axis]}
              label={`Middle ${['x, forward', 'y, left', 'z, up'][axis]}`}
              value={place.centre[axis]}
              change={(before, to) => moveArray(before, axis, to)}
            />
          ))}
          {place.spacing > 0 && (
            <PlaceNumber
              path={['array', 'gyros', 0, 'position', 0]}
              label="Spread"
              range={[0.01, 10]}
              value={place.spacing}
              change={spreadArray}
            />
          )}
        </Group>
      )}
      {place && (
        <Group title="All wheels">
          <RigNumber path={['array', 'gyros', 0, 'speed']} />
          <RigNumber path={['array', 'gyros', 0, 'tilt', 'max']} />
          <RigNumber path={['array', 'gyros', 0, 'tilt', 'min']} />
        </Group>
      )}
    </>
  );
}

interface PlaceNumberProps {
  /** The place in the rig whose range holds for this number too. */
  readonly path: readonly (string | number)[];
  readonly label: string;
  readonly range?: readonly [number, number];
  readonly value: number;
  readonly change: (rig: Rig, to: number) => Rig;
}

function PlaceNumber({ path, label, range, value, change }: PlaceNumberProps) {
  const rig = useDocument((document) => document.rig);
  const { edit, begin, commit, cancel, isReadOnly } = useDocument.getState();
  const shape = shapeAt(rig, path);
  if (shape.kind !== 'quantity') return null;
  const info: QuantityInfo = {
    ...shape.info,
    label,
    ...(range ? { min: range[0], max: range[1] } : {}),
  };
  return (
    <NumberField
      info={info}
      value={value}
      isReadOnly={isReadOnly}
      onChange={(to) => edit(label, (before) => change(before, to))}
      onBegin={() => begin(label)}
      onCommit={commit}
      onCancel={cancel}
    />
  );
}
