/** Estimators against published and hand-worked numbers. */
import { describe, expect, it } from 'vitest';
import { binMiddle, binOf, binRange, exactBelow } from './bins.ts';
import { momentsOf, ratio } from './moments.ts';
import { addPowers, groupSums, noSums } from './power-sums.ts';
import { quantile, quantileRanks, rankOf } from './quantile.ts';
import { realBinOf, realBinRange } from './real-cells.ts';
import { replicatesForMean, replicatesForProbability } from './replicates-needed.ts';
import { distributionOf } from './distribution-of.ts';
import { momentsAt, statisticsOf } from './statistics-of.ts';
import { decodeSummary, Summary } from './summary.ts';
import { wilsonInterval } from './wilson.ts';

/** A summary of one observable at one grid point. */
function summaryOf(values: number[], kind: 'count' | 'real' = 'count'): Summary {
  const summary = new Summary({ observables: [{ id: 'X', kind }], gridPoints: 1 });
  const group = { replicates: values.length, stride: values.length, events: new Float64Array(values.length) };
  const none = { counts: new Int32Array(0), reals: new Float64Array(0) };
  summary.add({
    ...group,
    ...none,
    ...(kind === 'count' ? { counts: Int32Array.from(values) } : { reals: Float64Array.from(values) }),
  });
  return summary;
}

describe('mean and standard error', () => {
  it('of 3, 5, 7, 7, 38 are 12, sd 14.6287388 and SE 6.54217089 (SE = s/√n; worked by hand)', () => {
    for (const kind of ['count', 'real'] as const) {
      const moments = momentsAt(summaryOf([3, 5, 7, 7, 38], kind), 0, 0);
      expect(moments.mean).toBe(12);
      expect(moments.sd).toBeCloseTo(14.6287388, 6);
      expect(moments.meanStandardError).toBeCloseTo(6.54217089, 7);
    }
  });

  it('survive the variance trap: 1e9 + (4, 7, 13, 16) has variance 30', () => {
    for (const kind of ['count', 'real'] as const)
      expect(
        momentsAt(
          summaryOf(
            [4, 7, 13, 16].map((x) => 1e9 + x),
            kind,
          ),
          0,
          0,
        ).sd,
      ).toBe(Math.sqrt(30));
  });

  it('of one replicate have no spread, and none are NaN throughout', () => {
    expect(momentsAt(summaryOf([5]), 0, 0)).toEqual({
      mean: 5,
      sd: NaN,
      meanStandardError: NaN,
      sdStandardError: NaN,
      fano: NaN,
      fanoStandardError: NaN,
      cv: NaN,
      cvStandardError: NaN,
    });
    const empty = statisticsOf(new Summary({ observables: [{ id: 'X', kind: 'count' }], gridPoints: 1 }), [0]);
    expect(empty.observables[0]!.mean).toEqual([NaN]);
    expect(empty.events).toEqual({ total: 0, meanPerReplicate: NaN, sdPerReplicate: NaN });
  });

  it('give the variance of s² of a Poisson(5) sample of 50 by the fourth moment (Cramér 1946, from memory; value recomputed)', () => {
    // Moments about zero of Poisson(5): 5, 30, 205, 1555; scaled to a sample of n = 50 with exactly these averages.
    const n = 50;
    const sums: [bigint, bigint, bigint, bigint] = [5n * 50n, 30n * 50n, 205n * 50n, 1555n * 50n];
    const { sd, sdStandardError } = momentsOf(n, sums);
    const variance = sd * sd;
    // s² = σ² n/(n−1); the formula with that s² in place of σ²:
    const mu4 = 5 + 3 * 25;
    expect((2 * sd * sdStandardError) ** 2).toBeCloseTo((mu4 - (variance ** 2 * (n - 3)) / (n - 1)) / n, 10);
    // With σ² = 5 itself the published 1.1204082, unlike the normal theory's 1.0204082.
    expect((mu4 - (25 * (n - 3)) / (n - 1)) / n).toBeCloseTo(1.1204082, 7);
  });

  it('are exact for sums far beyond 2^53', () => {
    const values = Int32Array.from({ length: 1000 }, (_, i) => 2 ** 31 - 1 - (i % 7) * 300_000_000);
    const expected = noSums();
    for (const value of values) addPowers(expected, BigInt(value), 1n);
    expect(groupSums(values, 0, 1000)).toEqual(expected);
    const close = Int32Array.from({ length: 1024 }, (_, i) => 2_000_000_000 + ((i * 7919) % 1_000_003));
    const expectedClose = noSums();
    for (const value of close) addPowers(expectedClose, BigInt(value), 1n);
    expect(groupSums(close, 0, 1024)).toEqual(expectedClose);
  });

  it('round a ratio of big integers once', () => {
    expect(ratio(1n, 3n)).toBe(1 / 3);
    expect(ratio(-(10n ** 40n), 3n * 10n ** 39n)).toBe(-10 / 3);
    expect(ratio(3n << 1074n, 2n, 1074)).toBe(1.5);
  });
});

describe('quantiles', () => {
  it('are of type 1: (1, 2, 3, 4, 10) at 0.9 is 10 (Hyndman & Fan 1996, from memory; value recomputed)', () => {
    expect(quantile(summaryOf([1, 2, 3, 4, 10]), 0, 0, '0.9')).toBe(10);
    expect(quantile(summaryOf([1, 2, 3, 4, 10]), 0, 0, '0.5')).toBe(3);
    expect(quantile(summaryOf([-1.5, 2.25, 0, 7], 'real'), 0, 0, '0.25')).toBe(-1.5);
  });

  it('take the rank without rounding error', () => {
    expect(rankOf(20, '0.05')).toBe(1);
    expect(rankOf(100, '0.07')).toBe(7);
    expect(rankOf(10_000_000, '0.95')).toBe(9_500_000);
    expect(() => rankOf(10, '1.5')).toThrow(RangeError);
  });

  it('have order-statistic ranks 40 and 61 for the median of 100, 936 and 964 for 0.95 of 1000 (David & Nagaraja 2003, from memory; values recomputed)', () => {
    const median = quantileRanks(100, 0.5);
    expect(median).toMatchObject({ lower: 40, upper: 61 });
    expect(median.coverage).toBeCloseTo(0.9647998, 7);
    const tail = quantileRanks(1000, 0.95);
    expect(tail).toMatchObject({ lower: 936, upper: 964 });
    expect(tail.coverage).toBeCloseTo(0.958095, 6);
  });

  it('are unbounded where the replicates are too few', () => {
    expect(quantileRanks(10, 0.95)).toMatchObject({ upper: null });
    expect(quantileRanks(10, 0.05)).toMatchObject({ lower: null });
  });
});

describe('Wilson intervals', () => {
  it.each([
    [0, 10, 0, 0.2775328],
    [1, 10, 0.017876213, 0.404150027],
    [3, 1000, 0.001020784, 0.008783014],
    [520, 1000, 0.489017725, 0.550829205],
  ])('of %i in %i is (%f, %f) (Wilson 1927, from memory; values recomputed)', (successes, trials, lower, upper) => {
    const interval = wilsonInterval(successes, trials);
    expect(interval.lower).toBeCloseTo(lower, 8);
    expect(interval.upper).toBeCloseTo(upper, 8);
  });
});

describe('replicates needed', () => {
  it('are 38415 for a mean to 1 % at cv 1 and 38031 for p = 0.01 to 10 % (common practice; values recomputed)', () => {
    expect(replicatesForMean(1, 0.01)).toBe(38415);
    expect(replicatesForProbability(0.01, 0.1)).toBe(38031);
  });
});

describe('bins', () => {
  it('hold each count in exactly one bin of at most 1/2048 of its value', () => {
    let end = 0;
    const wrong: number[] = [];
    for (let bin = 0; end < 2 ** 31; bin++) {
      const { least, width } = binRange(bin);
      const middle = binMiddle(bin);
      const holds = least === end && binOf(least) === bin && binOf(least + width - 1) === bin;
      const narrow = width === 1 || width <= least / 2048;
      if (!holds || !narrow || middle < least || middle >= least + width) wrong.push(bin);
      end = least + width;
    }
    expect(wrong).toEqual([]);
    expect(end).toBe(2 ** 31);
    expect(binRange(exactBelow - 1).width).toBe(1);
  });

  it('of real numbers keep their order, and whole numbers below 4096 apart', () => {
    const values = [-1e9, -4095, -4094, -1, -1e-300, 0, 5e-324, 0.5, 1, 2, 4094, 4095, 1e75];
    const bins = values.map(realBinOf);
    expect([...bins].sort((a, b) => a - b)).toEqual(bins);
    for (let x = 0; x < 4096; x++) expect(realBinRange(realBinOf(x)).edge).toBe(x);
    const { edge, width } = realBinRange(realBinOf(1234567.8));
    expect(edge <= 1234567.8 && 1234567.8 < edge + width && width <= edge / 1024).toBe(true);
  });
});

describe('summaries', () => {
  it('show the distribution, exact below 4096 and in stated widths above', () => {
    expect(distributionOf(summaryOf([3, 3, 5, 10_001]), 'X', 0)).toEqual({
      values: [3, 5, 10_000],
      widths: [1, 1, 4],
      counts: [2, 1, 1],
    });
    expect(distributionOf(summaryOf([0.5, 0.5, -2], 'real'), 'X', 0)).toMatchObject({
      values: [-2, 0.5],
      counts: [1, 2],
    });
  });

  it('merge windows that lie far apart', () => {
    const joined = summaryOf([1, 2]);
    joined.merge(summaryOf([2_000_000_000]));
    joined.merge(summaryOf([4095, 4096]));
    const together = summaryOf([4096, 2, 2_000_000_000, 1, 4095]);
    expect(Buffer.compare(joined.encode(), together.encode())).toBe(0);
    expect(momentsAt(joined, 0, 0).mean).toBe(2_000_008_194 / 5);
  });

  it('refuse to merge with another shape and to be read from damaged bytes', () => {
    const other = new Summary({ observables: [{ id: 'Y', kind: 'count' }], gridPoints: 1 });
    expect(() => summaryOf([1]).merge(other)).toThrow(TypeError);
    const encoded = summaryOf([1, 2, 3]).encode();
    expect(() => decodeSummary(encoded.slice(0, -1))).toThrow(RangeError);
    expect(() => decodeSummary(Uint8Array.from([...encoded, 0]))).toThrow(RangeError);
    expect(() => decodeSummary(new Uint8Array([1, 2]))).toThrow(RangeError);
  });
});
