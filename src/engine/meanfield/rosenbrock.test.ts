import { describe, expect, it } from 'vitest';
import { birthDeath, dimerisation, network } from '@tests/factories/networks.ts';
import { minimumDegreeOrder } from './minimum-degree.ts';
import { RateEquations } from './rate-equations.ts';
import { RosenbrockMethod } from './rosenbrock.ts';

const methodFor = (model: ReturnType<typeof birthDeath>): RosenbrockMethod => {
  const equations = new RateEquations(model);
  return new RosenbrockMethod(equations, equations.jacobian!, minimumDegreeOrder(equations.jacobian!.pattern, 1e6)!);
};
/** The first species at `horizon` after equal steps, and inside the last step at 0.4 of it. */
const fixedSteps = (model: ReturnType<typeof birthDeath>, horizon: number, steps: number) => {
  const method = methodFor(model);
  const between = new Float64Array(model.species.length);
  method.start(Float64Array.from(model.species, ({ initialCount }) => initialCount));
  for (let step = 0; step < steps; step++) {
    expect(method.attempt(horizon / steps)).toBeNull();
    method.interpolate(0.4, between);
    method.accept();
  }
  return { end: method.candidate[0]!, inside: between[0]!, insideTime: horizon * (1 - 0.6 / steps) };
};
const observedOrder = (errors: number[]): number => Math.log2(errors[0]! / errors[1]!);

describe('RosenbrockMethod', () => {
  const logistic = network({
    counts: { X: 10 },
    reactions: [
      { consumes: { X: 1 }, produces: { X: 2 }, rate: 1 },
      { consumes: { X: 2 }, produces: { X: 1 }, rate: 0.02 },
    ],
  });
  const exact = (time: number): number => 100 / (1 + 9 * Math.exp(-time));

  it('converges with order 4 at its steps when their length is halved', () => {
    const errors = [40, 80].map((steps) => Math.abs(fixedSteps(logistic, 6, steps).end - exact(6)));
    expect(observedOrder(errors)).toBeGreaterThan(3.7);
    expect(observedOrder(errors)).toBeLessThan(4.5);
  });

  it('converges between its steps with order 4 too: a local error of order 4 on top of the global one', () => {
    const errors = [40, 80].map((steps) => {
      const { inside, insideTime } = fixedSteps(logistic, 6, steps);
      return Math.abs(inside - exact(insideTime));
    });
    expect(observedOrder(errors)).toBeGreaterThan(3.5);
  });

  it('damps a fast species in one step of many lifetimes, the more the faster: it is L-stable', () => {
    for (const rate of [1e6, 1e8, 1e10]) {
      const fast = network({ counts: { X: 1_000 }, reactions: [{ consumes: { X: 1 }, rate }] });
      const method = methodFor(fast);
      method.start(Float64Array.of(1_000));
      expect(method.attempt(1)).toBeNull();
      expect(Math.abs(method.candidate[0]!)).toBeLessThan((20 * 1_000) / rate);
    }
  });

  it('keeps P + 2·P2 to round-off over a thousand steps', () => {
    const method = methodFor(dimerisation(0.001, 0.01, 1_000));
    method.start(Float64Array.of(1_000, 0));
    for (let step = 0; step < 1_000; step++) {
      method.attempt(0.1);
      method.accept();
      expect(Math.abs(method.candidate[0]! + 2 * method.candidate[1]! - 1_000)).toBeLessThan(1e-9);
    }
  });
});
