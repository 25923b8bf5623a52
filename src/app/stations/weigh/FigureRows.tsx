import type { Figure } from '../../../core/units';
import { FigureRow } from '../../sheet/FigureRow';

export const FigureRows = ({ figures }: { readonly figures: readonly Figure[] }) =>
  figures.map((figure) => <FigureRow key={figure.id} figure={figure} />);
