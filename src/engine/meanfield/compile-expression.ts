/**
 * Turns expressions into closures for the rate equations. The engine's own elementary functions are used, so that a
 * solution has the same digits on every machine and browser.
 */
import type { BinaryOperator, Expression, FunctionName } from '@/domain/network/expression.ts';
import { decimalLogarithm } from '../kernel/elementary/decimal-logarithm.ts';
import { exponential } from '../kernel/elementary/exponential.ts';
import { logarithm } from '../kernel/elementary/logarithm.ts';
import { power } from '../kernel/elementary/power.ts';

/** Where an expression is evaluated: one number per species and per parameter (assigned ones up to date). */
export interface Values {
  counts: Float64Array;
  parameters: Float64Array;
}

export type CompiledExpression = (values: Values) => number;

const truth = (condition: boolean): number => (condition ? 1 : 0);

export const binaryOperation: Record<BinaryOperator, (left: number, right: number) => number> = {
  add: (left, right) => left + right,
  subtract: (left, right) => left - right,
  multiply: (left, right) => left * right,
  divide: (left, right) => left / right,
  power,
  equal: (left, right) => truth(left === right),
  notEqual: (left, right) => truth(left !== right),
  less: (left, right) => truth(left < right),
  lessOrEqual: (left, right) => truth(left <= right),
  greater: (left, right) => truth(left > right),
  greaterOrEqual: (left, right) => truth(left >= right),
  and: (left, right) => truth(left !== 0 && right !== 0),
  or: (left, right) => truth(left !== 0 || right !== 0),
};

export type UnaryFunctionName = Exclude<FunctionName, 'min' | 'max'>;

export const unaryFunction: Record<UnaryFunctionName, (value: number) => number> = {
  exp: exponential,
  ln: logarithm,
  log10: decimalLogarithm,
  sqrt: Math.sqrt,
  abs: Math.abs,
  floor: Math.floor,
  ceil: Math.ceil,
};

/** A closure that evaluates `expression` in IEEE doubles; truth values are 1 and 0. Throws at once on an unresolved name. */
export function compileExpression(expression: Expression): CompiledExpression {
  switch (expression.kind) {
    case 'number': {
      const { value } = expression;
      return () => value;
    }
    case 'symbol':
      throw new Error(`unresolved name ${expression.id}`);
    case 'species': {
      const { index } = expression;
      return ({ counts }) => counts[index]!;
    }
    case 'parameter': {
      const { index } = expression;
      return ({ parameters }) => parameters[index]!;
    }
    case 'unary': {
      const operand = compileExpression(expression.operand);
      return expression.operator === 'negate' ? (at) => -operand(at) : (at) => truth(operand(at) === 0);
    }
    case 'binary': {
      const operation = binaryOperation[expression.operator];
      const [left, right] = [compileExpression(expression.left), compileExpression(expression.right)];
      return (at) => operation(left(at), right(at));
    }
    case 'call':
      return compileCall(expression.name, expression.arguments.map(compileExpression));
    case 'piecewise': {
      const pieces = expression.pieces.map(({ value, condition }) => ({
        value: compileExpression(value),
        condition: compileExpression(condition),
      }));
      const otherwise = compileExpression(expression.otherwise);
      return (at) => (pieces.find(({ condition }) => condition(at) !== 0)?.value ?? otherwise)(at);
    }
  }
}

function compileCall(name: FunctionName, inputs: CompiledExpression[]): CompiledExpression {
  const [first] = inputs;
  if (name === 'min') return (at) => inputs.reduce((least, input) => Math.min(least, input(at)), Infinity);
  if (name === 'max') return (at) => inputs.reduce((most, input) => Math.max(most, input(at)), -Infinity);
  const apply = unaryFunction[name];
  return (at) => apply(first!(at));
}
