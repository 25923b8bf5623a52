import { type Patch, patchRig } from '../../../core/bench';
import type { Rig } from '../../../core/rig';
import { type Dimension, formatQuantity } from '../../../core/units';
import { type RigPath, shapeAt } from '../../fields/rigPath';
import type { ChosenUnits } from '../../state/session';
import { agrees } from './benchMark';

/** What putting a result into the rig would do, before it is done. */
export type PatchOffer =
  | {
      readonly kind: 'offer';
      readonly label: string;
      readonly before: string;
      readonly after: string;
      /** The rig's own number lies within the interval found: nothing needs to change. */
      readonly agrees: boolean;
      readonly rig: Rig;
    }
  | { readonly kind: 'none'; readonly sentence: string };

const pathOf = (field: string): RigPath =>
  field
    .replace(/\[(\d+)\]/g, '.$1')
    .split('.')
    .map((step) => (/^\d+$/.test(step) ? Number(step) : step));

/** Tries one result on a rig; the rig given is not changed. */
export function offerPatch(
  rig: Rig,
  patch: Patch,
  gyros: readonly number[] | undefined,
  units: ChosenUnits,
): PatchOffer {
  const patched = patchRig(rig, [patch], gyros);
  const first = patched.applied[0];
  if (!first) {
    const left = patched.left[0];
    return { kind: 'none', sentence: left?.sentence ?? 'This rig has no such field.' };
  }
  const shape = shapeAt(rig, pathOf(first.field));
  const dimension: Dimension = shape.kind === 'quantity' ? shape.info.dimension : 'ratio';
  const show = (si: number): string => formatQuantity(si, dimension, units[dimension], 4);
  const count = patched.applied.length;
  return {
    kind: 'offer',
    label: `${shape.kind === 'quantity' ? shape.info.label : first.field}${count > 1 ? `, ${count} gyros` : ''}`,
    before: show(first.before),
    after: show(first.after),
    agrees: patched.applied.every(agrees),
    rig: patched.rig,
  };
}
