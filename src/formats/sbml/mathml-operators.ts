/** How each operator and constant of MathML is said in the expression language. */
import type { BinaryOperator, Expression, FunctionName } from '@/domain/network/expression.ts';

export const number = (value: number): Expression => ({ kind: 'number', value });
export const binary = (operator: BinaryOperator, left: Expression, right: Expression): Expression => ({
  kind: 'binary',
  operator,
  left,
  right,
});
const not = (operand: Expression): Expression => ({ kind: 'unary', operator: 'not', operand });
export const call = (name: FunctionName, ...parameters: Expression[]): Expression => ({
  kind: 'call',
  name,
  arguments: parameters,
});
/** Undefined by IEEE rules, as the standard asks; a run that meets it stops and says where. */
export const undefinedValue = binary('divide', number(0), number(0));

const foldedLeft =
  (operator: BinaryOperator, empty: number) =>
  (operands: Expression[]): Expression =>
    operands.length === 0 ? number(empty) : operands.reduce((left, right) => binary(operator, left, right));

/** a < b < c means a < b and b < c. */
const chained =
  (operator: BinaryOperator) =>
  (operands: Expression[]): Expression =>
    operands
      .slice(1)
      .map((right, index) => binary(operator, operands[index]!, right))
      .reduce((left, right) => binary('and', left, right));

interface Operator {
  least: number;
  most: number;
  build: (operands: Expression[]) => Expression;
}
const operator = (least: number, most: number, build: Operator['build']): Operator => ({ least, most, build });
const two = (build: (left: Expression, right: Expression) => Expression): Operator =>
  operator(2, 2, ([left, right]) => build(left!, right!));
const one = (name: FunctionName): Operator => operator(1, 1, ([operand]) => call(name, operand!));

/** By element name; `least` and `most` arguments. */
export const operators = new Map<string, Operator>([
  ['plus', operator(0, Infinity, foldedLeft('add', 0))],
  ['times', operator(0, Infinity, foldedLeft('multiply', 1))],
  [
    'minus',
    operator(1, 2, ([left, right]) =>
      right === undefined ? { kind: 'unary', operator: 'negate', operand: left! } : binary('subtract', left!, right),
    ),
  ],
  ['divide', two((left, right) => binary('divide', left, right))],
  ['power', two((left, right) => binary('power', left, right))],
  ['exp', one('exp')],
  ['ln', one('ln')],
  ['abs', one('abs')],
  ['floor', one('floor')],
  ['ceiling', one('ceil')],
  ['min', operator(1, Infinity, (operands) => call('min', ...operands))],
  ['max', operator(1, Infinity, (operands) => call('max', ...operands))],
  ['eq', operator(2, Infinity, chained('equal'))],
  ['neq', two((left, right) => binary('notEqual', left, right))],
  ['lt', operator(2, Infinity, chained('less'))],
  ['leq', operator(2, Infinity, chained('lessOrEqual'))],
  ['gt', operator(2, Infinity, chained('greater'))],
  ['geq', operator(2, Infinity, chained('greaterOrEqual'))],
  ['and', operator(0, Infinity, foldedLeft('and', 1))],
  ['or', operator(0, Infinity, foldedLeft('or', 0))],
  [
    'xor',
    operator(0, Infinity, (operands) =>
      operands.map((operand) => not(not(operand))).reduce((left, right) => binary('notEqual', left, right), number(0)),
    ),
  ],
  ['not', operator(1, 1, ([operand]) => not(operand!))],
  ['implies', two((left, right) => binary('or', not(left), right))],
]);

export const constants = new Map<string, Expression>([
  ['true', number(1)],
  ['false', number(0)],
  ['pi', number(Math.PI)],
  ['exponentiale', number(Math.E)],
  ['infinity', binary('divide', number(1), number(0))],
  ['notanumber', undefinedValue],
]);
