/** Whether the page is light or dark just now, for whatever draws outside CSS. */
import { useSyncExternalStore } from 'react';
import { useSession } from './session';

const DARK = '(prefers-color-scheme: dark)';
const STILL = '(prefers-reduced-motion: reduce)';

const onMedia = (query: string) => (listener: () => void) => {
  const media = matchMedia(query);
  media.addEventListener('change', listener);
  return () => media.removeEventListener('change', listener);
};
const onDark = onMedia(DARK);

export function useIsDark(): boolean {
  const theme = useSession((session) => session.theme);
  const systemIsDark = useSyncExternalStore(onDark, () => matchMedia(DARK).matches);
  return theme === 'system' ? systemIsDark : theme === 'dark';
}

/** The user has asked their system to keep movement down. */
export const prefersStillness = (): boolean => matchMedia(STILL).matches;

const NARROW = '(max-width: 759px)';
const onNarrow = onMedia(NARROW);

/** A screen of a phone's width, on which one thing at a time has to do. Agrees with styles/layout.css. */
export const useIsNarrow = (): boolean => useSyncExternalStore(onNarrow, () => matchMedia(NARROW).matches);
