import { useFrame, useThree } from '@react-three/fiber';
import { useEffect, useMemo } from 'react';
import type { PerspectiveCamera } from 'three';
import { OrbitControls } from 'three/addons/controls/OrbitControls.js';

/** The part of the controls that framing and dragging need. */
export type ViewControls = Pick<
  OrbitControls,
  'target' | 'update' | 'minDistance' | 'maxDistance' | 'enabled'
>;

interface OrbitViewProps {
  readonly onStart: () => void;
  readonly onEnd: () => void;
}

/** Turning, shifting and zooming of the view by hand; the store's `controls` while it is mounted. */
export function OrbitView({ onStart, onEnd }: OrbitViewProps) {
  const camera = useThree((state) => state.camera) as PerspectiveCamera;
  const element = useThree((state) => state.events.connected ?? state.gl.domElement) as HTMLElement;
  const invalidate = useThree((state) => state.invalidate);
  const set = useThree((state) => state.set);
  const controls = useMemo(() => {
    const made = new OrbitControls(camera);
    made.enableDamping = false;
    made.zoomSpeed = 0.8;
    return made;
  }, [camera]);
  useEffect(() => {
    controls.connect(element);
    set({ controls });
    return () => {
      controls.disconnect();
      set({ controls: null });
    };
  }, [controls, element, set]);
  useEffect(() => {
    const redraw = (): void => invalidate();
    controls.addEventListener('change', redraw);
    controls.addEventListener('start', onStart);
    controls.addEventListener('end', onEnd);
    return () => {
      controls.removeEventListener('change', redraw);
      controls.removeEventListener('start', onStart);
      controls.removeEventListener('end', onEnd);
    };
  }, [controls, invalidate, onStart, onEnd]);
  useFrame(() => {
    if (controls.enabled) controls.update();
  }, -1);
  return null;
}
