import { PAGE_COLOURS, QUANTITY_MARKS } from '../styles/quantityMarks';
import type { CurveLook } from './ribbonCurves';

export interface CurveStyle {
  readonly stroke: string;
  readonly width: number;
  readonly dash: readonly number[];
}

/** Stroke of a curve: the same for a marked quantity here as on stage and ledger. */
export function curveStyle(look: CurveLook, isDark: boolean): CurveStyle {
  const page = isDark ? PAGE_COLOURS.dark : PAGE_COLOURS.light;
  switch (look) {
    case 'lead':
      return { stroke: page.ink, width: 2, dash: [] };
    case 'follow':
      return { stroke: page.ink, width: 1.5, dash: [10, 3] };
    case 'planned':
      return { stroke: page.soft, width: 4, dash: [1, 5] };
    case 'ask':
      return { stroke: page.ink, width: 2, dash: [] };
    case 'have':
      return { stroke: page.fail, width: 1.5, dash: [] };
    default: {
      const mark = QUANTITY_MARKS[look];
      return { stroke: isDark ? mark.dark : mark.light, width: mark.width, dash: mark.dash };
    }
  }
}
