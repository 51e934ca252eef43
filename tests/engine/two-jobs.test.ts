/**
 * What two jobs' results say of each other, against distances worked by hand and against coverage counted over many pairs.
 * Citations are from memory. False-alarm rate of the whole file below 0.001: seeds are fixed, each coverage bound is the exact
 * binomial tail at 0.0002.
 */
import binomial from '@stdlib/stats-base-dists-binomial';
import poisson from '@stdlib/stats-base-dists-poisson';
import { describe, expect, it } from 'vitest';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { Distribution } from '@/engine/ensemble.ts';
import { splitMix64 } from '@/engine/random/splitmix64.ts';
import { Xoshiro128 } from '@/engine/random/xoshiro128.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { differenceOfMeans, differenceOfSds } from '@/engine/statistics/difference.ts';
import { distributionOf } from '@/engine/statistics/distribution-of.ts';
import { ksDistance } from '@/engine/statistics/ks-distance.ts';
import { asSummary, momentsAt } from '@/engine/statistics/statistics-of.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { immigrationDeath } from '@tests/factories/networks.ts';

const sample = (values: number[], counts: number[]): Distribution => ({
  values,
  counts,
  widths: values.map(() => 1),
});

async function summaryOf(network: ResolvedNetwork, seed: string, replicateCount: number) {
  const { summary } = await runBatch(batchTask(network, { seed, replicateCount, gridIntervals: 1 }));
  return asSummary(summary);
}

/** Immigration-death from 0 at time 10 is Poisson of this mean per unit of immigration (Bailey 1964 ch. 8). */
const meanPerImmigration = 6.32120558829;

/** As many successes as this or fewer happen with probability 0.0002 at most if each trial succeeds with 0.95. */
const leastCovered = (trials: number): number => binomial.quantile(0.0002, trials, 0.95);

it('xoshiro128++ gives the first outputs that its authors’ program and its ports give from the state 1, 2, 3, 4', () => {
  const generator = new Xoshiro128([1n | (2n << 32n), 3n | (4n << 32n)]);
  const published = [641, 1573767, 3222811527, 3517856514, 836907274, 4247214768, 3867114732, 1355841295];
  expect(published.map(() => generator.next())).toEqual(published);
});

describe('ksDistance', () => {
  it('is the largest gap of the distribution functions, worked by hand with ties', () => {
    // At 1: 0.5 − 0.25; at 2: 0.75 − 0.25 = 0.5; at 3: 1 − 0.75.
    const first = sample([1, 2, 3], [2, 1, 1]);
    const second = sample([1, 3, 5], [1, 2, 1]);
    expect(ksDistance(first, second, 1n).distance).toBe(0.5);
    expect(ksDistance(second, first, 1n).distance).toBe(0.5);
  });

  it('is 1 where the jobs share no value and lie apart, 0 where all replicates agree, both without error', () => {
    expect(ksDistance(sample([1], [50]), sample([9], [80]), 1n)).toEqual({ distance: 1, lower: 1, upper: 1 });
    expect(ksDistance(sample([4], [50]), sample([4], [80]), 1n)).toEqual({ distance: 0, lower: 0, upper: 0 });
  });

  it('gives the same interval for the same seed, another for another', () => {
    const [first, second] = [sample([1, 2, 3, 4], [20, 30, 30, 20]), sample([1, 2, 3, 4], [10, 30, 30, 30])];
    expect(ksDistance(first, second, 7n)).toEqual(ksDistance(first, second, 7n));
    const margins = splitMix64(1n, 8).map((seed) => ksDistance(first, second, seed).upper);
    expect(new Set(margins).size).toBeGreaterThan(1);
  });

  it('scales resamples that are drawn smaller: 20,000 replicates each bound about as the limit law says', () => {
    // A fair coin: F̂ − Ĝ at 0 is nearly normal of variance 1/4 · 2/n, so the margin is 1.96 · √(1/(2n)) = 0.0098. The 95 % point
    // of 399 resamples has a relative standard error of 5.3 % (√(0.05 · 0.95 / 399) over twice the normal density at 1.96,
    // over 1.96); 20 % is nearly four of them.
    const coin = sample([0, 1], [10_000, 10_000]);
    const { upper } = ksDistance(coin, coin, 3n);
    expect(Math.abs(upper / 0.0098 - 1)).toBeLessThan(0.2);
  });

  it('refuses a job without replicates', () => {
    expect(() => ksDistance(sample([], []), sample([1], [1]), 1n)).toThrow(RangeError);
  });

  it.each([
    ['of one law', 0.5],
    ['of two laws', 0.7],
  ])('covers the true distance of tied counts %s in at least the nominal share of pairs', async (_, immigration) => {
    const [firstMean, secondMean] = [0.5 * meanPerImmigration, immigration * meanPerImmigration];
    let truth = 0;
    for (let value = 0; value < 40; value++)
      truth = Math.max(truth, Math.abs(poisson.cdf(value, firstMean) - poisson.cdf(value, secondMean)));
    const pairs = 200;
    let covered = 0;
    for (let pair = 0; pair < pairs; pair++) {
      const first = distributionOf(await summaryOf(immigrationDeath(0.5), `${10_000 + pair}`, 80), 'X', 1);
      const second = distributionOf(await summaryOf(immigrationDeath(immigration), `${20_000 + pair}`, 120), 'X', 1);
      const { lower, upper } = ksDistance(first, second, BigInt(pair));
      if (lower <= truth && truth <= upper) covered++;
    }
    expect(covered).toBeGreaterThan(leastCovered(pairs));
  });
});

describe('differences of two jobs', () => {
  it('add standard errors in squares: 3 and 4 make 5, by hand', () => {
    const first = { mean: 10, meanStandardError: 3, sd: 8, sdStandardError: 0.3 };
    const second = { mean: 7, meanStandardError: 4, sd: 6, sdStandardError: 0.4 };
    expect(differenceOfMeans(first, second)).toMatchObject({ value: 3, standardError: 5 });
    expect(differenceOfMeans(first, second).lower).toBeCloseTo(3 - 9.79982, 5);
    expect(differenceOfSds(first, second).standardError).toBeCloseTo(0.5, 12);
    expect(differenceOfSds(first, second).upper).toBeCloseTo(2 + 0.979982, 6);
  });

  it('cover the true differences of two Poisson laws in about the nominal share of 400 pairs', async () => {
    const [means, sds] = [
      (10 - 8) * meanPerImmigration,
      Math.sqrt(10 * meanPerImmigration) - Math.sqrt(8 * meanPerImmigration),
    ];
    const pairs = 400;
    let [meansCovered, sdsCovered] = [0, 0];
    for (let pair = 0; pair < pairs; pair++) {
      const first = momentsAt(await summaryOf(immigrationDeath(10), `${30_000 + pair}`, 400), 0, 1);
      const second = momentsAt(await summaryOf(immigrationDeath(8), `${40_000 + pair}`, 200), 0, 1);
      const [ofMeans, ofSds] = [differenceOfMeans(first, second), differenceOfSds(first, second)];
      if (ofMeans.lower <= means && means <= ofMeans.upper) meansCovered++;
      if (ofSds.lower <= sds && sds <= ofSds.upper) sdsCovered++;
    }
    for (const covered of [meansCovered, sdsCovered]) {
      expect(covered).toBeGreaterThan(leastCovered(pairs));
      expect(covered).toBeLessThan(binomial.quantile(0.9998, pairs, 0.95));
    }
  });
});
