import { describe, expect, it } from 'vitest';
import { departureFromMeanField } from './departure.ts';

describe('departureFromMeanField', () => {
  it('is the difference, its part of the mean field, and its multiple of the standard error', () => {
    const { difference, relative, inStandardErrors, farthest } = departureFromMeanField({
      mean: [10, 98, 210],
      meanStandardError: [1, 0.5, 20],
      meanField: [10, 100, 200],
    });
    expect(difference).toEqual([0, -2, 10]);
    expect(relative).toEqual([0, -0.02, 0.05]);
    expect(inStandardErrors).toEqual([0, -4, 0.5]);
    expect(farthest).toEqual({ difference: 2, relative: 2, inStandardErrors: 1 });
  });

  it('grows as √n in standard errors and not at all in size', () => {
    // SE = s/√n: common practice.
    const at = (replicates: number) =>
      departureFromMeanField({ mean: [11], meanStandardError: [4 / Math.sqrt(replicates)], meanField: [10] });
    expect(at(10_000).difference).toEqual(at(100).difference);
    expect(at(10_000).inStandardErrors[0]! / at(100).inStandardErrors[0]!).toBeCloseTo(10, 12);
  });

  it('leaves undefined what would divide by 0, and calls no difference none', () => {
    const { relative, inStandardErrors, farthest } = departureFromMeanField({
      mean: [5, 5, 0],
      meanStandardError: [0, 0, 0],
      meanField: [5, 4, 0],
    });
    expect(relative).toEqual([0, 0.25, 0]);
    expect(inStandardErrors).toEqual([0, null, 0]);
    expect(farthest.inStandardErrors).toBe(0);
  });

  it('has nothing to say of observables without a value', () => {
    const { relative, inStandardErrors, farthest } = departureFromMeanField({
      mean: [NaN],
      meanStandardError: [NaN],
      meanField: [NaN],
    });
    expect([relative, inStandardErrors]).toEqual([[null], [null]]);
    expect(farthest).toEqual({ difference: null, relative: null, inStandardErrors: null });
  });

  it('refuses arrays of different lengths', () => {
    expect(() => departureFromMeanField({ mean: [1], meanStandardError: [1], meanField: [1, 2] })).toThrow(RangeError);
  });
});
