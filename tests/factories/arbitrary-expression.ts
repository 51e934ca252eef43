/** Random syntax trees for property tests (fast-check): of the shapes that the parser makes, so no negative numbers. */
import fc from 'fast-check';
import type { BinaryOperator, Expression } from '@/domain/network/expression.ts';

const arithmetic: BinaryOperator[] = ['add', 'subtract', 'multiply', 'divide', 'power'];
const logical: BinaryOperator[] = [
  'equal',
  'notEqual',
  'less',
  'lessOrEqual',
  'greater',
  'greaterOrEqual',
  'and',
  'or',
];

/** Trees over the names given, up to about six deep. */
export function arbitraryExpression(names: string[]): fc.Arbitrary<Expression> {
  const number = fc
    .oneof(fc.nat(20), fc.double({ min: 0, max: 1e6, noNaN: true }))
    .map((value): Expression => ({ kind: 'number', value: value === 0 ? 0 : value }));
  const leaf = fc.oneof(
    number,
    fc.constantFrom(...names).map((id): Expression => ({ kind: 'symbol', id })),
  );
  return fc.letrec<{ node: Expression }>((tie) => {
    const node = tie('node');
    const binary = fc
      .tuple(fc.constantFrom(...arithmetic, ...arithmetic, ...logical), node, node)
      .map(([operator, left, right]): Expression => ({ kind: 'binary', operator, left, right }));
    const unary = fc
      .tuple(fc.constantFrom('negate' as const, 'not' as const), node)
      .map(([operator, operand]): Expression => ({ kind: 'unary', operator, operand }));
    const one = fc
      .tuple(fc.constantFrom('exp', 'ln', 'log10', 'sqrt', 'abs', 'floor', 'ceil'), node)
      .map(([name, argument]): Expression => ({ kind: 'call', name, arguments: [argument] }));
    const many = fc
      .tuple(fc.constantFrom('min' as const, 'max' as const), fc.array(node, { minLength: 1, maxLength: 3 }))
      .map(([name, parameters]): Expression => ({ kind: 'call', name, arguments: parameters }));
    const piecewise = fc
      .tuple(fc.array(fc.record({ value: node, condition: node }), { minLength: 1, maxLength: 2 }), node)
      .map(([pieces, otherwise]): Expression => ({ kind: 'piecewise', pieces, otherwise }));
    return { node: fc.oneof({ maxDepth: 5, depthSize: 'small' }, leaf, binary, binary, unary, one, many, piecewise) };
  }).node;
}
