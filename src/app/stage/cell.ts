import { formatQuantity } from '../../core/units';
import { useSession } from '../state/session';
import { GRID_LEADS, roundUp } from './arrowScale';
import { useStage } from './stageFrame';

/** About so many cells of the grid go to the size of the rig. */
const CELLS_TO_RIG = 7;

/** Side of a cell of the grid, a round length, m; and in words, in the unit chosen for lengths or one that suits. */
export function useCell(): { readonly step: number; readonly words: string } {
  const { size } = useStage();
  const chosen = useSession((state) => state.units.length);
  const step = roundUp(size / CELLS_TO_RIG, GRID_LEADS);
  return { step, words: formatQuantity(step, 'length', chosen ?? (step < 0.5 ? 'mm' : 'm'), 2) };
}
