/** Things the user must be told: refusals, faults, and what was done that cannot be seen. */
import { create } from 'zustand';

export interface NoticeAction {
  readonly label: string;
  readonly run: () => void;
}

export interface Notice {
  /** A newer notice of the same name takes the place of the older. */
  readonly id: string;
  readonly kind: 'done' | 'fault';
  readonly sentences: readonly string[];
  readonly actions?: readonly NoticeAction[];
}

interface NoticesState {
  readonly notices: readonly Notice[];
  readonly show: (notice: Notice) => void;
  readonly dismiss: (id: string) => void;
}

export const useNotices = create<NoticesState>()((set) => ({
  notices: [],
  show: (notice) =>
    set((state) => ({ notices: [...state.notices.filter((n) => n.id !== notice.id), notice] })),
  dismiss: (id) => set((state) => ({ notices: state.notices.filter((n) => n.id !== id) })),
}));
