import { BoxGeometry, CylinderGeometry, TorusGeometry } from 'three';
import type { InlineBody } from '../../core/rig';
import { roadWheelPlaces } from './bodyPlaces';
import { Inked, useGeometry } from './Inked';
import { useStage } from './stageFrame';

/** A tyre crowned by nothing would be a line: it is drawn this thick, as a share of its radius. */
const THINNEST_CROWN = 0.06;

export function InlineModel({ body }: { readonly body: InlineBody }) {
  const { palette } = useStage();
  const { length, width, height, centreHeight } = body.frame;
  const { radius } = body.tyre;
  const crown = Math.min(radius * 0.6, Math.max(body.tyre.crownRadius, THINNEST_CROWN * radius));
  const frame = useGeometry(() => new BoxGeometry(length, width, height), [length, width, height]);
  const tyre = useGeometry(
    () => new TorusGeometry(radius - crown, crown, 12, 40).rotateX(Math.PI / 2),
    [radius, crown],
  );
  const web = useGeometry(
    () => new CylinderGeometry(radius - crown, radius - crown, crown * 0.5, 40),
    [radius, crown],
  );
  const fork = useGeometry(() => {
    const rise = Math.max(0.02 * radius, centreHeight - radius);
    return new BoxGeometry(0.16 * radius, 2.6 * crown, rise).translate(0, 0, rise / 2);
  }, [radius, crown, centreHeight]);
  const part = { kind: 'body', index: 0 } as const;
  return (
    <>
      <group position={[0, 0, centreHeight]}>
        <Inked geometry={frame} colour={palette.body} opacity={0.78} part={part} />
      </group>
      {roadWheelPlaces(body).map((place) => (
        <group key={place[0]} position={[...place]}>
          <Inked geometry={tyre} colour={palette.soft} edgeAngle={0} part={part} />
          <Inked geometry={web} colour={palette.cargo} part={part} />
          <Inked geometry={fork} colour={palette.gimbal} part={part} />
        </group>
      ))}
    </>
  );
}
