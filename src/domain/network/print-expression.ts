/** Writes a syntax tree as text that `parseExpression` reads back to the same tree, with no more parentheses than needed. */
import type { BinaryOperator, Expression } from './expression.ts';

const signs: Record<BinaryOperator, string> = {
  or: 'or',
  and: 'and',
  equal: '==',
  notEqual: '!=',
  less: '<',
  lessOrEqual: '<=',
  greater: '>',
  greaterOrEqual: '>=',
  add: '+',
  subtract: '-',
  multiply: '*',
  divide: '/',
  power: '^',
};

/** How tightly each construct binds, as in parse-expression.ts. */
const binding = { or: 1, and: 2, not: 3, comparison: 4, sum: 5, product: 6, sign: 7, power: 8, primary: 9 } as const;

const bindingOf: Record<BinaryOperator, number> = {
  or: binding.or,
  and: binding.and,
  equal: binding.comparison,
  notEqual: binding.comparison,
  less: binding.comparison,
  lessOrEqual: binding.comparison,
  greater: binding.comparison,
  greaterOrEqual: binding.comparison,
  add: binding.sum,
  subtract: binding.sum,
  multiply: binding.product,
  divide: binding.product,
  power: binding.power,
};

/**
 * The text of `expression`. `nameOf` gives the text of resolved leaves (species and parameter indices).
 * A negative number reads back as a negated one, which is worth the same. Throws on NaN and infinities: they have no text.
 */
export function printExpression(
  expression: Expression,
  nameOf: (leaf: { kind: 'species' | 'parameter'; index: number }) => string = ({ kind, index }) => `${kind}_${index}`,
): string {
  const print = (node: Expression, least: number): string => {
    const [text, tightness] = written(node);
    return tightness < least ? `(${text})` : text;
  };

  const written = (node: Expression): [string, number] => {
    switch (node.kind) {
      case 'number':
        if (!Number.isFinite(node.value)) throw new RangeError(`${node.value} has no text in the expression language`);
        return Object.is(node.value, -0) || node.value < 0
          ? [`-${Math.abs(node.value)}`, binding.sign]
          : [String(node.value), binding.primary];
      case 'symbol':
        return [node.id, binding.primary];
      case 'species':
      case 'parameter':
        return [nameOf(node), binding.primary];
      case 'unary':
        return node.operator === 'not'
          ? [`not ${print(node.operand, binding.not)}`, binding.not]
          : [`-${print(node.operand, binding.sign)}`, binding.sign];
      case 'binary':
        return writtenBinary(node);
      case 'call':
        return [`${node.name}(${node.arguments.map((argument) => print(argument, 0)).join(', ')})`, binding.primary];
      case 'piecewise': {
        const parts = node.pieces.flatMap(({ value, condition }) => [print(value, 0), print(condition, 0)]);
        return [`piecewise(${[...parts, print(node.otherwise, 0)].join(', ')})`, binding.primary];
      }
    }
  };

  const writtenBinary = (node: Extract<Expression, { kind: 'binary' }>): [string, number] => {
    const own = bindingOf[node.operator];
    if (node.operator === 'power') {
      return [`${print(node.left, binding.primary)}^${print(node.right, binding.sign)}`, own];
    }
    // Comparisons do not chain, so both sides bind more tightly; the others read from the left.
    const left = print(node.left, own === binding.comparison ? own + 1 : own);
    return [`${left} ${signs[node.operator]} ${print(node.right, own + 1)}`, own];
  };

  return print(expression, 0);
}
