import { describe, expect, it } from 'vitest';
import { birthDeath, dimerisation, immigrationDeath } from '@tests/factories/networks.ts';
import { errorWeights, ExplicitRungeKuttaMethod, stageWeights } from './explicit-runge-kutta.ts';
import { integrate } from './integrate.ts';
import { RateEquations } from './rate-equations.ts';

const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
const nodes = stageWeights.map(sum);
const matrix = stageWeights.map((row) => Array.from({ length: 7 }, (_, column) => row[column] ?? 0));
const times = (vector: number[]): number[] => matrix.map((row) => sum(row.map((entry, j) => entry * vector[j]!)));
const powerOf = (n: number): number[] => nodes.map((node) => node ** n);
const pointwise = (left: number[], right: number[]): number[] => left.map((entry, i) => entry * right[i]!);

describe('the explicit coefficients', () => {
  // Butcher's conditions to order 5, one per rooted tree (Hairer, Nørsett & Wanner I, section II.2; citation from memory).
  const trees: [number[], number][] = [
    [powerOf(0), 1],
    [powerOf(1), 1 / 2],
    [powerOf(2), 1 / 3],
    [times(powerOf(1)), 1 / 6],
    [powerOf(3), 1 / 4],
    [pointwise(nodes, times(powerOf(1))), 1 / 8],
    [times(powerOf(2)), 1 / 12],
    [times(times(powerOf(1))), 1 / 24],
    [powerOf(4), 1 / 5],
    [pointwise(powerOf(2), times(powerOf(1))), 1 / 10],
    [pointwise(nodes, times(powerOf(2))), 1 / 15],
    [pointwise(nodes, times(times(powerOf(1)))), 1 / 30],
    [pointwise(times(powerOf(1)), times(powerOf(1))), 1 / 20],
    [times(powerOf(3)), 1 / 20],
    [times(pointwise(nodes, times(powerOf(1)))), 1 / 40],
    [times(times(powerOf(2))), 1 / 60],
    [times(times(times(powerOf(1)))), 1 / 120],
  ];
  const result = matrix[6]!;
  const embedded = result.map((weight, stage) => weight - errorWeights[stage]!);

  it('meet the seventeen conditions of order 5', () => {
    for (const [tree, value] of trees) expect(sum(pointwise(result, tree))).toBeCloseTo(value, 13);
  });

  it('embed a result of order 4 that is not of order 5', () => {
    for (const [tree, value] of trees.slice(0, 8)) expect(sum(pointwise(embedded, tree))).toBeCloseTo(value, 13);
    expect(Math.abs(sum(pointwise(embedded, powerOf(4))) - 1 / 5)).toBeGreaterThan(1e-4);
  });
});

describe('ExplicitRungeKuttaMethod', () => {
  const solve = (model: ReturnType<typeof immigrationDeath>, horizon: number, tolerance: number) => {
    const method = new ExplicitRungeKuttaMethod(new RateEquations(model));
    const state = Float64Array.from(model.species, ({ initialCount }) => initialCount);
    const middles: { time: number; value: number }[] = [];
    const between = new Float64Array(state.length);
    const failure = integrate({
      method,
      state,
      from: 0,
      to: horizon,
      tolerances: { relative: tolerance, absolute: tolerance },
      budget: { steps: 100_000, operations: 1e9 },
      onStep: (start, end) => {
        method.interpolate(0.6, between);
        middles.push({ time: start + 0.6 * (end - start), value: between[0]! });
      },
    });
    expect(failure).toBeNull();
    return { end: state[0]!, middles };
  };

  it('solves what has a closed form, at the end and inside its steps', () => {
    const { end, middles } = solve(birthDeath(1, 0.5, 5), 8, 1e-9);
    expect(Math.abs(end / (5 * Math.exp(4)) - 1)).toBeLessThan(1e-7);
    for (const { time, value } of middles) expect(Math.abs(value / (5 * Math.exp(time / 2)) - 1)).toBeLessThan(1e-7);
  });

  it('settles on a balance without calling a network stiff that merely rests', () => {
    const { end } = solve(dimerisation(0.001, 0.01, 1_000), 2_000, 1e-6);
    const monomers = (-1 + Math.sqrt(1 + 4 * 0.1 * 1_000)) / 0.2;
    expect(Math.abs(end / monomers - 1)).toBeLessThan(1e-5);
  });
});
