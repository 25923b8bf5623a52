import { type ComponentType, lazy } from 'react';

function SheetNotLoaded() {
  return (
    <p role="alert">
      This sheet could not be loaded. The rig is safe: save it to a file, then reload the page once there is a
      network, or the app has been kept for work without one.
    </p>
  );
}

/** A sheet that is fetched when its station is first opened, so that the first page waits for its own alone. */
export const lazySheet = (load: () => Promise<ComponentType>): ComponentType =>
  lazy(async () => ({ default: await load().catch(() => SheetNotLoaded) }));
