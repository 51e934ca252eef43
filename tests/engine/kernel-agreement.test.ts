/** The generated kernels against the readable reference: the same bytes on randomly generated networks. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { BatchTask, KernelName } from '@/engine/ensemble.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { networks } from '@tests/factories/random-networks.ts';

/** Everything of a batch's answer that is part of results. */
async function outcome(task: BatchTask, kernel: KernelName): Promise<unknown> {
  const { summary, eventsPerReplicate, traces, passageTimes, failure } = await runBatch({ ...task, kernel });
  return {
    summary: Buffer.from(summary.encode()).toString('base64'),
    events: [...eventsPerReplicate],
    traces: traces.map(({ replicate, values }) => ({ replicate, values: [...values] })),
    passages: [...passageTimes],
    failure,
  };
}

const passages = fc.record({
  observable: fc.nat(20),
  direction: fc.constantFrom('rises_to' as const, 'falls_to' as const),
  threshold: fc.constantFrom(0, 1, 3, 20, 40, 1000, 90_000.5),
});
/** Each generated kernel with the reference of its method. */
const generatedKernels: [KernelName, KernelName][] = [
  ['direct-scalar', 'reference'],
  ['direct-simd', 'reference'],
  ['composition-rejection', 'composition-rejection-reference'],
];

describe.each(generatedKernels)('%s', (kernel, reference) => {
  for (const [tame, changes] of [
    [true, 'none'],
    [false, 'none'],
    [true, 'timed'],
    [true, 'any'],
    [false, 'any'],
  ] as const) {
    const laws = tame ? 'networks whose laws stay positive' : 'networks with any laws, failures included';
    const extras = { none: '', timed: ', with timed changes', any: ', with changes of both kinds and first passages' };
    it(`agrees with the reference bit for bit on 300 ${laws}${extras[changes]}`, async () => {
      let replicates = 0;
      let failures = 0;
      let passed = 0;
      const agrees = fc.asyncProperty(
        networks({ tame, changes }),
        fc.array(passages, { maxLength: changes === 'any' ? 3 : 0 }),
        fc.constantFrom(0.01, 1, 30),
        fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }),
        async (network, wished, horizon, seed) => {
          const task = batchTask(network, {
            horizon,
            seed: seed.toString(),
            gridIntervals: 7,
            replicateCount: 9,
            keptTraces: 2,
            eventBudgetPerReplicate: 120,
            passages: wished.map((passage) => ({
              ...passage,
              observable: passage.observable % network.observables.length,
            })),
          });
          const expected = await outcome(task, reference);
          expect(await outcome(task, kernel)).toEqual(expected);
          replicates += (expected as { events: number[] }).events.length;
          failures += (expected as { failure: unknown }).failure ? 1 : 0;
          passed += (expected as { passages: number[] }).passages.filter((time) => time > 0 && time < Infinity).length;
        },
      );
      await fc.assert(agrees, { seed: 20261201, numRuns: 300 });
      // The comparison means something only where replicates complete, and where some fail.
      expect(replicates).toBeGreaterThan(200);
      expect(failures).toBeGreaterThan(10);
      if (changes === 'any') expect(passed).toBeGreaterThan(50);
    });
  }
});
