/** The side-by-side of exact and leaped pilots. */
import { describe, expect, it } from 'vitest';
import { compareMeans, type MethodPilot } from './method-comparison.ts';

const pilot = (replicates: number, mean: number, sd: number): MethodPilot => ({
  replicates,
  atHorizon: [{ id: 'X', mean, sd }],
});

describe('compareMeans', () => {
  it('gives Welch’s interval: means 10 and 12, sds 3 and 5, 20 and 30 replicates', () => {
    // Standard error √(9/20 + 25/30) = 1.132843; degrees of freedom 1.283333² / (0.45²/19 + 0.833333²/29) = 47.56, so 47;
    // t(0.975; 47) = 2.011741 (tables). Half width 2.278987.
    const [one] = compareMeans(pilot(20, 10, 3), pilot(30, 12, 5));
    expect(one).toMatchObject({ id: 'X', exactMean: 10, leapMean: 12, difference: 2 });
    expect(one!.interval!.low).toBeCloseTo(2 - 2.278987, 3);
    expect(one!.interval!.high).toBeCloseTo(2 + 2.278987, 3);
  });

  it('has no interval from one replicate, and none of width where nothing varies', () => {
    expect(compareMeans(pilot(1, 10, 0), pilot(30, 12, 5))[0]!.interval).toBeNull();
    expect(compareMeans(pilot(30, 10, 0), pilot(30, 12, 0))[0]!.interval).toEqual({ low: 2, high: 2 });
  });

  it('leaves out what only one of them has', () => {
    expect(compareMeans(pilot(3, 1, 1), { replicates: 3, atHorizon: [] })).toEqual([]);
  });
});
