import { useMemo } from 'react';
import { type CompiledRig, type RollStart, reportAfloat } from '../../../core/physics';
import { RigNumber } from '../../fields/RigFields';
import { Group } from '../../sheet/Group';
import { showQuantity } from '../../sheet/showFigure';
import { useDocument } from '../../state/document';
import { useSession } from '../../state/session';
import { FigureRows } from './FigureRows';
import { RightingPlot } from './RightingPlot';

function takeUsual({ addedInertia, linearDamping, quadraticDamping }: RollStart): void {
  useDocument
    .getState()
    .edit('Usual roll values', (rig) =>
      rig.footing.kind === 'float'
        ? { ...rig, footing: { ...rig.footing, addedInertia, linearDamping, quadraticDamping } }
        : rig,
    );
}

/** Hydrostatics, the righting-arm curve, and what the water adds to the roll; nothing on land. */
export function AfloatFields({ compiled }: { readonly compiled: CompiledRig }) {
  const afloat = useMemo(() => reportAfloat(compiled), [compiled]);
  const units = useSession((session) => session.units);
  const isReadOnly = useDocument((document) => document.isReadOnly);
  if (!afloat) return null;
  const { usual } = afloat;
  return (
    <>
      <Group title="Afloat">
        <RightingPlot arms={afloat.arms} />
        <FigureRows figures={afloat.figures} />
      </Group>
      <Group title="Roll in the water">
        <RigNumber path={['footing', 'addedInertia']} />
        <RigNumber path={['footing', 'linearDamping']} />
        <RigNumber path={['footing', 'quadraticDamping']} />
        <button type="button" className="wide" disabled={isReadOnly} onClick={() => takeUsual(usual)}>
          Take the usual values
        </button>
        <p className="weigh-note">
          Usual for this hull: {showQuantity(usual.addedInertia, 'inertia', units.inertia)},{' '}
          {showQuantity(usual.linearDamping, 'damping', units.damping)},{' '}
          {showQuantity(usual.quadraticDamping, 'quadraticDamping', units.quadraticDamping)}. Common practice,
          from memory; a roll-decay test replaces them.
        </p>
      </Group>
    </>
  );
}
