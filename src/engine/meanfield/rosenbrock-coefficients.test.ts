/** Checks the coefficients against the order conditions, which do not depend on where the numbers were copied from. */
import { describe, expect, it } from 'vitest';
import { couplings, extension, gamma, resultWeights, stageWeights } from './rosenbrock-coefficients.ts';

type Matrix = number[][];

const size = stageWeights.length;
const square = (rows: readonly (readonly number[])[]): Matrix =>
  rows.map((row) => Array.from({ length: size }, (_, column) => row[column] ?? 0));
const times = (matrix: Matrix, vector: number[]): number[] =>
  matrix.map((row) => row.reduce((sum, entry, column) => sum + entry * vector[column]!, 0));
const product = (left: Matrix, right: Matrix): Matrix =>
  left.map((row) => row.map((_, column) => row.reduce((sum, entry, k) => sum + entry * right[k]![column]!, 0)));
const dot = (left: number[], right: number[]): number => left.reduce((sum, entry, i) => sum + entry * right[i]!, 0);
const pointwise = (left: number[], right: number[]): number[] => left.map((entry, i) => entry * right[i]!);
const rowSums = (matrix: Matrix): number[] => matrix.map((row) => row.reduce((sum, entry) => sum + entry, 0));

/** Γ = (I/γ − c)⁻¹, lower triangular, by forward substitution column by column. */
const inverseOfLower = (matrix: Matrix): Matrix => {
  const inverse = square(Array.from({ length: size }, () => []));
  for (let column = 0; column < size; column++) {
    for (let row = column; row < size; row++) {
      const known = inverse.reduce((sum, entries, k) => (k < row ? sum + matrix[row]![k]! * entries[column]! : sum), 0);
      inverse[row]![column] = ((row === column ? 1 : 0) - known) / matrix[row]![row]!;
    }
  }
  return inverse;
};

const c = square(couplings);
const capitalGamma = inverseOfLower(c.map((row, i) => row.map((entry, j) => (i === j ? 1 / gamma : 0) - entry)));
const alpha = product(square(stageWeights), capitalGamma);
const beta = alpha.map((row, i) => row.map((entry, j) => entry + capitalGamma[i]![j]!));
const [alphaSums, betaSums] = [rowSums(alpha), rowSums(beta)];
const untransformed = (weights: readonly number[]): number[] => product(square([weights]), capitalGamma)[0]!;

/** Left side less right side of the conditions at fraction θ of the step, orders 1, 2, 3, 3, 4, 4, 4, 4. */
const conditions = (b: number[], theta = 1): number[] => [
  dot(
    b,
    b.map(() => 1),
  ) - theta,
  dot(b, betaSums) - theta ** 2 / 2,
  dot(b, pointwise(alphaSums, alphaSums)) - theta ** 3 / 3,
  dot(b, times(beta, betaSums)) - theta ** 3 / 6,
  dot(b, pointwise(alphaSums, pointwise(alphaSums, alphaSums))) - theta ** 4 / 4,
  dot(b, pointwise(alphaSums, times(alpha, betaSums))) - theta ** 4 / 8,
  dot(b, times(beta, pointwise(alphaSums, alphaSums))) - theta ** 4 / 12,
  dot(b, times(beta, times(beta, betaSums))) - theta ** 4 / 24,
];
const largest = (values: number[]): number => Math.max(...values.map(Math.abs));

// Order conditions: Hairer & Wanner II, section IV.7, table 7.1 (citation from memory); each is a Taylor coefficient.
describe('the Rosenbrock coefficients', () => {
  it('meet the eight conditions of order 4', () => {
    expect(largest(conditions(untransformed(resultWeights)))).toBeLessThan(1e-13);
  });

  it('embed a result of order 3 that is not of order 4, so that the difference estimates the error', () => {
    const embedded = conditions(untransformed(stageWeights[5]));
    expect(largest(embedded.slice(0, 4))).toBeLessThan(1e-13);
    expect(largest(embedded.slice(4))).toBeGreaterThan(1e-3);
  });

  it('are stiffly accurate: the weights are the last row of α + Γ, so a fast species ends on its slow curve', () => {
    const weights = untransformed(resultWeights);
    expect(largest(weights.map((weight, j) => weight - beta[size - 1]![j]!))).toBeLessThan(1e-13);
    expect(alphaSums[size - 1]).toBeCloseTo(1, 13);
  });

  it.each([0.1, 0.25, 0.5, 0.75, 0.9])('extend to θ = %s of the step with order 3', (theta) => {
    const weights = resultWeights.map((weight, stage) => {
      const [first, second] = [extension[0][stage] ?? 0, extension[1][stage] ?? 0];
      return theta * (weight + (1 - theta) * (first + theta * second));
    });
    expect(largest(conditions(untransformed(weights), theta).slice(0, 4))).toBeLessThan(1e-13);
  });
});
