import { type Dimension, unitFor, unitsOf } from './quantities';

/** What a typed text came to: a value in SI, or a sentence saying what is wrong with it. */
export type ParsedQuantity =
  | { readonly kind: 'value'; readonly si: number }
  | { readonly kind: 'unreadable'; readonly reason: string };

/** A partial result: `bare` numbers have had no unit yet and take the field's own at the end. */
interface Term {
  readonly value: number;
  readonly bare: boolean;
}

class Unreadable extends Error {}

/**
 * Reads a typed expression such as `2*(3+1)`, `120 mm + 1 in` or `1/3` as a quantity.
 * Bare numbers are in the field's unit; a decimal comma is read as a point.
 *
 * @param text       what was typed
 * @param dimension  what the field measures
 * @param symbol     the field's unit, the dimension's usual one when left out
 * @returns the value in SI, or a sentence for the user. Never throws.
 */
export function parseQuantity(text: string, dimension: Dimension, symbol?: string): ParsedQuantity {
  const fieldUnit = unitFor(dimension, symbol);
  const symbols = unitsOf(dimension)
    .filter((u) => u.symbol !== '')
    .toSorted((a, b) => b.symbol.length - a.symbol.length);
  const source = text.replaceAll(',', '.').replaceAll('−', '-').replaceAll('×', '*').replaceAll('÷', '/');
  let at = 0;

  const skipSpace = () => {
    while (source[at] === ' ') at++;
  };
  const settle = (term: Term): number => (term.bare ? term.value * fieldUnit.toSI : term.value);

  const readUnit = (): number | undefined => {
    skipSpace();
    for (const u of symbols) {
      if (source.startsWith(u.symbol, at)) {
        at += u.symbol.length;
        return u.toSI;
      }
    }
    return undefined;
  };

  const readPrimary = (): Term => {
    skipSpace();
    if (source[at] === '-' || source[at] === '+') {
      const sign = source[at++] === '-' ? -1 : 1;
      const inner = readPrimary();
      return { value: sign * inner.value, bare: inner.bare };
    }
    let inner: Term;
    if (source[at] === '(') {
      at++;
      inner = readSum();
      skipSpace();
      if (source[at++] !== ')') throw new Unreadable('a bracket is not closed');
    } else {
      const match = /^(\d+\.?\d*|\.\d+)(e[+-]?\d+)?/i.exec(source.slice(at));
      if (!match)
        throw new Unreadable(
          at >= source.length ? 'it ends too soon' : `"${source.slice(at)}" is not a number`,
        );
      at += match[0].length;
      inner = { value: Number(match[0]), bare: true };
    }
    const factor = readUnit();
    if (factor === undefined) return inner;
    if (!inner.bare) throw new Unreadable('a unit stands after a value that has one already');
    return { value: inner.value * factor, bare: false };
  };

  const readProduct = (): Term => {
    let left = readPrimary();
    for (;;) {
      skipSpace();
      const operator = source[at];
      if (operator !== '*' && operator !== '/') return left;
      at++;
      const right = readPrimary();
      if (operator === '*') {
        if (!left.bare && !right.bare) throw new Unreadable('two values with units are multiplied');
        left = { value: left.value * right.value, bare: left.bare && right.bare };
      } else {
        if (left.bare && !right.bare)
          throw new Unreadable('a plain number is divided by a value with a unit');
        left = { value: left.value / right.value, bare: left.bare === right.bare };
      }
    }
  };

  const readSum = (): Term => {
    let left = readProduct();
    for (;;) {
      skipSpace();
      const operator = source[at];
      if (operator !== '+' && operator !== '-') return left;
      at++;
      const right = readProduct();
      const sign = operator === '+' ? 1 : -1;
      left =
        left.bare === right.bare
          ? { value: left.value + sign * right.value, bare: left.bare }
          : { value: settle(left) + sign * settle(right), bare: false };
    }
  };

  try {
    if (source.trim() === '') throw new Unreadable('it is empty');
    const si = settle(readSum());
    skipSpace();
    if (at < source.length) throw new Unreadable(`"${source.slice(at)}" is not understood`);
    if (!Number.isFinite(si)) throw new Unreadable('the result is not a finite number');
    return { kind: 'value', si };
  } catch (error) {
    if (!(error instanceof Unreadable)) throw error;
    return { kind: 'unreadable', reason: `"${text.slice(0, 40)}" cannot be read: ${error.message}.` };
  }
}
