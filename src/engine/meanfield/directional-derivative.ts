/** Derivatives of expressions along a direction by forward differentiation: each node carries its value and its slope. */
import type { BinaryOperator, Expression } from '@/domain/network/expression.ts';
import { exponential } from '../kernel/elementary/exponential.ts';
import { logarithm } from '../kernel/elementary/logarithm.ts';
import { power } from '../kernel/elementary/power.ts';
import { binaryOperation, unaryFunction, type UnaryFunctionName, type Values } from './compile-expression.ts';

export interface ValueAndSlope {
  value: number;
  slope: number;
}

/** A point and a direction: species `species` moves at rate 1, parameters at `parameterSlopes`, nothing else moves. */
export interface Direction extends Values {
  species: number;
  parameterSlopes: Float64Array;
}

const inverseLn10 = 0.4342944819032518;

/**
 * The value of `expression` and its derivative along `direction`, by the chain rule (forward mode; Griewank & Walther,
 * Evaluating Derivatives, 2008; citation from memory). At a kink the slope is that of the branch the value comes from;
 * comparisons, floor and ceil have slope 0. A slope may come out infinite or NaN where there is none (sqrt at 0).
 */
export function derivativeAlong(expression: Expression, direction: Direction): ValueAndSlope {
  const at = (node: Expression): ValueAndSlope => derivativeAlong(node, direction);
  switch (expression.kind) {
    case 'number':
      return { value: expression.value, slope: 0 };
    case 'symbol':
      throw new Error(`unresolved name ${expression.id}`);
    case 'species':
      return { value: direction.counts[expression.index]!, slope: expression.index === direction.species ? 1 : 0 };
    case 'parameter':
      return {
        value: direction.parameters[expression.index]!,
        slope: direction.parameterSlopes[expression.index]!,
      };
    case 'unary': {
      const { value, slope } = at(expression.operand);
      return expression.operator === 'negate'
        ? { value: -value, slope: -slope }
        : { value: value === 0 ? 1 : 0, slope: 0 };
    }
    case 'binary':
      return ofBinary(expression.operator, at(expression.left), at(expression.right));
    case 'call': {
      const inputs = expression.arguments.map(at);
      if (expression.name === 'min')
        return inputs.reduce((least, input) => (input.value < least.value ? input : least));
      if (expression.name === 'max') return inputs.reduce((most, input) => (input.value > most.value ? input : most));
      return ofFunction(expression.name, inputs[0]!);
    }
    case 'piecewise': {
      const piece = expression.pieces.find(({ condition }) => at(condition).value !== 0);
      return at(piece === undefined ? expression.otherwise : piece.value);
    }
  }
}

function ofBinary(operator: BinaryOperator, left: ValueAndSlope, right: ValueAndSlope): ValueAndSlope {
  const value = binaryOperation[operator](left.value, right.value);
  switch (operator) {
    case 'add':
      return { value, slope: left.slope + right.slope };
    case 'subtract':
      return { value, slope: left.slope - right.slope };
    case 'multiply':
      return { value, slope: left.slope * right.value + left.value * right.slope };
    case 'divide':
      return { value, slope: (left.slope - value * right.slope) / right.value };
    case 'power':
      return { value, slope: slopeOfPower(value, left, right) };
    default:
      return { value, slope: 0 };
  }
}

/** d(u^w) = w·u^(w−1)·du + u^w·ln u·dw; a term whose own slope is 0 is left out, since its factor may be infinite there. */
function slopeOfPower(value: number, base: ValueAndSlope, exponent: ValueAndSlope): number {
  const fromBase =
    base.slope === 0 || exponent.value === 0 ? 0 : exponent.value * power(base.value, exponent.value - 1) * base.slope;
  const fromExponent = exponent.slope === 0 || value === 0 ? 0 : value * logarithm(base.value) * exponent.slope;
  return fromBase + fromExponent;
}

function ofFunction(name: UnaryFunctionName, { value: input, slope }: ValueAndSlope): ValueAndSlope {
  const value = unaryFunction[name](input);
  if (slope === 0) return { value, slope: 0 };
  switch (name) {
    case 'exp':
      return { value, slope: exponential(input) * slope };
    case 'ln':
      return { value, slope: slope / input };
    case 'log10':
      return { value, slope: (inverseLn10 * slope) / input };
    case 'sqrt':
      return { value, slope: slope / (2 * value) };
    case 'abs':
      return { value, slope: input < 0 ? -slope : slope };
    case 'floor':
    case 'ceil':
      return { value, slope: 0 };
  }
}
