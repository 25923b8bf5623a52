import { formatNumber } from '../../../core/units';
import { FigureRow } from '../../sheet/FigureRow';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { useShown } from '../../state/reading';

/** What it weighs, where its centre is, how it falls: each number opens to its formula, inputs and source. */
export function WeighSheet() {
  const shown = useShown();
  return (
    <>
      <Refusals />
      {shown && (
        <Group title="Whole rig">
          {shown.weigh.map((figure) => (
            <FigureRow key={figure.id} figure={figure} />
          ))}
        </Group>
      )}
      {shown && <InertiaTable inertia={shown.inertia} />}
    </>
  );
}

/** Relative to the greatest element; less is what rounding leaves of a zero. */
const DUST = 1e-12;

function withoutDust(matrix: readonly number[], place: number): number {
  const value = matrix[place] ?? Number.NaN;
  return Math.abs(value) < DUST * Math.max(...matrix.map(Math.abs)) ? 0 : value;
}

const AXES = ['x', 'y', 'z'] as const;

function InertiaTable({ inertia }: { readonly inertia: readonly number[] }) {
  return (
    <Group title="Inertia about the centre, kg·m²">
      <table className="matrix">
        <thead>
          <tr>
            <th scope="col">
              <span className="unseen">Axis</span>
            </th>
            {AXES.map((axis) => (
              <th key={axis} scope="col">
                {axis}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {AXES.map((row, i) => (
            <tr key={row}>
              <th scope="row">{row}</th>
              {AXES.map((axis, j) => (
                <td key={axis}>{formatNumber(withoutDust(inertia, 3 * i + j), 4)}</td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </Group>
  );
}
