import { type Dimension, unitsOf } from '../../core/units';
import { Choice } from '../fields/Choice';
import { useSession } from '../state/session';
import { Dialog } from './Dialog';

/** The dimensions a workbench has more than one unit for, with the word for each. */
const CHOOSABLE: readonly (readonly [Dimension, string])[] = [
  ['length', 'Lengths'],
  ['mass', 'Masses'],
  ['angle', 'Angles'],
  ['angularRate', 'Turning rates'],
  ['spinRate', 'Wheel speeds'],
  ['torque', 'Torques'],
  ['force', 'Forces'],
  ['inertia', 'Inertias'],
  ['angularMomentum', 'Momenta'],
  ['stress', 'Stresses'],
  ['time', 'Times'],
];

/** Theme, units and how finely the stage is drawn. */
export function SettingsDialog({ onClose }: { readonly onClose: () => void }) {
  const session = useSession();
  return (
    <Dialog title="Settings" onClose={onClose}>
      <section>
        <Choice
          label="Look"
          options={[
            { value: 'light', label: 'Paper' },
            { value: 'dark', label: 'Slate' },
            { value: 'system', label: 'As the system' },
          ]}
          value={session.theme}
          onChange={session.setTheme}
        />
        <Choice
          label="Stage"
          options={[
            { value: 'high', label: 'Fine' },
            { value: 'low', label: 'Plain, for weak machines' },
          ]}
          value={session.quality}
          onChange={session.setQuality}
        />
      </section>
      <section>
        <h3>Units</h3>
        {CHOOSABLE.map(([dimension, word]) => (
          <Choice
            key={dimension}
            label={word}
            options={unitsOf(dimension).map(({ symbol }) => ({ value: symbol, label: symbol }))}
            value={session.units[dimension] ?? (unitsOf(dimension)[0]?.symbol as string)}
            onChange={(symbol) => session.chooseUnit(dimension, symbol)}
          />
        ))}
        <p className="aside">A typed number may bring its own unit, as in "3 in + 2 mm".</p>
      </section>
    </Dialog>
  );
}
