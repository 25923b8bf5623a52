import { useMemo } from 'react';
import { type CompiledRig, fallModeFigures } from '../../../core/physics';
import { formatNumber } from '../../../core/units';
import { Group } from '../../sheet/Group';
import { Refusals } from '../../sheet/Refusals';
import { useShown } from '../../state/reading';
import { AfloatFields } from './AfloatFields';
import { FigureRows } from './FigureRows';
import { TrimFields } from './TrimFields';
import { useCompiled } from './useCompiled';
import './weigh.css';

/** Told with the rest of the flotation where the rig floats. */
const AFLOAT = ['draught', 'metacentricHeight'];

/** What it weighs, where its centre is, how it falls: each number opens to its formula, inputs and source. */
export function WeighSheet() {
  const shown = useShown();
  const compiled = useCompiled();
  return (
    <>
      <Refusals />
      {shown && (
        <Group title="Whole rig">
          <FigureRows figures={shown.weigh.filter(({ id }) => !AFLOAT.includes(id))} />
        </Group>
      )}
      {compiled && <FallFigures compiled={compiled} />}
      {compiled && <TrimFields compiled={compiled} />}
      {compiled && <AfloatFields compiled={compiled} />}
      {shown && <InertiaTable inertia={shown.inertia} />}
    </>
  );
}

function FallFigures({ compiled }: { readonly compiled: CompiledRig }) {
  const figures = useMemo(() => fallModeFigures(compiled), [compiled]);
  return (
    <Group title="By itself, array still">
      <FigureRows figures={figures} />
    </Group>
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
