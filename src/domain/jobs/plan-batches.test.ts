import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { limits } from '../limits.ts';
import { planBatches, replicatesPerBatch, unitsOf, unitsPerBatch } from './plan-batches.ts';

const inputs = fc.record({
  firstReplicate: fc.nat(1_000_000),
  replicates: fc.integer({ min: 1, max: 200_000 }),
  eventsPerReplicate: fc.double({ min: 0, max: 1e12, noNaN: true }),
  gridPoints: fc.integer({ min: 2, max: 10_001 }),
  observables: fc.integer({ min: 1, max: 100 }),
  points: fc.integer({ min: 1, max: limits.sweepPoints }),
  firstOrdinal: fc.nat(1_000),
});

describe('planBatches', () => {
  it('covers every replicate once, in order and without gaps', () => {
    fc.assert(
      fc.property(inputs, (options) => {
        let next = options.firstReplicate;
        const inOrder = planBatches(options).every((batch, i) => {
          const fits = batch.firstReplicate === next && batch.ordinal === options.firstOrdinal + i;
          next += batch.replicateCount;
          return fits && batch.replicateCount > 0;
        });
        expect(inOrder).toBe(true);
        expect(next).toBe(options.firstReplicate + options.replicates);
      }),
      { seed: 1, numRuns: 200 },
    );
  });

  it('keeps the number of batches, and the replicates and work in each, bounded', () => {
    fc.assert(
      fc.property(inputs, (options) => {
        const batches = planBatches(options);
        expect(batches.length).toBeLessThanOrEqual(limits.batchesPerJob);
        const least = Math.ceil(options.replicates / limits.batchesPerJob);
        const largest = Math.max(...batches.map(({ replicateCount }) => replicateCount));
        expect(largest * options.points).toBeLessThanOrEqual(replicatesPerBatch);
        if (largest > least) expect(largest * unitsOf(options)).toBeLessThanOrEqual(unitsPerBatch);
      }),
      { seed: 2, numRuns: 200 },
    );
  });

  it('cuts a middling job into several batches, and a tiny one into one', () => {
    const middling = {
      firstReplicate: 0,
      replicates: 10_000,
      eventsPerReplicate: 5_000,
      gridPoints: 101,
      observables: 2,
    };
    expect(planBatches(middling).length).toBeGreaterThanOrEqual(8);
    expect(planBatches({ ...middling, replicates: 10 })).toHaveLength(1);
  });

  it('plans the largest job there may be', () => {
    const batches = planBatches({
      firstReplicate: 0,
      replicates: limits.replicatesPerJob,
      eventsPerReplicate: 1e9,
      gridPoints: 2,
      observables: 1,
    });
    expect(batches.length).toBeLessThanOrEqual(limits.batchesPerJob);
    expect(batches.at(-1)!.firstReplicate + batches.at(-1)!.replicateCount).toBe(limits.replicatesPerJob);
  });
});
