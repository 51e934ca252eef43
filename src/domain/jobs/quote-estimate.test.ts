import studentT from '@stdlib/stats-base-dists-t';
import { describe, expect, it } from 'vitest';
import { leastCap, predictEvents, priceEvents, secondsByLane, summarisePilot } from './quote-estimate.ts';
import { studentQuantile } from './student-quantile.ts';

describe('studentQuantile', () => {
  // Source: @stdlib/stats-base-dists-t, an independent implementation.
  it.each([1, 2, 3, 4, 5, 9, 29, 199, 1_000])('agrees with an independent implementation at %i degrees', (degrees) => {
    for (const p of [0.95, 0.975, 0.025])
      expect(Math.abs(studentQuantile(p, degrees) / studentT.quantile(p, degrees) - 1)).toBeLessThan(0.004);
  });

  it('agrees with the printed table: t(0.975) = 12.706, 4.303, 2.262, 1.960 at 1, 2, 9 and many degrees', () => {
    // Source: the usual table of Student's t, from memory; values as printed.
    expect(studentQuantile(0.975, 1)).toBeCloseTo(12.706, 3);
    expect(studentQuantile(0.975, 2)).toBeCloseTo(4.303, 3);
    expect(studentQuantile(0.975, 9)).toBeCloseTo(2.262, 3);
    expect(studentQuantile(0.975, 1e9)).toBeCloseTo(1.96, 3);
  });
});

describe('predictEvents', () => {
  it('is n·mean ± t·s·√(1/m + 1/n)·n, worked by hand for five pilot replicates', () => {
    // Events 8, 10, 12, 9, 11: mean 10, s = √2.5; t(0.975; 4) = 2.776 (printed table, from memory).
    const pilot = summarisePilot({ eventsPerReplicate: [8, 10, 12, 9, 11], cutReplicateEvents: null });
    expect(pilot).toMatchObject({ replicates: 5, mean: 10, oneSided: false });
    const range = predictEvents(pilot, 100);
    const half = 2.776 * Math.sqrt(2.5) * Math.sqrt(1 / 5 + 1 / 100) * 100;
    expect(range.expected).toBe(1_000);
    expect(range.high).toBeCloseTo(1_000 + half, -1);
    expect(range.low).toBeCloseTo(1_000 - half, -1);
  });

  it('never predicts fewer than no events', () => {
    const pilot = summarisePilot({ eventsPerReplicate: [0, 0, 0, 100], cutReplicateEvents: null });
    expect(predictEvents(pilot, 1).low).toBe(0);
  });

  it('counts a replicate that the budget cut with what it had, and says that the upper end is no bound', () => {
    const pilot = summarisePilot({ eventsPerReplicate: [10, 20], cutReplicateEvents: 90 });
    expect(pilot).toMatchObject({ replicates: 3, mean: 40, oneSided: true });
  });

  it('covers the events of the job about 95 times in 100', () => {
    // Source: the definition of a 95 % prediction interval; normal events, 2,000 jobs, fixed draws, bound at z = 3.89.
    let state = 88_172_645;
    const uniform = () => {
      state ^= state << 13;
      state ^= state >>> 17;
      state ^= state << 5;
      return ((state >>> 0) + 0.5) / 2 ** 32;
    };
    const normal = () => 1_000 + 100 * Math.sqrt(-2 * Math.log(uniform())) * Math.cos(2 * Math.PI * uniform());
    const jobs = 2_000;
    let covered = 0;
    for (let job = 0; job < jobs; job++) {
      const pilot = summarisePilot({
        eventsPerReplicate: Array.from({ length: 20 }, normal),
        cutReplicateEvents: null,
      });
      const { low, high } = predictEvents(pilot, 50);
      const total = Array.from({ length: 50 }, normal).reduce((sum, value) => sum + value, 0);
      if (total >= low && total <= high) covered++;
    }
    expect(Math.abs(covered / jobs - 0.95)).toBeLessThan(3.89 * Math.sqrt((0.95 * 0.05) / jobs));
  });
});

describe('priceEvents', () => {
  it('rounds the range outwards, so that the upper end pays for what it says', () => {
    const price = priceEvents({ expected: 10.4, low: 9.9, high: 10.1 }, 1_500_000);
    expect(price).toEqual({ expected: 15, low: 13, high: 17 });
  });
});

describe('leastCap', () => {
  it('is the upper estimate of 30 replicates, or of all when there are fewer', () => {
    const pilot = { replicates: 200, mean: 1_000, sd: 0, oneSided: false };
    const options = { pilot, fewest: 30, microcreditsPerMillionEvents: 1_000_000 };
    expect(leastCap({ ...options, replicates: 1_000 })).toBe(30_001);
    expect(leastCap({ ...options, replicates: 7 })).toBe(7_001);
  });
});

describe('secondsByLane', () => {
  it('waits for the lanes before it, and for half of its own', () => {
    const load = { express: 10, steady: 20, overnight: 100 };
    expect(secondsByLane({ workSeconds: 4, load, workers: 2 })).toEqual({ express: 4.5, steady: 12, overnight: 42 });
  });
});
