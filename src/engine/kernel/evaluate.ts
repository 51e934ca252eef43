/**
 * Evaluates expressions and terms in plain TypeScript with the engine's own elementary functions: the same operations as the
 * generated code, bit for bit. (The domain's evaluate-expression.ts uses the host's functions and serves checks and forms.)
 */
import type { BinaryOperator, Expression, FunctionName } from '@/domain/network/expression.ts';
import { decimalLogarithm } from './elementary/decimal-logarithm.ts';
import { exponential } from './elementary/exponential.ts';
import { logarithm } from './elementary/logarithm.ts';
import { power } from './elementary/power.ts';
import { largestHoistedOrder, type PreparedReaction, type Term } from './prepared-network.ts';

const truth = (condition: boolean): number => (condition ? 1 : 0);

const binary: Record<BinaryOperator, (a: number, b: number) => number> = {
  add: (a, b) => a + b,
  subtract: (a, b) => a - b,
  multiply: (a, b) => a * b,
  divide: (a, b) => a / b,
  power,
  equal: (a, b) => truth(a === b),
  notEqual: (a, b) => truth(a !== b),
  less: (a, b) => truth(a < b),
  lessOrEqual: (a, b) => truth(a <= b),
  greater: (a, b) => truth(a > b),
  greaterOrEqual: (a, b) => truth(a >= b),
  and: (a, b) => truth(a !== 0 && b !== 0),
  or: (a, b) => truth(a !== 0 || b !== 0),
};

const functions: Record<FunctionName, (...values: number[]) => number> = {
  exp: (x) => exponential(x!),
  ln: (x) => logarithm(x!),
  log10: (x) => decimalLogarithm(x!),
  sqrt: (x) => Math.sqrt(x!),
  abs: (x) => Math.abs(x!),
  floor: (x) => Math.floor(x!),
  ceil: (x) => Math.ceil(x!),
  min: (first, ...rest) => rest.reduce((least, x) => Math.min(least, x), first!),
  max: (first, ...rest) => rest.reduce((most, x) => Math.max(most, x), first!),
};

type Leaf<T> = (leaf: T) => number;

function evaluateTree<T extends Term | Expression>(tree: T, leaf: Leaf<T>): number {
  const value = (part: Term | Expression): number => evaluateTree(part as T, leaf);
  switch (tree.kind) {
    case 'number':
      return tree.value;
    case 'unary':
      return tree.operator === 'negate' ? -value(tree.operand) : truth(value(tree.operand) === 0);
    case 'binary':
      return binary[tree.operator](value(tree.left), value(tree.right));
    case 'call':
      return functions[tree.name](...tree.arguments.map(value));
    case 'piecewise': {
      for (const piece of tree.pieces) if (value(piece.condition) !== 0) return value(piece.value);
      return value(tree.otherwise);
    }
    default:
      return leaf(tree);
  }
}

/** The value of an expression without species. */
export const evaluateConstant = (expression: Expression, parameters: readonly number[]): number =>
  evaluateTree(expression, (leaf) => {
    if (leaf.kind !== 'parameter') throw new Error(`${leaf.kind} in a constant expression`);
    return parameters[leaf.index]!;
  });

export interface StateValues {
  counts: ArrayLike<number>;
  constants: ArrayLike<number>;
  assigned: number[];
}

export const evaluateTerm = (term: Term, state: StateValues): number =>
  evaluateTree(term, (leaf) => {
    if (leaf.kind === 'species') return state.counts[leaf.index]!;
    if (leaf.kind === 'constant') return state.constants[leaf.slot]!;
    if (leaf.kind === 'assigned') return state.assigned[leaf.index]!;
    throw new Error(`${leaf.kind} is no leaf`);
  });

/** The propensity of a reaction, events per unit time. */
export function evaluatePropensity({ law }: PreparedReaction, state: StateValues): number {
  if (law.kind === 'expression') {
    const possible = law.guards.every(({ species, atLeast }) => state.counts[species]! >= atLeast);
    return possible ? evaluateTerm(law.value, state) : 0;
  }
  let propensity = evaluateTerm(law.factor, state);
  for (const { species, order } of law.orders) {
    const count = state.counts[species]!;
    for (let i = 0; i < order; i++) {
      propensity *= count - i;
      if (order > largestHoistedOrder) propensity /= i + 1;
    }
  }
  return propensity;
}
