/** Offline use and updates. A new version waits until the user takes it; nothing reloads over unsaved work. */
import { useDocument } from '../state/document';
import { useNotices } from '../state/notices';

export async function registerServiceWorker(): Promise<void> {
  if (!import.meta.env.PROD || !('serviceWorker' in navigator)) return;
  const { Workbox } = await import('workbox-window');
  const worker = new Workbox('/sw.js');

  worker.addEventListener('waiting', () => {
    useNotices.getState().show({
      id: 'update',
      kind: 'done',
      sentences: ['A newer Tiltwright has been fetched.'],
      actions: [
        {
          label: 'Take it now',
          run: () => {
            if (useDocument.getState().isDirty) {
              useNotices.getState().show({
                id: 'update-unsaved',
                kind: 'fault',
                sentences: [
                  'This rig has changes that are not saved. Save it first, then take the newer version.',
                ],
              });
              return;
            }
            worker.addEventListener('controlling', () => location.reload());
            worker.messageSkipWaiting();
          },
        },
      ],
    });
  });

  try {
    await worker.register();
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    useNotices.getState().show({
      id: 'offline',
      kind: 'fault',
      sentences: [`This visit cannot be kept for use without a network: ${reason}`],
    });
  }
}
