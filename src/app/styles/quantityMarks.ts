/**
 * The four quantities that appear on stage, ribbon and ledger alike. Each has one colour, one shape and one
 * dash, so that they can be told apart without colour. Colours are sRGB hex: three and the canvas read them too.
 */
export type MarkedQuantity = 'momentum' | 'torque' | 'demand' | 'leak';

export type MarkShape =
  /** Straight shaft, two solid heads one behind the other: a vector one turns about. */
  | 'doubleArrow'
  /** A bent shaft with one solid head: something that turns the body. */
  | 'arcArrow'
  /** Straight shaft with an outlined head: asked for, not yet given. */
  | 'openArrow'
  /** A row of lozenges: what escapes. */
  | 'lozenges';

export interface QuantityMark {
  readonly label: string;
  readonly light: string;
  readonly dark: string;
  readonly shape: MarkShape;
  /** Lengths of line and gap, CSS pixels; empty: unbroken. */
  readonly dash: readonly number[];
  /** Line width on plots, CSS pixels. */
  readonly width: number;
}

export const QUANTITY_MARKS: Readonly<Record<MarkedQuantity, QuantityMark>> = {
  momentum: {
    label: 'Momentum',
    light: '#2f4ea1',
    dark: '#8fabff',
    shape: 'doubleArrow',
    dash: [],
    width: 2,
  },
  torque: { label: 'Torque', light: '#b5490b', dark: '#ff9d57', shape: 'arcArrow', dash: [], width: 2.5 },
  demand: { label: 'Demand', light: '#3b454c', dark: '#c8d2d6', shape: 'openArrow', dash: [7, 4], width: 2 },
  leak: { label: 'Yaw leak', light: '#8f1f7a', dark: '#f08fdc', shape: 'lozenges', dash: [2, 4], width: 2 },
};

/** The ground the marks are drawn on, and what failure looks like, for those who cannot read CSS. */
export const PAGE_COLOURS = {
  light: {
    page: '#eef0ec',
    raised: '#f8f9f6',
    ink: '#18222b',
    soft: '#55616a',
    line: '#c4cac6',
    fail: '#b3211c',
  },
  dark: {
    page: '#1d252b',
    raised: '#273138',
    ink: '#e6ecee',
    soft: '#a3b0b7',
    line: '#414d55',
    fail: '#ff8a7a',
  },
} as const;
