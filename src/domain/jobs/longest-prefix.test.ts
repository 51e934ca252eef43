import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { chargeMicrocredits } from '../pricing/price-of.ts';
import { chargeOfJoining, eventsWithinCap, longestPrefix } from './longest-prefix.ts';

const rates = fc.integer({ min: 1, max: 50_000_000 });
const eventLists = fc.array(fc.integer({ min: 0, max: 10_000_000 }), { maxLength: 60 });

describe('longestPrefix', () => {
  it('fits the cap, and one more replicate would not', () => {
    fc.assert(
      fc.property(eventLists, rates, fc.nat(1_000_000_000), fc.nat(1_000_000), (events, rate, cap, before) => {
        fc.pre(chargeMicrocredits(before, rate) <= cap);
        const options = {
          eventsPerReplicate: events,
          segmentEvents: before,
          capMicrocredits: cap,
          microcreditsPerMillionEvents: rate,
        };
        const prefix = longestPrefix(options);
        const total = events.slice(0, prefix.replicates).reduce((sum, value) => sum + value, before);
        expect(prefix.events).toBe(total - before);
        expect(chargeMicrocredits(total, rate)).toBeLessThanOrEqual(cap);
        if (prefix.replicates < events.length)
          expect(chargeMicrocredits(total + events[prefix.replicates]!, rate)).toBeGreaterThan(cap);
      }),
      { seed: 3, numRuns: 500 },
    );
  });

  it('does not skip a replicate that does not fit for a cheaper one after it', () => {
    const prefix = longestPrefix({
      eventsPerReplicate: [40, 100, 1, 1],
      segmentEvents: 0,
      capMicrocredits: 50,
      microcreditsPerMillionEvents: 1_000_000,
    });
    expect(prefix).toEqual({ replicates: 1, events: 40 });
  });

  it('counts exactly where doubles would round', () => {
    const huge = 2 ** 52;
    const cap = 2 ** 53 - 1;
    const options = { segmentEvents: huge, capMicrocredits: cap, microcreditsPerMillionEvents: 1_000_000 };
    expect(longestPrefix({ ...options, eventsPerReplicate: [huge - 1] }).replicates).toBe(1);
    expect(longestPrefix({ ...options, eventsPerReplicate: [huge] }).replicates).toBe(0);
  });
});

describe('eventsWithinCap', () => {
  it('is the most events whose charge is within the cap', () => {
    fc.assert(
      fc.property(rates, fc.nat(), (rate, cap) => {
        const most = eventsWithinCap(cap, rate)!;
        expect(chargeMicrocredits(most, rate)).toBeLessThanOrEqual(cap);
        expect(chargeMicrocredits(most + 1n, rate)).toBeGreaterThan(cap);
      }),
      { seed: 4, numRuns: 500 },
    );
  });

  it('is unbounded where events cost nothing', () => {
    expect(eventsWithinCap(0, 0)).toBeNull();
  });
});

describe('chargeOfJoining', () => {
  it('adds up to the charge of all events, however they are cut into batches', () => {
    fc.assert(
      fc.property(eventLists, rates, (batches, rate) => {
        let segmentEvents = 0;
        let charged = 0;
        for (const events of batches) {
          charged += chargeOfJoining({ segmentEvents, events, microcreditsPerMillionEvents: rate });
          segmentEvents += events;
        }
        expect(charged).toBe(chargeMicrocredits(segmentEvents, rate));
      }),
      { seed: 5, numRuns: 500 },
    );
  });
});

/**
 * Given that n replicates fit, they are exchangeable, so a mean over them has the expectation of one of them given n;
 * summed over n, that of a single replicate that fits under the cap. The derivation is one line, from memory; the law of
 * costs below is chosen so that its mean is known exactly.
 */
describe('a sample cut by the cap', () => {
  const uniforms = (seed: number) => {
    let state = seed;
    // xorshift32 (Marsaglia 2003, from memory), so that the draws are fixed.
    return () => {
      state ^= state << 13;
      state ^= state >>> 17;
      state ^= state << 5;
      return state >>> 0;
    };
  };
  /** Heavily skewed: 2^k with probability 2^−(k+1) for k = 0 … 8, else 512. Mean 9/2 + 1 = 5.5, sd about 27. */
  const mean = 5.5;
  const cost = (bits: number) => 2 ** Math.min(9, Math.clz32(bits));
  const cap = 600;
  const jobs = 5_000;

  /** z of the average, over jobs, of the mean of what `deliver` lets through of the costs. */
  const zOf = (deliver: (costs: number[]) => number[]): number => {
    const next = uniforms(2_463_534_242);
    const means = Array.from({ length: jobs }, () => {
      const delivered = deliver(Array.from({ length: cap + 1 }, () => cost(next())));
      return delivered.reduce((sum, value) => sum + value, 0) / delivered.length;
    });
    const average = means.reduce((sum, value) => sum + value, 0) / jobs;
    const variance = means.reduce((sum, value) => sum + (value - average) ** 2, 0) / (jobs - 1);
    return (average - mean) / Math.sqrt(variance / jobs);
  };

  it('has an unbiased mean, even of the cost itself (two-sided, false alarm once in 10,000)', () => {
    const z = zOf((costs) => {
      const options = { segmentEvents: 0, capMicrocredits: cap, microcreditsPerMillionEvents: 1_000_000 };
      const { replicates } = longestPrefix({ ...options, eventsPerReplicate: costs });
      return costs.slice(0, replicates);
    });
    expect(Math.abs(z)).toBeLessThan(3.89);
  });

  it('would be biased if cheaper replicates after the first that does not fit were kept', () => {
    const z = zOf((costs) => {
      let left = cap;
      return costs.filter((value) => value <= left && ((left -= value), true));
    });
    expect(z).toBeLessThan(-10);
  });
});
