import { useThree } from '@react-three/fiber';
import { lazy, Suspense, useEffect } from 'react';
import type { Vector3 } from 'three';
import { useSession } from '../state/session';
import { useLayoutCheck, useLayoutOnStage } from '../stations/assemble/layoutCheckStore';
import { TurnArc, useArc, useArrayPlace } from './QuantityArrows';
import { Label } from './StageLabel';
import { arcLozenges } from './shapes';
import { LONGEST_ARC, useStage } from './stageFrame';

const MomentumEnvelope = lazy(async () => ({
  default: (await import('./MomentumEnvelope')).MomentumEnvelope,
}));

/** What the layout check puts on the stage: the envelope of momentum, and what a fault leaves over. */
export function LayoutMarks() {
  const { isEnvelopeShown, areInnerShown } = useLayoutCheck();
  const { torque, momentum } = useLayoutOnStage();
  const { middle } = useArrayPlace();
  const { rig } = useStage();
  const invalidate = useThree((state) => state.invalidate);
  // biome-ignore lint/correctness/useExhaustiveDependencies: each of these changes what is drawn by refs.
  useEffect(() => invalidate(), [invalidate, torque, momentum, isEnvelopeShown, areInnerShown]);
  // Other stations have the stage to themselves.
  const isAtHand = useSession(({ station }) => station === 'assemble');
  if (rig.array.gyros.length === 0 || !isAtHand) return null;
  return (
    <group position={[...middle]}>
      {isEnvelopeShown && (
        <Suspense fallback={null}>
          <MomentumEnvelope areInnerShown={areInnerShown} momentum={momentum} />
        </Suspense>
      )}
      {torque && <FaultLeak torque={torque} />}
    </group>
  );
}

/** A fault leaves little over beside what the array gives: shown this many times as long, and said so. */
const SHOWN_LONGER = 10;

/** Torque that a fault leaves over, about whatever axis it turns the body. */
function FaultLeak({ torque }: { readonly torque: readonly [number, number, number] }) {
  const { palette, size } = useStage();
  const { reach } = useArrayPlace();
  const radius = 1.3 * Math.max(1.15 * reach, 0.17 * size);
  const lozenge = 0.019 * size;
  const arc = useArc(() => arcLozenges(radius, lozenge, LONGEST_ARC, 14), [radius, lozenge]);
  const read = (out: Vector3): void => {
    out.set(...torque).multiplyScalar(SHOWN_LONGER);
  };
  return (
    <>
      <TurnArc geometry={arc} radius={radius} colour={palette.marks.leak} read={read} />
      <Label text={`left over × ${SHOWN_LONGER}`} at={[0, 0, 1.08 * radius]} />
    </>
  );
}
