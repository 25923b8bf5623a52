import { useEffect, useState } from 'react';
import { Color } from 'three';
import { useSession } from '../state/session';
import { type MarkedQuantity, PAGE_COLOURS, QUANTITY_MARKS } from '../styles/quantityMarks';

/** Colours of the stage in the theme that is on. */
export interface Palette {
  readonly isDark: boolean;
  readonly page: Color;
  readonly raised: Color;
  readonly ink: Color;
  readonly soft: Color;
  readonly line: Color;
  readonly fail: Color;
  readonly chosen: Color;
  /** Faces of the body, and of what it carries. */
  readonly body: Color;
  readonly cargo: Color;
  readonly gimbal: Color;
  readonly water: Color;
  readonly waterline: Color;
  readonly marks: Readonly<Record<MarkedQuantity, Color>>;
}

/** What only the stage has a colour for. */
const OWN = {
  light: {
    chosen: '#0b7a72',
    body: '#efede6',
    cargo: '#c9d3cd',
    gimbal: '#aab4b7',
    water: '#6f9fb2',
    waterline: '#1b6480',
  },
  dark: {
    chosen: '#5fd3c4',
    body: '#75848d',
    cargo: '#7f938e',
    gimbal: '#98a5ac',
    water: '#4f8397',
    waterline: '#a5dcef',
  },
} as const;

/** Custom properties of the page that the stage follows, where the page has them. */
const PROPERTIES = {
  page: '--page',
  raised: '--raised',
  ink: '--ink',
  soft: '--soft',
  line: '--line',
  fail: '--fail',
} as const;

/** The colour that a CSS property has on the page just now, as sRGB: three knows only some of the ways to write one. */
function readColour(probe: HTMLElement, property: string, fallback: string): Color {
  // Asked of an element, as a property by itself may still hold a choice between light and dark.
  probe.style.color = `var(${property}, ${fallback})`;
  const text = getComputedStyle(probe).color;
  const context = document.createElement('canvas').getContext('2d', { willReadFrequently: true });
  if (text === '' || !context) return new Color(fallback);
  context.fillStyle = fallback;
  context.fillStyle = text;
  context.fillRect(0, 0, 1, 1);
  const [r, g, b] = context.getImageData(0, 0, 1, 1).data;
  return new Color(`rgb(${r}, ${g}, ${b})`);
}

function readPalette(isDark: boolean): Palette {
  const theme = isDark ? 'dark' : 'light';
  const page = PAGE_COLOURS[theme];
  const probe = document.body.appendChild(document.createElement('span'));
  const of = (key: keyof typeof PROPERTIES): Color => readColour(probe, PROPERTIES[key], page[key]);
  const own = OWN[theme];
  const palette = {
    isDark,
    page: of('page'),
    raised: of('raised'),
    ink: of('ink'),
    soft: of('soft'),
    line: of('line'),
    fail: of('fail'),
    chosen: new Color(own.chosen),
    body: new Color(own.body),
    cargo: new Color(own.cargo),
    gimbal: new Color(own.gimbal),
    water: new Color(own.water),
    waterline: new Color(own.waterline),
    marks: {
      momentum: new Color(QUANTITY_MARKS.momentum[theme]),
      torque: new Color(QUANTITY_MARKS.torque[theme]),
      demand: new Color(QUANTITY_MARKS.demand[theme]),
      leak: new Color(QUANTITY_MARKS.leak[theme]),
    },
  };
  probe.remove();
  return palette;
}

const SYSTEM_DARK = '(prefers-color-scheme: dark)';

/** The palette of the theme that is on, read anew when the theme or the page's own attributes change. */
export function usePalette(): Palette {
  const theme = useSession((state) => state.theme);
  const read = (): Palette => {
    const isDark = theme === 'dark' || (theme === 'system' && matchMedia(SYSTEM_DARK).matches);
    return readPalette(isDark);
  };
  const [palette, setPalette] = useState(read);
  // biome-ignore lint/correctness/useExhaustiveDependencies: `read` is made anew by every render and depends on the theme alone.
  useEffect(() => {
    const update = (): void => setPalette(read());
    update();
    const system = matchMedia(SYSTEM_DARK);
    system.addEventListener('change', update);
    const page = new MutationObserver(update);
    page.observe(document.documentElement, {
      attributes: true,
      attributeFilter: ['class', 'style', 'data-theme'],
    });
    return () => {
      system.removeEventListener('change', update);
      page.disconnect();
    };
  }, [theme]);
  return palette;
}
