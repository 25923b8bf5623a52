import { type Bearing, STOCK_BEARING_SOURCE, STOCK_BEARINGS, type StockBearing } from '../../../core/rig';
import { Choice } from '../../fields/Choice';
import { writeToLikeGyros } from '../../fields/likeGyros';
import { RigFields } from '../../fields/RigFields';
import { writeAt } from '../../fields/rigPath';
import { Group } from '../../sheet/Group';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { ChoiceField } from './ChoiceField';

const millimetres = (metres: number): string => String(Math.round(metres * 1e5) / 100);

const sizeWords = ({ name, bore, outside, width }: StockBearing): string =>
  `${name} · ${millimetres(bore)} × ${millimetres(outside)} × ${millimetres(width)}`;

/** The standard size a bearing is, by its name and ratings; undefined for one with numbers of its own. */
const stockOf = (bearing: Bearing): string | undefined =>
  STOCK_BEARINGS.find(
    ({ name, bore, dynamicRating, staticRating }) =>
      name === bearing.name &&
      bore === bearing.bore &&
      dynamicRating === bearing.dynamicRating &&
      staticRating === bearing.staticRating,
  )?.name;

/** Standard sizes by one tap, then every number of the bearing by itself. */
export function BearingFields({ gyro }: { readonly gyro: number }) {
  const bearing = useDocument((document) => document.rig.array.gyros[gyro]?.bearing);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  const edit = useDocument((document) => document.edit);
  const isEachOnItsOwn = useSession((session) => session.isEachOnItsOwn);
  if (!bearing) return null;

  const choose = (size: string): void => {
    const stock = STOCK_BEARINGS.find(({ name }) => name === size);
    if (!stock) return;
    const { name, bore, dynamicRating, staticRating } = stock;
    const next: Bearing = { ...bearing, name, bore, dynamicRating, staticRating };
    edit(`Bearing ${name}`, (rig) =>
      isEachOnItsOwn
        ? writeAt(rig, ['array', 'gyros', gyro, 'bearing'], next)
        : writeToLikeGyros(rig, gyro, ['bearing'], next),
    );
  };

  return (
    <Group title="Bearing">
      <Choice<string>
        label="Standard size"
        options={STOCK_BEARINGS.map((size) => ({ value: size.name, label: sizeWords(size) }))}
        value={stockOf(bearing)}
        isReadOnly={isReadOnly}
        onChange={choose}
      />
      <p className="aside">Source: {STOCK_BEARING_SOURCE}.</p>
      <RigFields path={['array', 'gyros', gyro, 'bearing']} />
      <ChoiceField choice="preload" usual={0} />
    </Group>
  );
}
