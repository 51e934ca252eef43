/**
 * Plain evaluation of an expression, for checks, readers, tests and the editor. The engine does not use it: its results
 * come from its own generated code, while this one leans on the host's Math.
 */
import type { BinaryOperator, Expression, FunctionName } from './expression.ts';

export interface Values {
  symbol?: (id: string) => number;
  /** Counts by index. */
  species?: ArrayLike<number>;
  parameters?: ArrayLike<number>;
}

const truth = (value: boolean): number => (value ? 1 : 0);
const isTrue = (value: number): boolean => value !== 0;

const binary: Record<BinaryOperator, (left: number, right: number) => number> = {
  add: (left, right) => left + right,
  subtract: (left, right) => left - right,
  multiply: (left, right) => left * right,
  divide: (left, right) => left / right,
  power: (left, right) => left ** right,
  equal: (left, right) => truth(left === right),
  notEqual: (left, right) => truth(left !== right),
  less: (left, right) => truth(left < right),
  lessOrEqual: (left, right) => truth(left <= right),
  greater: (left, right) => truth(left > right),
  greaterOrEqual: (left, right) => truth(left >= right),
  and: (left, right) => truth(isTrue(left) && isTrue(right)),
  or: (left, right) => truth(isTrue(left) || isTrue(right)),
};

const functions: Record<FunctionName, (...values: number[]) => number> = {
  exp: Math.exp,
  ln: Math.log,
  log10: Math.log10,
  sqrt: Math.sqrt,
  abs: Math.abs,
  floor: Math.floor,
  ceil: Math.ceil,
  min: Math.min,
  max: Math.max,
};

/** The value of `expression` in IEEE doubles (1/0 is Infinity, 0/0 NaN); truth values are 1 and 0. Throws on a leaf without a value. */
export function evaluateExpression(expression: Expression, values: Values): number {
  const known = (value: number | undefined, leaf: string): number => {
    if (value === undefined) throw new RangeError(`no value for ${leaf}`);
    return value;
  };
  const evaluate = (node: Expression): number => {
    switch (node.kind) {
      case 'number':
        return node.value;
      case 'symbol':
        return known(values.symbol?.(node.id), node.id);
      case 'species':
        return known(values.species?.[node.index], `species ${node.index}`);
      case 'parameter':
        return known(values.parameters?.[node.index], `parameter ${node.index}`);
      case 'unary':
        return node.operator === 'negate' ? -evaluate(node.operand) : truth(!isTrue(evaluate(node.operand)));
      case 'binary':
        return binary[node.operator](evaluate(node.left), evaluate(node.right));
      case 'call':
        return functions[node.name](...node.arguments.map(evaluate));
      case 'piecewise': {
        const piece = node.pieces.find(({ condition }) => isTrue(evaluate(condition)));
        return evaluate(piece === undefined ? node.otherwise : piece.value);
      }
    }
  };
  return evaluate(expression);
}
