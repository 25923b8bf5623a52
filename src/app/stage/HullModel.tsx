import { useFrame } from '@react-three/fiber';
import { useMemo } from 'react';
import { BoxGeometry, DoubleSide, Shape, ShapeGeometry, Vector2 } from 'three';
import type { HullBody } from '../../core/rig';
import { sectionOutline } from './bodyPlaces';
import { Inked, noRaycast, useGeometry } from './Inked';
import { useIsChosen } from './picking';
import { segmentsGeometry, sweptSheet } from './shapes';
import { useStage } from './stageFrame';
import { meetWater } from './waterline';

/** Ink along the hull: every knuckle of the section from end to end, and the section at both ends and between. */
function hullLines(
  outline: readonly (readonly [number, number])[],
  length: number,
  isRound: boolean,
): number[] {
  const points: number[] = [];
  const frames = [-0.5, -0.25, 0, 0.25, 0.5];
  for (const share of frames) {
    for (let i = 0; i + 1 < outline.length; i++) {
      points.push(share * length, ...outline[i], share * length, ...outline[i + 1]);
    }
  }
  outline.forEach(([y, z], i) => {
    const isEnd = i === 0 || i === outline.length - 1 || (y === 0 && z === 0);
    if (isEnd || !isRound) points.push(-length / 2, y, z, length / 2, y, z);
  });
  return points;
}

/** The hull as what its numbers say: one section swept over its length, seen through so that the wheels show. */
export function HullModel({ body }: { readonly body: HullBody }) {
  const { palette } = useStage();
  const isChosen = useIsChosen('body');
  const { section, length, keel } = body;
  const outline = useMemo(() => sectionOutline(section), [section]);
  const sheet = useGeometry(() => sweptSheet(outline, length), [outline, length]);
  const lines = useGeometry(
    () => segmentsGeometry(hullLines(outline, length, section.kind === 'bilge')),
    [outline, length, section],
  );
  const end = useGeometry(() => {
    // A shape lies in x-y; turned twice it stands in y-z.
    const shape = new Shape();
    shape.setFromPoints(outline.map(([y, z]) => new Vector2(y, z)));
    shape.closePath();
    return new ShapeGeometry(shape).rotateX(Math.PI / 2).rotateZ(Math.PI / 2);
  }, [outline]);
  const part = { part: { kind: 'body', index: 0 } };
  const face = {
    color: palette.body,
    transparent: true,
    depthWrite: false,
    side: DoubleSide,
    emissive: palette.chosen,
    emissiveIntensity: isChosen ? 0.3 : 0,
  };
  return (
    <>
      <mesh geometry={sheet} userData={part} renderOrder={2}>
        <meshLambertMaterial {...face} opacity={0.42} />
      </mesh>
      <mesh geometry={end} position={[-length / 2, 0, 0]} userData={part} renderOrder={2}>
        <meshLambertMaterial {...face} opacity={0.5} />
      </mesh>
      <mesh geometry={end} position={[length / 2, 0, 0]} userData={part} renderOrder={2}>
        <meshLambertMaterial {...face} opacity={0.22} />
      </mesh>
      <lineSegments geometry={lines} raycast={noRaycast} renderOrder={3}>
        <lineBasicMaterial color={isChosen ? palette.chosen : palette.ink} transparent opacity={0.6} />
      </lineSegments>
      <Waterline outline={outline} length={length} />
      {keel.kind === 'fin' && <Fin depth={keel.depth} length={keel.length} thickness={keel.thickness} />}
    </>
  );
}

/** Where the water meets the sides, so that draught and heel can be read off the hull. */
function Waterline({
  outline,
  length,
}: {
  readonly outline: ReturnType<typeof sectionOutline>;
  readonly length: number;
}) {
  const { frame, palette } = useStage();
  const lines = useGeometry(() => segmentsGeometry(new Array<number>(12).fill(0)), []);
  const met = useMemo(() => new Float64Array(4), []);
  useFrame(() => {
    meetWater(outline, frame.instant, met);
    const position = lines.getAttribute('position');
    let count = 0;
    for (let side = 0; side < 2; side++) {
      const y = met[2 * side];
      const z = met[2 * side + 1];
      if (Number.isNaN(y)) continue;
      position.setXYZ(count++, -length / 2, y, z);
      position.setXYZ(count++, length / 2, y, z);
    }
    position.needsUpdate = true;
    lines.setDrawRange(0, count);
  });
  return (
    <lineSegments geometry={lines} raycast={noRaycast} renderOrder={4} frustumCulled={false}>
      <lineBasicMaterial color={palette.waterline} />
    </lineSegments>
  );
}

function Fin(props: { readonly depth: number; readonly length: number; readonly thickness: number }) {
  const { palette } = useStage();
  const { depth, length, thickness } = props;
  const fin = useGeometry(
    () => new BoxGeometry(length, thickness, depth).translate(0, 0, -depth / 2),
    [depth, length, thickness],
  );
  return <Inked geometry={fin} colour={palette.gimbal} part={{ kind: 'body', index: 0 }} />;
}
