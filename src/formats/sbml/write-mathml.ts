/** Writes an expression of the document as content MathML. */
import type { BinaryOperator, Expression, FunctionName } from '@/domain/network/expression.ts';
import { parseExpression } from '@/domain/network/parse-expression.ts';
import { mathmlNamespace, writtenNamespace } from './sbml-names.ts';

const operatorElements: Record<BinaryOperator, string> = {
  add: 'plus',
  subtract: 'minus',
  multiply: 'times',
  divide: 'divide',
  power: 'power',
  equal: 'eq',
  notEqual: 'neq',
  less: 'lt',
  lessOrEqual: 'leq',
  greater: 'gt',
  greaterOrEqual: 'geq',
  and: 'and',
  or: 'or',
};
const functionElements: Record<FunctionName, string> = {
  exp: 'exp',
  ln: 'ln',
  log10: 'log',
  sqrt: 'root',
  abs: 'abs',
  floor: 'floor',
  ceil: 'ceiling',
  min: 'min',
  max: 'max',
};

type Kind = 'number' | 'truth';
const truthOperators = new Set<BinaryOperator>([
  'equal',
  'notEqual',
  'less',
  'lessOrEqual',
  'greater',
  'greaterOrEqual',
  'and',
  'or',
]);
const kindOf = (expression: Expression): Kind => {
  if (expression.kind === 'unary') return expression.operator === 'not' ? 'truth' : 'number';
  return expression.kind === 'binary' && truthOperators.has(expression.operator) ? 'truth' : 'number';
};

/**
 * A `<math>` element holding `expression` (names as symbols). The expression language counts truth values as 1 and 0 and
 * any number but 0 as true; MathML in SBML keeps the two apart, so a truth value used as a number is written as
 * piecewise(1, …, 0) and a number used as a condition as … ≠ 0. `kind` is what the place needs: a trigger needs truth.
 */
export function writeMathml(expression: Expression, kind: Kind = 'number'): string {
  return `<math xmlns="${mathmlNamespace}" xmlns:sbml="${writtenNamespace}">${write(expression, kind)}</math>`;
}

/** A `<math>` element for the trigger “time ≥ `moment`”. */
export function writeTimeTrigger(moment: Expression): string {
  const time = '<csymbol encoding="text" definitionURL="http://www.sbml.org/sbml/symbols/time">time</csymbol>';
  const open = `<math xmlns="${mathmlNamespace}" xmlns:sbml="${writtenNamespace}">`;
  return `${open}<apply><geq/>${time}${write(moment, 'number')}</apply></math>`;
}

function write(expression: Expression, wanted: Kind): string {
  const text = element(expression);
  const own = kindOf(expression);
  if (own === wanted) return text;
  if (wanted === 'truth') return `<apply><neq/>${text}${numberElement(0)}</apply>`;
  return `<piecewise><piece>${numberElement(1)}${text}</piece><otherwise>${numberElement(0)}</otherwise></piecewise>`;
}

function element(node: Expression): string {
  switch (node.kind) {
    case 'number':
      return numberElement(node.value);
    case 'symbol':
      return `<ci>${node.id}</ci>`;
    case 'species':
    case 'parameter':
      throw new TypeError('write-mathml takes expressions with names, not indices');
    case 'unary':
      return node.operator === 'not'
        ? `<apply><not/>${write(node.operand, 'truth')}</apply>`
        : `<apply><minus/>${write(node.operand, 'number')}</apply>`;
    case 'binary': {
      const inner = node.operator === 'and' || node.operator === 'or' ? 'truth' : 'number';
      return `<apply><${operatorElements[node.operator]}/>${write(node.left, inner)}${write(node.right, inner)}</apply>`;
    }
    case 'call':
      return `<apply><${functionElements[node.name]}/>${node.arguments.map((argument) => write(argument, 'number')).join('')}</apply>`;
    case 'piecewise': {
      const pieces = node.pieces.map(
        ({ value, condition }) => `<piece>${write(value, 'number')}${write(condition, 'truth')}</piece>`,
      );
      return `<piecewise>${pieces.join('')}<otherwise>${write(node.otherwise, 'number')}</otherwise></piecewise>`;
    }
  }
}

/** The shortest decimal that reads back to the same double; exponents in MathML's own notation. Literals are pure numbers. */
function numberElement(value: number): string {
  const [significand, exponent] = String(value).split('e');
  const unit = 'sbml:units="dimensionless"';
  if (exponent !== undefined) return `<cn ${unit} type="e-notation">${significand}<sep/>${Number(exponent)}</cn>`;
  return Number.isInteger(value) && Math.abs(value) < 2 ** 31
    ? `<cn ${unit} type="integer">${value}</cn>`
    : `<cn ${unit}>${significand}</cn>`;
}

/** The expression of a text in a document without errors; throws on any other. */
export function parsedLaw(text: string): Expression {
  const result = parseExpression(text);
  if (!result.ok) throw new TypeError(result.fault.message);
  return result.expression;
}
