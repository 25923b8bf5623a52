import { describe, expect, it } from 'vitest';
import { expectClose } from '../../support/closeTo';

describe('expectClose', () => {
  it('accepts what is within tolerance', () => {
    expectClose(1 + 1e-9, 1, { rel: 1e-8 });
    expectClose([0, 1], new Float64Array([1e-12, 1]), { abs: 1e-11 });
    expectClose(Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, { rel: 1e-3 });
  });
  it('refuses what is not, and names the worst element', () => {
    expect(() => expectClose([1, 2, 3.1], [1, 2.01, 3], { rel: 1e-3 })).toThrow('[2]');
    expect(() => expectClose(1e-5, 1.1e-5, { rel: 1e-3 })).toThrow('off by');
    expect(() => expectClose(1, Number.POSITIVE_INFINITY, { rel: 1e-3 })).toThrow();
    expect(() => expectClose(0, 1e-300, { rel: 1e-3 })).toThrow();
  });
  it('refuses NaN, unequal lengths and an empty tolerance', () => {
    expect(() => expectClose(Number.NaN, 1, { abs: 1 })).toThrow('NaN');
    expect(() => expectClose(1, Number.NaN, { abs: 1 })).toThrow('NaN');
    expect(() => expectClose([1], [1, 2], { abs: 1 })).toThrow('1 values where 2');
    expect(() => expectClose(1, 1, {})).toThrow('tolerance');
  });
});
