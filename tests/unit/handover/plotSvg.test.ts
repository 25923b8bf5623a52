import { Window } from 'happy-dom';
import { describe, expect, it } from 'vitest';
import { roundTicks, writePlotSvg } from '../../../src/core/handover/plotSvg';
import { expectClose } from '../../support/closeTo';

const parse = (svg: string) => {
  const window = new Window();
  const document = new window.DOMParser().parseFromString(svg, 'image/svg+xml');
  return document;
};

describe('a plot as SVG', () => {
  const plot = {
    title: 'Tilt of <A> & "B"',
    across: { label: 'time (s)', values: [0, 1, 2, 3] },
    up: 'tilt (°)',
    lines: [
      { label: 'A', values: [0, 10, Number.NaN, -10] },
      { label: 'limit', values: [20, 20, 20, 20], isLimit: true },
    ],
  };

  it('draws each line in proportion, broken where there is no number', () => {
    const svg = writePlotSvg(plot);
    const curve = [...parse(svg).querySelectorAll('path')]
      .map((path) => path.getAttribute('d') ?? '')
      .filter((d) => /^M[\d.]+ [\d.]+L/.test(d));
    expect(curve).toHaveLength(2);
    const points = [...curve[0]!.matchAll(/([ML])([\d.]+) ([\d.]+)/g)].map(([, kind, x, y]) => ({
      kind,
      x: Number(x),
      y: Number(y),
    }));
    expect(points.map(({ kind }) => kind)).toEqual(['M', 'L', 'M']);
    const [a, b, c] = points as [(typeof points)[0], (typeof points)[0], (typeof points)[0]];
    expectClose((c.x - a.x) / (b.x - a.x), 3, { rel: 1e-3 }); // measured 0
    expectClose((c.y - a.y) / (a.y - b.y), 1, { rel: 1e-3 }); // measured 1.6e-4: two decimals
    const limit = Number(/^M[\d.]+ ([\d.]+)/.exec(curve[1]!)?.[1]);
    expectClose((a.y - limit) / (a.y - b.y), 2, { rel: 1e-3 }); // measured 8.2e-5
  });

  it('escapes words, tells lines apart by dash, and has no style sheet', () => {
    const svg = writePlotSvg(plot);
    expect(svg).toContain('Tilt of &lt;A&gt; &amp; &quot;B&quot;');
    expect(svg).toContain('stroke-dasharray="2 3"');
    expect(svg).not.toMatch(/style|NaN|undefined|Infinity/);
  });

  it('stands with nothing, one point, or a level line', () => {
    for (const values of [[], [5], [5, 5, 5], [Number.NaN]]) {
      const svg = writePlotSvg({
        ...plot,
        across: { label: 't', values: values.map((_, i) => i) },
        lines: [{ label: 'x', values }],
      });
      expect(svg).not.toMatch(/NaN|Infinity/);
    }
  });
});

describe('ticks', () => {
  it('are round and inside the range', () => {
    expect(roundTicks(-1, 1, 5)).toEqual([-1, -0.5, 0, 0.5, 1]);
    expect(roundTicks(0, 0, 5)).toEqual([0]);
    for (const [low, high] of [
      [0.13, 97],
      [-3e-5, 2e-5],
      [1e6, 1.001e6],
    ] as const) {
      const ticks = roundTicks(low, high, 6);
      expect(ticks.length).toBeGreaterThan(2);
      expect(ticks.length).toBeLessThan(14);
      expect(Math.min(...ticks)).toBeGreaterThanOrEqual(low - 1e-8 * (high - low));
      expect(Math.max(...ticks)).toBeLessThanOrEqual(high + 1e-8 * (high - low));
    }
  });
});
