import {
  createRoot,
  type EventManager,
  extend,
  events as pointerEvents,
  type ReconcilerRoot,
  type RootState,
} from '@react-three/fiber';
import { Component, type ReactNode, useInsertionEffect, useLayoutEffect, useRef, useState } from 'react';
import {
  Color,
  DirectionalLight,
  Group,
  HemisphereLight,
  LineBasicMaterial,
  LineSegments,
  Mesh,
  MeshBasicMaterial,
  MeshLambertMaterial,
  MeshPhongMaterial,
  Sprite,
  SpriteMaterial,
} from 'three';
import { FIELD_OF_VIEW } from './stageFrame';

// Named one by one, so that what the stage does not draw with is left out of the build.
extend({
  Color,
  DirectionalLight,
  Group,
  HemisphereLight,
  LineBasicMaterial,
  LineSegments,
  Mesh,
  MeshBasicMaterial,
  MeshLambertMaterial,
  MeshPhongMaterial,
  Sprite,
  SpriteMaterial,
});

interface Hit {
  readonly object: { readonly userData: Record<string, unknown> };
}

/** Grips are taken before what lies in front of them. */
const gripsFirst = <T extends Hit>(hits: T[]): T[] => [
  ...hits.filter((hit) => hit.object.userData.isHandle),
  ...hits.filter((hit) => !hit.object.userData.isHandle),
];

const stageEvents: typeof pointerEvents = (store) => ({ ...pointerEvents(store), filter: gripsFirst });

interface FaultProps {
  readonly onFault: (fault: unknown) => void;
  readonly children: ReactNode;
}

/** Hands what breaks inside the canvas to the page around it, which cannot see it otherwise. */
class FaultGate extends Component<FaultProps, { readonly isBroken: boolean }> {
  override state = { isBroken: false };

  static getDerivedStateFromError(): { readonly isBroken: boolean } {
    return { isBroken: true };
  }

  override componentDidCatch(fault: unknown): void {
    this.props.onFault(fault);
  }

  override render(): ReactNode {
    return this.state.isBroken ? null : this.props.children;
  }
}

interface Size {
  readonly width: number;
  readonly height: number;
}

/** Size of an element in CSS pixels as the page lays it out; undefined until it has one. */
function useSize(element: { readonly current: HTMLElement | null }): Size | undefined {
  const [size, setSize] = useState<Size>();
  useLayoutEffect(() => {
    const target = element.current;
    if (!target) return;
    const measure = (): void => {
      const { clientWidth: width, clientHeight: height } = target;
      if (width === 0 || height === 0) return;
      setSize((last) => (last?.width === width && last.height === height ? last : { width, height }));
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(target);
    return () => observer.disconnect();
  }, [element]);
  return size;
}

interface StageCanvasProps {
  readonly isLowQuality: boolean;
  readonly onCreated: (state: RootState) => void;
  readonly onPointerMissed: (event: MouseEvent) => void;
  readonly children: ReactNode;
}

/** The canvas and the renderer's root in it: made once, drawn on demand, gone with the stage. */
export function StageCanvas({ isLowQuality, onCreated, onPointerMissed, children }: StageCanvasProps) {
  const holder = useRef<HTMLDivElement>(null);
  const canvas = useRef<HTMLCanvasElement>(null);
  const root = useRef<ReconcilerRoot<HTMLCanvasElement>>(undefined);
  const [fault, setFault] = useState<unknown>();
  const size = useSize(holder);
  if (fault !== undefined) throw fault;

  // Insertion effects alone are not run twice by strict mode: a root is not to be opened again once closed.
  useInsertionEffect(
    () => () => {
      root.current?.unmount();
      root.current = undefined;
    },
    [],
  );
  useLayoutEffect(() => {
    if (!size || !canvas.current) return;
    root.current ??= createRoot(canvas.current);
    root.current
      .configure({
        flat: true,
        frameloop: 'demand',
        dpr: isLowQuality ? 1 : [1, 2],
        gl: { antialias: !isLowQuality },
        camera: { fov: FIELD_OF_VIEW, position: [3, 2, 3] },
        events: stageEvents,
        size: { ...size, top: 0, left: 0 },
        onPointerMissed,
        onCreated: (state) => {
          // The holder is the target, as it is what the controls of the view listen to as well.
          if (holder.current) (state.events as EventManager<HTMLElement>).connect?.(holder.current);
          onCreated(state);
        },
      })
      .catch(setFault);
    root.current.render(<FaultGate onFault={setFault}>{children}</FaultGate>);
  });
  return (
    <div ref={holder} className="stage-canvas">
      <canvas ref={canvas} />
    </div>
  );
}
