import { useMemo } from 'react';
import { formatQuantity } from '../../core/units';
import { useSession } from '../state/session';
import { type MarkedQuantity, QUANTITY_MARKS } from '../styles/quantityMarks';
import { motionScales } from './arrowScale';
import { SHOWN_SLOWER } from './GyroModel';
import { MarkGlyph } from './MarkGlyph';
import type { Palette } from './palette';
import { LONGEST_ARC, useIsPlaying, useShown } from './stageFrame';

const MARKS: readonly MarkedQuantity[] = ['momentum', 'torque', 'demand', 'leak'];

/** Which arrow is which, what their lengths mean, and that the wheels are not shown at their speed. */
export function StageCaption({ palette }: { readonly palette: Palette }) {
  const shown = useShown();
  const isPlaying = useIsPlaying();
  const units = useSession((state) => state.units);
  const { left, right, bottom } = useSession((state) => state.stageInsets);
  const scales = useMemo(() => (shown ? motionScales(shown.motion, LONGEST_ARC) : undefined), [shown]);
  if (!shown || !scales || shown.motion.gyros === 0) return null;
  const torque = formatQuantity(scales.torque.full, 'torque', units.torque, 2);
  const momentum = formatQuantity(scales.momentum.full, 'angularMomentum', units.angularMomentum, 2);
  return (
    <div className="stage-caption" style={{ left: left + 12, right: right + 12, bottom: bottom + 8 }}>
      {MARKS.map((quantity) => (
        <span key={quantity}>
          <span style={{ color: palette.marks[quantity].getStyle() }}>
            <MarkGlyph quantity={quantity} />
          </span>{' '}
          {QUANTITY_MARKS[quantity].label}
        </span>
      ))}
      <span title="The longest arc and the longest arrow stand for these values; two rings on one mean that there is more.">
        Longest: {torque}, {momentum}
      </span>
      {isPlaying && (
        <span title="So that the eye can follow the mark on each wheel. Nothing is worked out from it.">
          Wheels turn {SHOWN_SLOWER} times faster than shown
        </span>
      )}
    </div>
  );
}
