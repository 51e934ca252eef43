/** Walking over the leaves of an expression: which names it uses, and putting something else in their place. */
import type { Expression } from './expression.ts';

type Leaf = Extract<Expression, { kind: 'number' | 'symbol' | 'species' | 'parameter' }>;

const isLeaf = (node: Expression): node is Leaf =>
  node.kind === 'number' || node.kind === 'symbol' || node.kind === 'species' || node.kind === 'parameter';

/** The same expression with each leaf replaced by what `replace` returns for it (the leaf itself to keep it). */
export const mapLeaves = (expression: Expression, replace: (leaf: Leaf) => Expression): Expression =>
  mapNodes(expression, (node) => (isLeaf(node) ? replace(node) : node));

/** The same expression with each node, its parts before itself, replaced by what `replace` returns for it. */
export function mapNodes(expression: Expression, replace: (node: Expression) => Expression): Expression {
  const map = (node: Expression): Expression => {
    switch (node.kind) {
      case 'unary':
        return replace({ ...node, operand: map(node.operand) });
      case 'binary':
        return replace({ ...node, left: map(node.left), right: map(node.right) });
      case 'call':
        return replace({ ...node, arguments: node.arguments.map(map) });
      case 'piecewise':
        return replace({
          ...node,
          pieces: node.pieces.map(({ value, condition }) => ({ value: map(value), condition: map(condition) })),
          otherwise: map(node.otherwise),
        });
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
