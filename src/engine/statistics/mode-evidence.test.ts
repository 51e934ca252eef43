/** Hartigan's dip against hand-worked and published numbers, and what is flagged as more than one mode. */
import { describe, expect, it } from 'vitest';
import type { Distribution } from '../ensemble.ts';
import { dip } from './dip.ts';
import { modeEvidence, uniformDips } from './mode-evidence.ts';
import { uniform53, Xoshiro256 } from '../random/xoshiro256.ts';

/** Of `weights[i]` for value i. */
function sampled(weights: number[], replicates: number, seed: number, spacing = 1): Distribution {
  const generator = new Xoshiro256([1n, 2n, 3n, BigInt(seed + 1)]);
  for (let i = 0; i < 20; i++) generator.next();
  const total = weights.reduce((sum, weight) => sum + weight, 0);
  const counts = weights.map(() => 0);
  for (let i = 0; i < replicates; i++) {
    let left = uniform53(generator.next()) * total;
    const value = weights.findIndex((weight) => (left -= weight) < 0);
    counts[value < 0 ? weights.length - 1 : value]!++;
  }
  const values = weights.map((_, i) => i * spacing).filter((_, i) => counts[i]! > 0);
  return { values, widths: values.map(() => 1), counts: counts.filter((count) => count > 0) };
}

const poisson = (mean: number): number[] => {
  const weights = [1];
  for (let i = 1; i < 4 * mean + 20; i++) weights.push((weights[i - 1]! * mean) / i);
  return weights;
};

/** The stationary distribution of a birth-death process with births(n) and deaths(n): detailed balance. */
function stationary(births: (n: number) => number, deaths: (n: number) => number, most: number): number[] {
  const logs = [0];
  for (let n = 1; n <= most; n++) logs.push(logs[n - 1]! + Math.log(births(n - 1) / deaths(n)));
  const highest = Math.max(...logs);
  return logs.map((log) => Math.exp(log - highest));
}

/** Schlögl's network (Z. Physik 1972) with rate constants from memory: bistable, modes near 85 and 565. */
const schlogl = stationary(
  (n) => (3e-7 / 2) * 1e5 * n * (n - 1) + 1e-3 * 2e5,
  (n) => (1e-4 / 6) * n * (n - 1) * (n - 2) + 3.5 * n,
  900,
);

describe("Hartigan's dip", () => {
  it('of two even blocks as far apart as they are wide is 1/8; of one block or a triangle 0 (worked by hand)', () => {
    // A convex U has U(1) ≤ (U(0) + U(2)) / 2, so 1/2 − δ ≤ (δ + 1/2 + δ) / 2.
    expect(dip({ at: [0, 1, 2, 3], share: [0, 0.5, 0.5, 1] })).toBeCloseTo(0.125, 12);
    expect(dip({ at: [0, 1], share: [0, 1] })).toBe(0);
    expect(dip({ at: [0, 1, 2, 3, 4], share: [0, 0.1, 0.5, 0.9, 1] })).toBe(0);
  });

  it('is near its largest, 1/4, for two blocks far apart (Hartigan & Hartigan 1985)', () => {
    expect(dip({ at: [0, 1, 1000, 1001], share: [0, 0.5, 0.5, 1] })).toBeCloseTo(0.25, 2);
  });

  it('of uniform samples has published quantiles: √200 · 0.0370 at 95 % for n = 200 (Hartigan 1985, from memory)', () => {
    const dips = uniformDips('11', 200);
    expect(dips[Math.floor(0.95 * dips.length)]! / Math.sqrt(200)).toBeGreaterThan(0.034);
    expect(dips[Math.floor(0.95 * dips.length)]! / Math.sqrt(200)).toBeLessThan(0.04);
  });
});

describe('evidence for more than one mode', () => {
  const dips = uniformDips('7', 2000);

  it('is the same for the same seed', () => {
    expect(uniformDips('7', 2000)).toEqual(dips);
    expect(uniformDips('8', 2000)).not.toEqual(dips);
  });

  it("is found in Schlögl's bistable network, by 2,000 replicates in 20 of 20 seeded samples", () => {
    for (let seed = 0; seed < 20; seed++)
      expect(modeEvidence(sampled(schlogl, 2000, seed), dips)!.moreThanOne).toBe(true);
  });

  // At a level of 1 %, 5 or more of 100 have a chance of 0.34 % (binomial); three shapes: 1 % in all.
  it.each([
    ['Poisson of mean 3', poisson(3), 1],
    ['Poisson of mean 40, of which only even counts occur', poisson(40), 2],
    ['even from 0 to 59', Array.from({ length: 60 }, () => 1), 1],
  ])('is not found where there is one mode: %s', (_, weights, spacing) => {
    let flagged = 0;
    for (let seed = 0; seed < 100; seed++)
      if (modeEvidence(sampled(weights, 2000, seed, spacing), dips)!.moreThanOne) flagged++;
    expect(flagged).toBeLessThan(5);
  });

  it('is not asked of few replicates, of real numbers, or of counts in wide bins', () => {
    expect(modeEvidence({ values: [1, 9], widths: [1, 1], counts: [9, 10] }, dips)).toBeNull();
    expect(modeEvidence({ values: [1.5], widths: [1], counts: [100] }, dips)).toBeNull();
    expect(modeEvidence({ values: [5000], widths: [2], counts: [100] }, dips)).toBeNull();
  });

  it('of a single value is none', () => {
    expect(modeEvidence({ values: [4], widths: [1], counts: [100] }, dips)).toMatchObject({ dip: 0, pValue: 1 });
  });
});
