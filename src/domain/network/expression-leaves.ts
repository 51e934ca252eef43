/** Walking over the leaves of an expression: which names it uses, and putting something else in their place. */
import type { Expression } from './expression.ts';

type Leaf = Extract<Expression, { kind: 'number' | 'symbol' | 'species' | 'parameter' }>;

/** The same expression with each leaf replaced by what `replace` returns for it (the leaf itself to keep it). */
export function mapLeaves(expression: Expression, replace: (leaf: Leaf) => Expression): Expression {
  const map = (node: Expression): Expression => {
    switch (node.kind) {
      case 'unary':
        return { ...node, operand: map(node.operand) };
      case 'binary':
        return { ...node, left: map(node.left), right: map(node.right) };
      case 'call':
        return { ...node, arguments: node.arguments.map(map) };
      case 'piecewise':
        return {
          ...node,
          pieces: node.pieces.map(({ value, condition }) => ({ value: map(value), condition: map(condition) })),
          otherwise: map(node.otherwise),
        };
      default:
        return replace(node);
    }
  };
  return map(expression);
}

/** Every leaf of `expression`, left to right. */
export function leavesOf(expression: Expression): Leaf[] {
  const leaves: Leaf[] = [];
  mapLeaves(expression, (leaf) => {
    leaves.push(leaf);
    return leaf;
  });
  return leaves;
}

/** The names used in `expression`, each once, in order of appearance. */
export function symbolsOf(expression: Expression): Set<string> {
  return new Set(leavesOf(expression).flatMap((leaf) => (leaf.kind === 'symbol' ? [leaf.id] : [])));
}
