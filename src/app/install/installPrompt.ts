/** The browser's offer to install the app, kept until the user asks for it. */
import { create } from 'zustand';

interface InstallEvent extends Event {
  readonly prompt: () => Promise<unknown>;
}

interface InstallState {
  readonly offer: InstallEvent | undefined;
  readonly install: () => Promise<void>;
}

export const useInstall = create<InstallState>()((set, get) => ({
  offer: undefined,
  install: async () => {
    const { offer } = get();
    set({ offer: undefined });
    await offer?.prompt();
  },
}));

export function listenForInstall(): void {
  addEventListener('beforeinstallprompt', (event) => {
    event.preventDefault();
    useInstall.setState({ offer: event as InstallEvent });
  });
  addEventListener('appinstalled', () => useInstall.setState({ offer: undefined }));
}
