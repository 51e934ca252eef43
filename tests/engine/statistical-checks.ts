/**
 * Statistical checks with a stated false-alarm rate: all checks of the simulating methods together raise a false alarm with
 * probability 0.001 at most (Bonferroni over `checksInAll`); seeds are fixed, so that a pass stays a pass.
 */
import binomial from '@stdlib/stats-base-dists-binomial';
import chisquare from '@stdlib/stats-base-dists-chisquare';
import normal from '@stdlib/stats-base-dists-normal';
import { expect } from 'vitest';

/** At least as many as the tests that use this file make. */
const checksInAll = 200;
const falseAlarm = 0.001 / checksInAll;
/** Two-sided normal bound of one check, about 4.6. */
export const bound: number = normal.quantile(1 - falseAlarm / 2, 0, 1);

/** The mean of n replicates of a variable with this mean and standard deviation. */
export function expectMean(observed: number, mean: number, sd: number, n: number): void {
  expect((Math.abs(observed - mean) / sd) * Math.sqrt(n)).toBeLessThan(bound);
}

/** A sample variance; its standard error is σ² √((κ − 1)/n) with the kurtosis κ, 3 for nearly normal variables. */
export function expectVariance(observed: number, variance: number, kurtosis: number, n: number): void {
  expect(Math.abs(observed / variance - 1) / Math.sqrt((kurtosis - 1) / n)).toBeLessThan(bound);
}

/** A share of n replicates, by the exact binomial tails. */
export function expectShare(successes: number, probability: number, n: number): void {
  const atMost = binomial.cdf(successes, n, probability);
  const atLeast = successes === 0 ? 1 : 1 - binomial.cdf(successes - 1, n, probability);
  expect(Math.min(atMost, atLeast)).toBeGreaterThan(falseAlarm / 2);
}

/** Pearson's goodness of fit; values with fewer than ten expected replicates are pooled with their neighbours. */
export function expectDistribution(counts: Map<number, number>, mass: (value: number) => number, n: number): void {
  const most = Math.max(...counts.keys());
  const cells: { observed: number; expected: number }[] = [{ observed: 0, expected: 0 }];
  let left = n;
  for (let value = 0; value <= most || left > 10; value++) {
    if (cells.at(-1)!.expected >= 10 && left >= 10) cells.push({ observed: 0, expected: 0 });
    const cell = cells.at(-1)!;
    cell.observed += counts.get(value) ?? 0;
    cell.expected += n * mass(value);
    left -= n * mass(value);
  }
  cells.at(-1)!.expected += Math.max(0, left);
  const statistic = cells.reduce((sum, { observed, expected }) => sum + (observed - expected) ** 2 / expected, 0);
  expect(cells.length).toBeGreaterThan(5);
  expect(1 - chisquare.cdf(statistic, cells.length - 1)).toBeGreaterThan(falseAlarm);
}
