/**
 * Robertson's stiff problem as a network (Robertson 1966, in Numerical Analysis: An Introduction, ed. Walsh; citation from
 * memory): A → B at 0.04, 2 B → B + C at 3e7·b², B + C → A + C at 1e4·b·c, from one A. Time scales span eleven decades.
 */
import { describe, expect, it } from 'vitest';
import { ExplicitRungeKuttaMethod } from '@/engine/meanfield/explicit-runge-kutta.ts';
import { integrate } from '@/engine/meanfield/integrate.ts';
import { meanField } from '@/engine/meanfield/mean-field.ts';
import { RateEquations } from '@/engine/meanfield/rate-equations.ts';
import { network } from '@tests/factories/networks.ts';

const robertson = network({
  counts: { A: 1, B: 0, C: 0 },
  reactions: [
    { consumes: { A: 1 }, produces: { B: 1 }, rate: 0.04 },
    { consumes: { B: 2 }, produces: { B: 1, C: 1 }, rate: 6e7 },
    { consumes: { B: 1, C: 1 }, produces: { A: 1, C: 1 }, rate: 1e4 },
  ],
});

const solutionAt = (horizon: number, tolerance: number) => {
  const solution = meanField({
    network: robertson,
    horizon,
    gridIntervals: 1,
    relativeTolerance: tolerance,
    absoluteTolerance: tolerance * 1e-8,
  });
  if (!solution.ok) throw new Error(solution.message);
  return { values: solution.observables.map(({ values }) => values[1]!), steps: solution.steps };
};
const relativeErrors = (values: number[], expected: number[]): number[] =>
  values.map((value, index) => Math.abs(value / expected[index]! - 1));

/**
 * A second method that shares nothing with the engine: the linearly implicit Euler step, extrapolated over 1 to 7 substeps
 * (Deuflhard 1985, SIAM Review 27:505; citation from memory), on steps in a geometric series, with equations, Jacobian
 * and 3 × 3 solve written out by hand.
 */
function extrapolatedEuler(horizon: number, ratio: number): number[] {
  let state = [1, 0, 0];
  let time = 0;
  for (let end = 1e-6; time < horizon; end *= ratio) {
    const stop = Math.min(end, horizon);
    state = extrapolated(state, stop - time);
    time = stop;
  }
  return state;
}

function extrapolated(state: number[], step: number): number[] {
  let row: number[][] = [];
  for (let substeps = 1; substeps <= 7; substeps++) {
    const next = [eulerSteps(state, step, substeps)];
    for (let k = 1; k < substeps; k++) {
      const quotient = substeps / (substeps - k) - 1;
      next.push(next[k - 1]!.map((value, i) => value + (value - row[k - 1]![i]!) / quotient));
    }
    row = next;
  }
  return row.at(-1)!;
}

function eulerSteps(start: number[], step: number, substeps: number): number[] {
  const h = step / substeps;
  const [a0, b0, c0] = start as [number, number, number];
  // I − h·J at the start of the step, kept for all substeps.
  const matrix = [
    [1 + 0.04 * h, -1e4 * c0 * h, -1e4 * b0 * h],
    [-0.04 * h, 1 + (1e4 * c0 + 6e7 * b0) * h, 1e4 * b0 * h],
    [0, -6e7 * b0 * h, 1],
  ];
  let [a, b, c] = [a0, b0, c0];
  for (let i = 0; i < substeps; i++) {
    const [first, second, third] = [0.04 * a, 3e7 * b * b, 1e4 * b * c];
    const [da, db, dc] = solveThree(matrix, [h * (third - first), h * (first - second - third), h * second]);
    [a, b, c] = [a + da!, b + db!, c + dc!];
  }
  return [a, b, c];
}

function solveThree(matrix: number[][], right: number[]): number[] {
  const rows = matrix.map((row, i) => [...row, right[i]!]);
  for (let k = 0; k < 3; k++) {
    for (let i = k + 1; i < 3; i++) {
      const factor = rows[i]![k]! / rows[k]![k]!;
      rows[i] = rows[i]!.map((entry, j) => entry - factor * rows[k]![j]!);
    }
  }
  const solution = [0, 0, 0];
  for (let i = 2; i >= 0; i--) {
    const known = rows[i]!.slice(i + 1, 3).reduce((sum, entry, j) => sum + entry * solution[i + 1 + j]!, 0);
    solution[i] = (rows[i]![3]! - known) / rows[i]![i]!;
  }
  return solution;
}

describe("meanField on Robertson's problem", () => {
  // Published reference at 1e11: Test Set for Initial Value Problem Solvers (Mazzia & Magherini), problem ROBER; from memory,
  // value recomputed to its first ten digits with SciPy 1.17's Radau at 3e−13. The values at 40 and 4e5 are from that run.
  const published: [number, number[]][] = [
    [40, [0.71582706871941, 9.1855347645577e-6, 0.28416374574583]],
    [4e5, [4.9382745209819e-3, 1.9849940879552e-8, 0.99506170562908]],
    [1e11, [2.083340149701255e-8, 8.333360770334713e-14, 0.999999979166505]],
  ];

  it.each(published)('reaches the published values at time %s at the tolerance asked for', (horizon, expected) => {
    for (const tolerance of [1e-4, 1e-6, 1e-8]) {
      const { values } = solutionAt(horizon, tolerance);
      expect(Math.max(...relativeErrors(values, expected))).toBeLessThan(20 * tolerance);
    }
  });

  it.each(published)('agrees at time %s with an independent extrapolation method', (horizon, expected) => {
    const independent = extrapolatedEuler(horizon, 1.08);
    // Late on, two fluxes of 8e−10 cancel to ten digits, and plain differences in doubles leave that method seven.
    const bound = horizon > 1e10 ? 2e-6 : 1e-9;
    expect(Math.max(...relativeErrors(independent, expected))).toBeLessThan(bound);
    expect(Math.max(...relativeErrors(solutionAt(horizon, 1e-9).values, independent))).toBeLessThan(bound + 2e-8);
  });

  it('needs a few hundred steps for eleven decades of time, where an explicit method would need billions', () => {
    expect(solutionAt(1e11, 1e-6).steps).toBeLessThan(1_000);
  });

  it('keeps the total to round-off over the whole range', () => {
    for (const [horizon] of published) {
      const total = solutionAt(horizon, 1e-6).values.reduce((sum, value) => sum + value, 0);
      expect(Math.abs(total - 1)).toBeLessThan(1e-13);
    }
  });

  it('is refused by the explicit method as too stiff, in a bounded number of steps', () => {
    const budget = { steps: 100_000, operations: 1e9 };
    const failure = integrate({
      method: new ExplicitRungeKuttaMethod(new RateEquations(robertson)),
      state: Float64Array.of(1, 0, 0),
      from: 0,
      to: 1e6,
      tolerances: { relative: 1e-6, absolute: 1e-14 },
      budget,
      onStep: () => {},
    });
    expect(failure).toMatchObject({ reason: 'too_stiff' });
    expect(budget.steps).toBeGreaterThan(95_000);
  });
});
