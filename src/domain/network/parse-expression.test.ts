import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { evaluateExpression } from './evaluate-expression.ts';
import { parseExpression } from './parse-expression.ts';
import { printExpression } from './print-expression.ts';
import type { Expression } from './expression.ts';
import { arbitraryExpression } from '@tests/factories/arbitrary-expression.ts';

const parsed = (text: string): Expression => {
  const result = parseExpression(text);
  if (!result.ok) throw new Error(`${text}: ${result.fault.message}`);
  return result.expression;
};
const valueOf = (text: string, symbols: Record<string, number> = {}): number =>
  evaluateExpression(parsed(text), { symbol: (id) => symbols[id]! });
const faultOf = (text: string) => {
  const result = parseExpression(text);
  if (result.ok) throw new Error(`${text} was read`);
  return result.fault;
};

describe('parseExpression', () => {
  // The usual precedence of written mathematics (common practice; as in ISO 80000-2 for ^ and unary minus, from memory).
  it.each([
    ['1 + 2 * 3', 7],
    ['(1 + 2) * 3', 9],
    ['8 / 4 / 2', 1],
    ['8 - 4 - 2', 2],
    ['2^3^2', 512],
    ['-2^2', -4],
    ['2^-1', 0.5],
    ['2 * -3', -6],
    ['- -3', 3],
    ['+3', 3],
    ['1.5e3 + .5 + 2.', 1502.5],
    ['1E-2', 0.01],
    ['6 ÷ 3 × 2 − 1', 3],
    ['3 · 4', 12],
  ])('%s is %f', (text, value) => {
    expect(valueOf(text)).toBe(value);
  });

  it.each([
    ['1 < 2', 1],
    ['2 <= 1', 0],
    ['2 ≥ 2', 1],
    ['1 ≠ 1', 0],
    ['1 == 1 and 2 > 3', 0],
    ['1 && 0 || 1', 1],
    ['1 or 0 and 0', 1],
    ['not 1 == 2', 1],
    ['!0', 1],
    ['not not 5', 1],
    ['1 + 1 == 2', 1],
  ])('%s has the truth value %i', (text, value) => {
    expect(valueOf(text)).toBe(value);
  });

  it.each([
    ['exp(0) + ln(1) + log10(100)', 3],
    ['sqrt(16) - abs(-4)', 0],
    ['floor(-1.5)', -2],
    ['ceil(-1.5)', -1],
    ['min(3, 1, 2) + max(3, 1, 2)', 4],
    ['max(7)', 7],
    ['piecewise(1, 0, 2, 1, 3)', 2],
    ['piecewise(1, 0, 3)', 3],
    ['piecewise(4)', 4],
  ])('%s is %f', (text, value) => {
    expect(valueOf(text)).toBe(value);
  });

  it('reads names, and takes the first true piece', () => {
    expect(valueOf('piecewise(low, A < 10, high, A < 100, 0)', { A: 5, low: 1, high: 2 })).toBe(1);
    expect(valueOf('piecewise(low, A < 10, high, A < 100, 0)', { A: 50, low: 1, high: 2 })).toBe(2);
    expect(valueOf('piecewise(low, A < 10, high, A < 100, 0)', { A: 500, low: 1, high: 2 })).toBe(0);
  });

  it.each([
    ['', 0, 'empty_expression'],
    ['   ', 3, 'empty_expression'],
    ['k *', 3, 'unfinished_expression'],
    ['k * * A', 4, 'missing_value'],
    ['k A', 2, 'missing_operator'],
    ['2k', 1, 'missing_operator'],
    ['k (A)', 0, 'unknown_function'],
    ['(A + B', 0, 'unbalanced_parenthesis'],
    ['A + B)', 5, 'unbalanced_parenthesis'],
    ['0,5 * A', 1, 'unexpected_comma'],
    ['k ** 2', 2, 'unexpected_character'],
    ['a = b', 2, 'unexpected_character'],
    ['k * [A]', 4, 'unexpected_character'],
    ['k # A', 2, 'unexpected_character'],
    ['a < b < c', 6, 'chained_comparison'],
    ['1e999', 0, 'number_too_large'],
    ['log(x)', 0, 'unknown_function'],
    ['sqr(x)', 0, 'unknown_function'],
    ['constructor(x)', 0, 'unknown_function'],
    ['exp', 0, 'missing_arguments'],
    ['exp()', 0, 'wrong_argument_count'],
    ['exp(1, 2)', 0, 'wrong_argument_count'],
    ['min()', 0, 'wrong_argument_count'],
    ['piecewise(1, 2)', 0, 'wrong_argument_count'],
    ['piecewise()', 0, 'wrong_argument_count'],
    ['A and', 5, 'unfinished_expression'],
    ['exp(1', 3, 'unbalanced_parenthesis'],
  ])('refuses “%s” at character %i as %s', (text, position, code) => {
    expect(faultOf(text)).toMatchObject({ position, code });
  });

  it('says what to write instead', () => {
    expect(faultOf('2 k').message).toContain('*');
    expect(faultOf('log(x)').message).toContain('ln');
    expect(faultOf('pow(x, 2)').message).toContain('^');
    expect(faultOf('sqr(x)').message).toContain('sqrt');
    expect(faultOf('0,5').message).toContain('0.5');
  });

  it('refuses what nests too deep or is too long, and reads long sums', () => {
    expect(faultOf('('.repeat(101) + '1' + ')'.repeat(101)).code).toBe('expression_too_deep');
    expect(faultOf('-'.repeat(3_000) + '1').code).toBe('expression_too_deep');
    expect(faultOf('2^'.repeat(1_000) + '1').code).toBe('expression_too_deep');
    expect(faultOf('not '.repeat(900) + '1').code).toBe('expression_too_deep');
    expect(faultOf('1+'.repeat(2_000) + '1').code).toBe('expression_too_long');
    expect(valueOf('1+'.repeat(1_900) + '1')).toBe(1_901);
    expect(valueOf('('.repeat(100) + '1' + ')'.repeat(100))).toBe(1);
  });

  it('never throws, whatever the text (5,000 random texts, fixed seed)', () => {
    const pieces = fc.constantFrom(
      'a',
      'B_1',
      '2',
      '.5',
      '1e3',
      '(',
      ')',
      ',',
      '+',
      '-',
      '*',
      '/',
      '^',
      '<',
      '==',
      ' and ',
      'not ',
      'exp(',
      'piecewise(',
      'é',
      '∅',
      ' ',
    );
    const text = fc.oneof(
      fc.string(),
      fc.array(pieces, { maxLength: 40 }).map((parts) => parts.join('')),
    );
    fc.assert(
      fc.property(text, (candidate) => {
        const result = parseExpression(candidate);
        return (
          result.ok ||
          (result.fault.position >= 0 && result.fault.position <= candidate.length && result.fault.message.length > 0)
        );
      }),
      { seed: 20261201, numRuns: 5_000 },
    );
  });
});

describe('printExpression', () => {
  it('reads back to the same tree (2,000 random trees, fixed seed)', () => {
    fc.assert(
      fc.property(arbitraryExpression(['A', 'B', 'k']), (expression) => {
        expect(parsed(printExpression(expression))).toEqual(expression);
      }),
      { seed: 20261202, numRuns: 2_000 },
    );
  });

  it.each([
    ['a-(b-c)', 'a - (b - c)'],
    ['(a-b)-c', 'a - b - c'],
    ['(a^b)^c', '(a^b)^c'],
    ['a^(b^c)', 'a^b^c'],
    ['(-a)^2', '(-a)^2'],
    ['-(a^2)', '-a^2'],
    ['a*(b/c)', 'a * (b / c)'],
    ['(a<b)==c', '(a < b) == c'],
    ['not(a and b)', 'not (a and b)'],
    ['(not a) and b', 'not a and b'],
    ['1e-7*1e21', '1e-7 * 1e+21'],
  ])('writes %s as %s', (text, printed) => {
    expect(printExpression(parsed(text))).toBe(printed);
  });

  it('writes a negative number so that it is worth the same', () => {
    const power: Expression = {
      kind: 'binary',
      operator: 'power',
      left: { kind: 'number', value: -2 },
      right: { kind: 'number', value: 2 },
    };
    expect(printExpression(power)).toBe('(-2)^2');
    expect(valueOf(printExpression(power))).toBe(4);
  });

  it('has no text for infinity', () => {
    expect(() => printExpression({ kind: 'number', value: Infinity })).toThrow(RangeError);
  });
});
