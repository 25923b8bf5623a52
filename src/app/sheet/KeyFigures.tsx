import { useShown } from '../state/reading';
import { useSession } from '../state/session';
import { mostMomentum } from '../state/stream';
import { showQuantity } from './showFigure';

/** Mass, centre, inertia and momentum in four boxes: what every edit is made for, always in sight. */
export function KeyFigures() {
  const shown = useShown();
  const units = useSession((session) => session.units);
  if (!shown) return null;
  const [x, y, z] = shown.centreOfMass;
  const length = (value: number): string => showQuantity(value, 'length', units.length);
  const momentum = mostMomentum(shown);
  return (
    <dl className="key-figures">
      <div>
        <dt>Mass</dt>
        <dd>{showQuantity(shown.mass, 'mass', units.mass, 4)}</dd>
      </div>
      <div>
        <dt>Centre, up</dt>
        <dd>{length(z)}</dd>
        <dd className="aside">
          {length(x)} fwd, {length(y)} left
        </dd>
      </div>
      <div>
        <dt>Roll inertia</dt>
        <dd>{showQuantity(shown.inertia[0] ?? Number.NaN, 'inertia', units.inertia)}</dd>
        <dd className="aside">about the centre</dd>
      </div>
      <div>
        <dt>Momentum to give</dt>
        <dd>
          {momentum === undefined ? '–' : showQuantity(momentum, 'angularMomentum', units.angularMomentum)}
        </dd>
        <dd className="aside">within the tilt limits</dd>
      </div>
    </dl>
  );
}
