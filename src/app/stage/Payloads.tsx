import { BoxGeometry } from 'three';
import type { Payload } from '../../core/rig';
import { Inked, useGeometry } from './Inked';
import { useStage } from './stageFrame';

export function Payloads() {
  const { rig } = useStage();
  return rig.payloads.map((payload, index) => (
    // biome-ignore lint/suspicious/noArrayIndexKey: payloads are known by their place in the list.
    <PayloadBox key={index} payload={payload} index={index} />
  ));
}

function PayloadBox({ payload, index }: { readonly payload: Payload; readonly index: number }) {
  const { palette, rig } = useStage();
  // What a hull carries would hide its wheels.
  const isInHull = rig.body.kind === 'hull';
  const [x, y, z] = payload.size;
  const box = useGeometry(() => new BoxGeometry(x, y, z), [x, y, z]);
  return (
    <group position={[...payload.position]}>
      <Inked
        geometry={box}
        colour={palette.cargo}
        opacity={isInHull ? 0.5 : 1}
        part={{ kind: 'payload', index }}
      />
    </group>
  );
}
