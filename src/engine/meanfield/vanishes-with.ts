/** Says whether a law has a reactant as a factor, so that it goes to 0 with it by itself. */
import type { Expression } from '@/domain/network/expression.ts';

/**
 * True when the form of `expression` shows that it is 0 wherever species `species` is 0 (division by 0 aside).
 * `assigned` gives the expressions behind assigned parameters. False says only that the form does not show it.
 */
export function vanishesWith(
  expression: Expression,
  species: number,
  assigned: ReadonlyMap<number, Expression>,
): boolean {
  const vanishes = (node: Expression): boolean => vanishesWith(node, species, assigned);
  switch (expression.kind) {
    case 'number':
      return expression.value === 0;
    case 'species':
      return expression.index === species;
    case 'parameter': {
      const behind = assigned.get(expression.index);
      return behind !== undefined && vanishes(behind);
    }
    case 'symbol':
      return false;
    case 'unary':
      return expression.operator === 'negate' && vanishes(expression.operand);
    case 'binary':
      switch (expression.operator) {
        case 'multiply':
          return vanishes(expression.left) || vanishes(expression.right);
        case 'divide':
          return vanishes(expression.left);
        case 'add':
        case 'subtract':
          return vanishes(expression.left) && vanishes(expression.right);
        case 'power':
          return vanishes(expression.left) && expression.right.kind === 'number' && expression.right.value > 0;
        default:
          return false;
      }
    case 'call':
      return !['exp', 'ln', 'log10'].includes(expression.name) && expression.arguments.every(vanishes);
    case 'piecewise':
      return expression.pieces.every(({ value }) => vanishes(value)) && vanishes(expression.otherwise);
  }
}
