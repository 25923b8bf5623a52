import type { PlaneAnswer, SheetOutcome } from '../../../core/bench';
import { formatNumber } from '../../../core/units';
import { Group } from '../../sheet/Group';
import { BalanceDial } from './BalanceDial';
import { type BalanceForm, holeAngles } from './balanceForm';

interface BalanceAnswerProps {
  readonly outcome: SheetOutcome;
  readonly form: BalanceForm;
}

/** Grams at an angle, on the dial and in words; the holes; the grade before and after. */
export function BalanceAnswer({ outcome, form }: BalanceAnswerProps) {
  if (outcome.kind === 'refused') {
    return (
      <div className="plan-state" data-state="fails" role="status">
        <h3>
          <b className="word-fails">Cannot be balanced from these</b>
        </h3>
        {outcome.sentences.map((sentence) => (
          <p key={sentence}>{sentence}</p>
        ))}
      </div>
    );
  }
  return (
    <>
      {outcome.planes.map((plane, p) => (
        <Plane
          // biome-ignore lint/suspicious/noArrayIndexKey: a plane is told by its place
          key={p}
          name={outcome.planes.length === 1 ? 'Weight to add' : `Plane ${p + 1}: weight to add`}
          plane={plane}
          form={form}
        />
      ))}
      {outcome.remarks.map((remark) => (
        <p key={remark} className="bench-remark">
          {remark}
        </p>
      ))}
      <p className="aside">Take the trial weights off first. Grades by ISO 21940-11.</p>
    </>
  );
}

/** What rounding leaves of nothing is nothing. */
const withoutDust = (value: number, scale: number): number => (value < 1e-9 * scale ? 0 : value);

const showGrade = (grade: number | undefined): string =>
  grade === undefined ? 'no grade in use' : `G ${formatNumber(grade, 2)}`;

interface PlaneProps {
  readonly name: string;
  readonly plane: PlaneAnswer;
  readonly form: BalanceForm;
}

function Plane({ name, plane, form }: PlaneProps) {
  const { mass_g, angle, doubt_g, holes, grade } = plane;
  const angles = holeAngles(form);
  const masses = holes?.kind === 'split' ? holes.masses : [];
  return (
    <Group title={name}>
      <p className="balance-figure">
        <b>
          {formatNumber(mass_g, 3)} g at {angle.toFixed(1)}°
        </b>
        {doubt_g > 0 && <small>± {formatNumber(doubt_g, 2)} g</small>}
      </p>
      <BalanceDial
        name={name}
        mass={mass_g * 1e-3}
        angle={(angle * Math.PI) / 180}
        holes={form.hasHoles ? angles.map((at, k) => ({ angle: at, mass: masses[k] ?? 0 })) : []}
      />
      {holes?.kind === 'refused' && <p className="bench-refusal">{holes.sentence}</p>}
      {holes?.kind === 'split' && (
        <table className="matrix">
          <thead>
            <tr>
              <th scope="col">Hole</th>
              <th scope="col">at</th>
              <th scope="col">{form.way === 'add' ? 'put in' : 'drill out'}</th>
            </tr>
          </thead>
          <tbody>
            {holes.masses.map((mass, k) =>
              mass > 0 ? (
                <tr key={angles[k]}>
                  <th scope="row">{k + 1}</th>
                  <td>{(((angles[k] ?? 0) * 180) / Math.PI).toFixed(1)}°</td>
                  <td>{formatNumber(mass * 1e3, 3)} g</td>
                </tr>
              ) : null,
            )}
          </tbody>
        </table>
      )}
      {holes?.kind === 'split' && holes.left > 1e-9 && (
        <p className="aside">{formatNumber(holes.left * 1e3, 2)} g are left, for the steps allow no more.</p>
      )}
      <p>
        {formatNumber(grade.before, 3)} mm/s, {showGrade(grade.gradeBefore)} before;{' '}
        {formatNumber(withoutDust(grade.after, grade.before), 3)} mm/s, {showGrade(grade.gradeAfter)} after.
      </p>
    </Group>
  );
}
