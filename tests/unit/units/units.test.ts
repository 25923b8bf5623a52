import { describe, expect, it } from 'vitest';
import {
  DIMENSIONS,
  type Dimension,
  formatNumber,
  formatQuantity,
  fromSI,
  parseQuantity,
  toSI,
} from '../../../src/core/units';
import { expectClose } from '../../support/closeTo';

describe('units', () => {
  it('go to SI and back for every unit of every dimension', () => {
    for (const [dimension, units] of Object.entries(DIMENSIONS)) {
      for (const { symbol } of units) {
        const back = fromSI(toSI(1.2345, dimension as Dimension, symbol), dimension as Dimension, symbol);
        expectClose(back, 1.2345, { rel: 1e-15 }, `${dimension} ${symbol}`);
      }
    }
  });
  it('agree with the exact definitions', () => {
    expectClose(toSI(20, 'torque', 'kgf·cm'), 1.96133, { rel: 1e-12 }); // kilogram-force is 9.80665 N by definition
    expectClose(toSI(1, 'length', 'in'), 0.0254, { rel: 1e-15 });
    expectClose(toSI(60, 'spinRate', 'rpm'), 2 * Math.PI, { rel: 1e-15 });
    expectClose(toSI(1, 'stress', 'ksi'), 6894757.293, { rel: 1e-9 });
  });
});

describe('formatting', () => {
  it('keeps significant digits, units and a true minus sign', () => {
    expect(formatQuantity(0.0254, 'length')).toBe('25.4 mm');
    expect(formatQuantity(-Math.PI / 6, 'angle')).toBe('−30.0°');
    expect(formatNumber(123456)).toBe('123456');
    expect(formatNumber(1.5e-7)).toBe('1.50·10^-7');
    expect(formatNumber(0)).toBe('0');
    expect(formatNumber(Number.NaN)).toBe('–');
  });
});

describe('typed expressions', () => {
  const si = (text: string, dimension: Dimension = 'length') => {
    const parsed = parseQuantity(text, dimension);
    return parsed.kind === 'value' ? parsed.si : Number.NaN;
  };
  it('take sums, products, brackets, units and a decimal comma', () => {
    expectClose(si('2*(3+1)'), 0.008, { rel: 1e-12 });
    expectClose(si('120 mm + 1 in'), 0.1454, { rel: 1e-12 });
    expectClose(si('1,5 m / 3'), 0.5, { rel: 1e-12 });
    expectClose(si('10 + 1 m'), 1.01, { rel: 1e-12 });
    expectClose(si('-(3-5)in'), 0.0508, { rel: 1e-12 });
    expectClose(si('8000', 'spinRate'), 837.758040957, { rel: 1e-11 });
    expectClose(si('45deg', 'angle'), Math.PI / 4, { rel: 1e-12 });
  });
  it('say what is wrong instead of guessing', () => {
    for (const bad of [
      '',
      '  ',
      '2+',
      '(1',
      'abc',
      '1 mm mm',
      '2 mm * 3 mm',
      '1/0',
      '3 kg',
      '1 2',
      '__proto__',
      '1 / 2 mm',
    ]) {
      const parsed = parseQuantity(bad, 'length');
      expect(parsed.kind, bad).toBe('unreadable');
      if (parsed.kind === 'unreadable') expect(parsed.reason).toMatch(/cannot be read: .+\.$/);
    }
  });
});
