/** Which disturbance of the run is being looked at: opened in the sheet, marked on the ribbon. */
import { create } from 'zustand';

export const useSelectedEvent = create<{ readonly index: number | undefined }>()(() => ({
  index: undefined,
}));
