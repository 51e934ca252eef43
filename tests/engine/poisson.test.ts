/** The Poisson sampler of tau-leaping against @stdlib's law. False-alarm rate: statistical-checks.ts. */
import poissonLaw from '@stdlib/stats-base-dists-poisson';
import { describe, expect, it } from 'vitest';
import { logPoissonProbability } from '@/engine/leaping/poisson-probability.ts';
import { poisson } from '@/engine/leaping/poisson.ts';
import { splitMix64 } from '@/engine/random/splitmix64.ts';
import { uniform52, Xoshiro256 } from '@/engine/random/xoshiro256.ts';
import { expectDistribution, expectMean, expectShare, expectVariance } from './statistical-checks.ts';

const uniformFrom = (seed: bigint): (() => number) => {
  const generator = new Xoshiro256(splitMix64(seed, 4));
  return () => uniform52(generator.next());
};

describe('poisson', () => {
  it.each([1, 9.9, 10, 50, 1000])('of mean %d has the law of @stdlib', (mean) => {
    const n = 40_000;
    const uniform = uniformFrom(20261201n + BigInt(Math.round(10 * mean)));
    const counts = new Map<number, number>();
    for (let i = 0; i < n; i++) {
      const drawn = poisson(mean, uniform);
      counts.set(drawn, (counts.get(drawn) ?? 0) + 1);
    }
    expectDistribution(counts, (k) => poissonLaw.pmf(k, mean), n);
  });

  it('of mean 0.1 has the shares of @stdlib’s law', () => {
    const n = 400_000;
    const uniform = uniformFrom(1n);
    const counts = [0, 0, 0, 0, 0, 0, 0, 0, 0, 0];
    for (let i = 0; i < n; i++) counts[poisson(0.1, uniform)]!++;
    for (const k of [0, 1, 2, 3, 4]) expectShare(counts[k]!, poissonLaw.pmf(k, 0.1), n);
  });

  it.each([1e6, 1e12, 2 ** 50])('of mean %d has that mean and variance', (mean) => {
    const n = 20_000;
    const uniform = uniformFrom(7n);
    const departures = Array.from({ length: n }, () => poisson(mean, uniform) - mean);
    expectMean(departures.reduce((a, b) => a + b, 0) / n, 0, Math.sqrt(mean), n);
    expectVariance(departures.reduce((sum, departure) => sum + departure ** 2, 0) / n, mean, 3 + 1 / mean, n);
  });

  it('gives whole numbers from 0, at the ends of the uniform too', () => {
    const most = 1 - 2 ** -52;
    for (const mean of [1e-300, 1e-18, 0.1, 9.99, 10, 1000, 2 ** 50])
      for (const sequence of [
        [0, 0.5],
        [0, 0, 0.5, 0.5],
        [most, 0, 0.5, 0.5],
        [most, most, 0.5, 0.5],
        [2 ** -52, most, 0.5, 0.5],
      ]) {
        let at = 0;
        const drawn = poisson(mean, () => sequence[Math.min(at++, sequence.length - 1)]!);
        expect(Number.isInteger(drawn)).toBe(true);
        expect(drawn).toBeGreaterThanOrEqual(0);
      }
  });
});

describe('logPoissonProbability', () => {
  it('agrees with @stdlib to its accuracy from mean 10 to 1000', () => {
    for (const mean of [10, 10.5, 40, 333.3, 1000])
      for (const k of [0, 1, 5, 9, 15, 16, 17, 30, 100, 333, 900, 1000, 1100, 1500])
        expect(logPoissonProbability(k, mean) / poissonLaw.logpmf(k, mean)).toBeCloseTo(1, 10);
  });

  it('keeps its digits at large means, where ln P(μ; μ) = −½ ln 2πμ − 1/12μ + … (Stirling)', () => {
    for (const mean of [1e6, 1e9, 1e12, 2 ** 50])
      expect(logPoissonProbability(mean, mean)).toBeCloseTo(-0.5 * Math.log(2 * Math.PI * mean) - 1 / (12 * mean), 13);
  });

  it('has the deviance of one standard deviation, ½ − d/6 + d²/12 − …, with d = μ^−½', () => {
    for (const root of [1e3, 1e6, 2 ** 24]) {
      const [mean, d] = [root * root, 1 / root];
      const k = mean + root;
      const expected = -0.5 * Math.log(2 * Math.PI * k) - 1 / (12 * k) - (0.5 - d / 6 + (d * d) / 12);
      expect(logPoissonProbability(k, mean)).toBeCloseTo(expected, 8);
    }
  });
});
