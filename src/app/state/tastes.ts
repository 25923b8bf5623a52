/** Choices of taste (theme, units, quality) are kept in this browser, apart from the rigs. */
import { DIMENSIONS, type Dimension, findUnit } from '../../core/units';
import { type ChosenUnits, type Quality, type Theme, useSession } from './session';

const KEY = 'tiltwright-tastes';
const VERSION = 1;

const THEMES: readonly Theme[] = ['light', 'dark', 'system'];
const QUALITIES: readonly Quality[] = ['high', 'low'];

function readUnits(value: unknown): ChosenUnits {
  if (typeof value !== 'object' || value === null) return {};
  const known = Object.entries(value).filter(
    ([dimension, symbol]) =>
      Object.hasOwn(DIMENSIONS, dimension) &&
      typeof symbol === 'string' &&
      findUnit(dimension as Dimension, symbol) !== undefined,
  );
  return Object.fromEntries(known) as ChosenUnits;
}

/** Takes up what was chosen last time; anything unreadable is left at its usual value. `?quality=low` overrides. */
export function restoreTastes(search: string): void {
  let kept: Record<string, unknown> = {};
  try {
    const parsed: unknown = JSON.parse(localStorage.getItem(KEY) ?? '{}');
    if (typeof parsed === 'object' && parsed !== null) kept = parsed as Record<string, unknown>;
  } catch {
    // Nothing was kept, or storage is closed to us: the usual tastes will do.
  }
  const asked = new URLSearchParams(search).get('quality');
  const isCurrent = kept.version === VERSION;
  const theme = THEMES.find((t) => isCurrent && t === kept.theme);
  const quality = QUALITIES.find((q) => q === (asked ?? (isCurrent ? kept.quality : undefined)));
  useSession.setState({
    ...(theme ? { theme } : {}),
    ...(quality ? { quality } : {}),
    units: isCurrent ? readUnits(kept.units) : {},
  });
}

/** Keeps the tastes as they change, and shows the theme on the page. */
export function keepTastes(): void {
  const apply = (): void => {
    document.documentElement.dataset.theme = useSession.getState().theme;
  };
  apply();
  useSession.subscribe((now, before) => {
    if (now.theme === before.theme && now.units === before.units && now.quality === before.quality) return;
    apply();
    const { theme, units, quality } = now;
    try {
      localStorage.setItem(KEY, JSON.stringify({ version: VERSION, theme, units, quality }));
    } catch {
      // A browser that keeps nothing still works; the tastes last until it is closed.
    }
  });
}
