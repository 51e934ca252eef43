/** Proves from its form that a law is zero whenever a reactant has run out, so that it needs no guard. */
import { evaluateExpression } from './evaluate-expression.ts';
import type { Expression } from './expression.ts';
import { leavesOf } from './expression-leaves.ts';

/**
 * Whether `law` (names as symbols) is zero for every count of each reactant below what the reaction takes. True only when
 * the form shows it; false means “not shown”. A zero factor is taken to win over everything it multiplies.
 */
export function vanishesWithoutReactants(law: Expression, reactants: { species: string; count: number }[]): boolean {
  return reactants.every(({ species, count }) => {
    for (let present = 0; present < count; present++) if (!isZero(law, species, present)) return false;
    return true;
  });
}

function isZero(node: Expression, species: string, count: number): boolean {
  if (leavesOf(node).every((leaf) => leaf.kind === 'number' || (leaf.kind === 'symbol' && leaf.id === species))) {
    return evaluateExpression(node, { symbol: () => count }) === 0;
  }
  const zero = (part: Expression): boolean => isZero(part, species, count);
  switch (node.kind) {
    case 'binary':
      if (node.operator === 'multiply') return zero(node.left) || zero(node.right);
      if (node.operator === 'divide') return zero(node.left);
      if (node.operator === 'add' || node.operator === 'subtract') return zero(node.left) && zero(node.right);
      return false;
    case 'unary':
      return node.operator === 'negate' && zero(node.operand);
    case 'piecewise':
      return node.pieces.every(({ value }) => zero(value)) && zero(node.otherwise);
    default:
      return false;
  }
}
