import { Component, lazy, type ReactNode, Suspense, useState } from 'react';

const Stage = lazy(() => import('./stage').then((module) => ({ default: module.Stage })));

/** Whether this browser can draw the stage at all; asked before it is mounted. */
function canDrawStage(): boolean {
  try {
    const context = document.createElement('canvas').getContext('webgl2');
    // Given back at once: a browser keeps few contexts, and drops the oldest when they run out.
    context?.getExtension('WEBGL_lose_context')?.loseContext();
    return context !== null;
  } catch {
    return false;
  }
}

interface GuardState {
  readonly fault: string | undefined;
}

/** Keeps a fault in the 3D view from taking the rest of the page with it. */
class StageGuard extends Component<{ readonly children: ReactNode }, GuardState> {
  override state: GuardState = { fault: undefined };

  static getDerivedStateFromError(error: unknown): GuardState {
    return { fault: error instanceof Error ? error.message : String(error) };
  }

  override render(): ReactNode {
    if (this.state.fault === undefined) return this.props.children;
    return (
      <p className="stage-note" role="alert">
        The 3D view broke off: {this.state.fault}. Fields, ledger, ribbon and files go on working.
      </p>
    );
  }
}

/** The 3D view, loaded after the rest, and what stands in its place when it cannot be drawn. */
export function StageFrame() {
  const [canDraw] = useState(canDrawStage);
  return (
    <main className="stage-frame" aria-label="Stage">
      {canDraw ? (
        <StageGuard>
          <Suspense fallback={<p className="stage-note">Setting the stage…</p>}>
            <Stage />
          </Suspense>
        </StageGuard>
      ) : (
        <p className="stage-note">
          This browser has no WebGL 2, so the rig cannot be drawn in 3D. Fields, ledger, ribbon and files all
          work.
        </p>
      )}
    </main>
  );
}
