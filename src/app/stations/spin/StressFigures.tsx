import type { GyroSpinSheet } from '../../../core/physics';
import { optionWords } from '../../fields/words';
import { spareWords } from '../../ledger/ledgerMarks';
import { FigureRow } from '../../sheet/FigureRow';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';

/** Stress of every part with its spare, hardest first; printed plastics as a range with its warning. */
export function StressFigures({ gyro, shown }: { readonly gyro: number; readonly shown: GyroSpinSheet }) {
  const parts = useDocument((document) => document.rig.array.gyros[gyro]?.wheel.parts);
  const units = useSession((session) => session.units);
  const rate = (value: number): string => showQuantity(value, 'spinRate', units.spinRate);
  const stress = (value: number): string => showQuantity(value, 'stress', units.stress);
  const title = (index: number): string => {
    const part = parts?.[index];
    if (!part) return `Part ${index + 1}`;
    return `${index + 1} · ${optionWords(part.kind)}${part.kind === 'bolts' ? '' : `, ${part.material}`}`;
  };
  return (
    <>
      {shown.stress.map((row) => (
        <Group key={row.figure.id} title={title(row.part)}>
          <FigureRow figure={row.figure} />
          <p className="spin-note" data-fails={row.spare < 0 || undefined}>
            <b className={row.spare < 0 ? 'word-fails' : undefined}>{spareWords(row.spare)}</b>
            {row.isPrinted
              ? `, safe from ${rate(row.safeSpeed[0])} across its layers to ${rate(row.safeSpeed[1])} along them`
              : `, safe to ${rate(row.safeSpeed[0])}`}
          </p>
          {row.isPrinted && (
            <p className="spin-note">
              A print is weak across its layers and no two are alike: the low end counts, and a test piece of
              your own print counts more.
            </p>
          )}
        </Group>
      ))}
      {shown.joints.length > 0 && (
        <Group title="Joints">
          {shown.joints.map((joint) => (
            <p className="spin-note" key={`${joint.part}-${joint.carrier}`}>
              Part {joint.part + 1} on {joint.carrier + 1} at{' '}
              {showQuantity(joint.radius, 'length', units.length)}:{' '}
              {joint.tension > 0
                ? `glue, bolts or shrink fit must hold ${stress(joint.tension)} apart.`
                : `presses itself tight with ${stress(-joint.tension)}.`}
            </p>
          ))}
        </Group>
      )}
      {shown.contacts.length > 0 && (
        <Group title="Balls in the groove">
          {shown.contacts.map((contact) => (
            <p className="spin-note" key={`${contact.part}-${contact.carrier}`}>
              Each ball of part {contact.part + 1} presses {showQuantity(contact.force, 'force', units.force)}{' '}
              on part {contact.carrier + 1}: {stress(contact.pressure)} at the spot; the wall dents from about{' '}
              {stress(contact.yieldPressure)}.
            </p>
          ))}
        </Group>
      )}
    </>
  );
}
