import { Component, type ReactNode } from 'react';

/** What is shown where the stage would be when it cannot be drawn; the rest of the app works on. */
export function StageMessage({ reason }: { readonly reason: string }) {
  return (
    <div className="stage-message" role="alert">
      <p>The stage cannot be drawn: {reason}</p>
      <p>Fields, plan, ledger and files work without it.</p>
    </div>
  );
}

interface BoundaryState {
  readonly reason: string | undefined;
}

export class StageBoundary extends Component<{ readonly children: ReactNode }, BoundaryState> {
  override state: BoundaryState = { reason: undefined };

  static getDerivedStateFromError(error: unknown): BoundaryState {
    return { reason: error instanceof Error ? error.message : String(error) };
  }

  override render(): ReactNode {
    const { reason } = this.state;
    return reason === undefined ? this.props.children : <StageMessage reason={reason} />;
  }
}

/** Whether this browser can draw the stage; asked on a canvas of its own, whose context is given back at once. */
export function canDrawStage(): boolean {
  const context = document.createElement('canvas').getContext('webgl2');
  if (!context) return false;
  context.getExtension('WEBGL_lose_context')?.loseContext();
  return true;
}
