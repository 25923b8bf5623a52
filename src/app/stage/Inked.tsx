import { useEffect, useMemo } from 'react';
import { type BufferGeometry, type Color, DoubleSide, EdgesGeometry, FrontSide } from 'three';
import type { Selection } from '../state/session';
import { useIsChosen } from './picking';
import { useStage } from './stageFrame';

/** Disposes of a geometry when another takes its place or the stage goes. */
export function useGeometry<G extends { dispose: () => void }>(make: () => G, inputs: readonly unknown[]): G {
  // biome-ignore lint/correctness/useExhaustiveDependencies: the caller names what the geometry is made from.
  const geometry = useMemo(make, inputs);
  useEffect(() => () => geometry.dispose(), [geometry]);
  return geometry;
}

/** For lines: what they belong to is hit instead of them. */
export const noRaycast = (): void => undefined;

interface InkedProps {
  readonly geometry: BufferGeometry;
  readonly colour: Color;
  readonly part?: Selection;
  readonly opacity?: number;
  readonly isTwoSided?: boolean;
  /** Edges sharper than this are inked, degrees; 0 inks none. */
  readonly edgeAngle?: number;
  readonly hasVertexColours?: boolean;
  readonly isShiny?: boolean;
}

/** A matte part with its edges drawn in ink; in the colour of choice while it is selected. */
export function Inked(props: InkedProps) {
  const { geometry, colour, part, opacity = 1, edgeAngle = 25 } = props;
  const { palette } = useStage();
  const isChosen = useIsChosen(part?.kind ?? 'none', part?.index) && part !== undefined;
  const edges = useGeometry(
    () => (edgeAngle > 0 ? new EdgesGeometry(geometry, edgeAngle) : new EdgesGeometry()),
    [geometry, edgeAngle],
  );
  const material = {
    color: colour,
    vertexColors: props.hasVertexColours ?? false,
    transparent: opacity < 1,
    opacity,
    depthWrite: opacity === 1,
    side: props.isTwoSided ? DoubleSide : FrontSide,
    emissive: palette.chosen,
    emissiveIntensity: isChosen ? 0.32 : 0,
    // Faces step back a hair, so that the ink on their edges is not half hidden.
    polygonOffset: true,
    polygonOffsetFactor: 1,
    polygonOffsetUnits: 1,
  };
  return (
    <>
      <mesh geometry={geometry} userData={part ? { part } : {}} renderOrder={opacity < 1 ? 2 : 0}>
        {props.isShiny ? (
          <meshPhongMaterial {...material} shininess={38} specular="#3a3a38" />
        ) : (
          <meshLambertMaterial {...material} />
        )}
      </mesh>
      {edgeAngle > 0 && (
        <lineSegments geometry={edges} raycast={noRaycast} renderOrder={opacity < 1 ? 3 : 1}>
          <lineBasicMaterial
            color={isChosen ? palette.chosen : palette.ink}
            transparent
            opacity={isChosen ? 1 : 0.62}
          />
        </lineSegments>
      )}
    </>
  );
}
