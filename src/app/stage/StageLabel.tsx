import { useThree } from '@react-three/fiber';
import { useEffect, useMemo } from 'react';
import { CanvasTexture, SRGBColorSpace } from 'three';
import { FIELD_OF_VIEW, useStage } from './stageFrame';

/** A canvas texture that goes when another takes its place. */
export function useTexture(
  draw: (context: CanvasRenderingContext2D) => void,
  width: number,
  height: number,
  inputs: readonly unknown[],
) {
  // biome-ignore lint/correctness/useExhaustiveDependencies: the caller names what the picture is drawn from.
  const texture = useMemo(() => {
    const canvas = document.createElement('canvas');
    canvas.width = width;
    canvas.height = height;
    const context = canvas.getContext('2d');
    if (context) draw(context);
    const made = new CanvasTexture(canvas);
    made.colorSpace = SRGBColorSpace;
    return made;
  }, [width, height, ...inputs]);
  useEffect(() => () => texture.dispose(), [texture]);
  return texture;
}

/** CSS pixels. */
const LABEL_HEIGHT = 19;

/**
 * Size that makes a sprite of fixed screen size one CSS pixel high. Such a sprite is as large as if it stood one
 * unit from the eye, where the picture is 2 tan(fov / 2) high.
 */
export function usePixelHeight(): number {
  const height = useThree((state) => state.size.height);
  return (2 * Math.tan((FIELD_OF_VIEW * Math.PI) / 360)) / Math.max(1, height);
}

/** A word on the stage that keeps its size on the screen. */
export function Label({
  text,
  at,
}: {
  readonly text: string;
  readonly at: readonly [number, number, number];
}) {
  const { palette } = useStage();
  const pixel = usePixelHeight();
  const width = 24 * text.length + 24;
  const ink = `#${palette.soft.getHexString()}`;
  const texture = useTexture(
    (context) => {
      context.font = '500 36px "Public Sans Variable", system-ui, sans-serif';
      context.fillStyle = ink;
      context.textBaseline = 'middle';
      context.fillText(text, 4, 26);
    },
    width,
    52,
    [text, ink],
  );
  return (
    <sprite
      position={[...at]}
      center={ANCHOR}
      scale={[(pixel * LABEL_HEIGHT * width) / 52, pixel * LABEL_HEIGHT, 1]}
      renderOrder={8}
    >
      <spriteMaterial
        map={texture}
        sizeAttenuation={false}
        depthTest={false}
        depthWrite={false}
        transparent
      />
    </sprite>
  );
}

const ANCHOR = [0, 0.5] as const;
