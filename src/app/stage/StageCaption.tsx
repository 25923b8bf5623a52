import { useMemo } from 'react';
import { formatQuantity } from '../../core/units';
import { useSession } from '../state/session';
import { QUANTITY_MARKS } from '../styles/quantityMarks';
import { motionScales } from './arrowScale';
import { SHOWN_SLOWER } from './GyroModel';
import { LONGEST_ARC, useIsPlaying, useShown } from './stageFrame';

/** What the lengths of the arrows mean, and that the wheels are not shown at their speed. */
export function StageCaption() {
  const shown = useShown();
  const isPlaying = useIsPlaying();
  const { left, right, bottom } = useSession((state) => state.stageInsets);
  const scales = useMemo(() => (shown ? motionScales(shown.motion, LONGEST_ARC) : undefined), [shown]);
  if (!shown || !scales || shown.motion.gyros === 0) return null;
  return (
    <p className="stage-caption" style={{ left: left + 12, right: right + 12, bottom: bottom + 8 }}>
      <span>
        {QUANTITY_MARKS.torque.label}: full arc {formatQuantity(scales.torque.full, 'torque', undefined, 2)}
      </span>
      <span>
        {QUANTITY_MARKS.momentum.label}: full arrow{' '}
        {formatQuantity(scales.momentum.full, 'angularMomentum', undefined, 2)}
      </span>
      {isPlaying && <span>Wheels shown {SHOWN_SLOWER} times slower</span>}
    </p>
  );
}
