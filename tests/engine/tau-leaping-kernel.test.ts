/** The generated leaping kernel against its reference: the same bytes on random networks, at edges, and over pauses. */
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import wabt from 'wabt';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask, KernelName } from '@/engine/ensemble.ts';
import { prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { tauLeapingModule } from '@/engine/kernel/tau-leaping.ts';
import { encodeModule } from '@/engine/kernel/wasm/encode-module.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { chain } from '@tests/factories/large-networks.ts';
import { decayingDimerising, enzyme, epidemic, network, twoStageExpression } from '@tests/factories/networks.ts';
import { networks } from '@tests/factories/random-networks.ts';

interface Outcome {
  events: number[];
  passages: number[];
  failure: { kind: string } | null;
}

async function outcome(task: BatchTask, kernel: KernelName): Promise<Outcome> {
  const { summary, eventsPerReplicate, traces, passageTimes, failure } = await runBatch({ ...task, kernel });
  const compared = {
    summary: Buffer.from(summary.encode()).toString('base64'),
    events: [...eventsPerReplicate],
    traces: traces.map(({ replicate, values }) => ({ replicate, values: [...values] })),
    passages: [...passageTimes],
    failure,
  };
  return compared;
}

async function agreeing(task: BatchTask): Promise<Outcome> {
  const expected = await outcome(task, 'tau-leaping-reference');
  expect(await outcome(task, 'tau-leaping')).toEqual(expected);
  return expected;
}

/** As many of everything as leaping needs. */
const crowded = (model: ResolvedNetwork, times: number): ResolvedNetwork => ({
  ...model,
  species: model.species.map((one) => ({ ...one, initialCount: Math.min(one.initialCount * times, 1e9) })),
});

describe('tau-leaping', () => {
  for (const [tame, changes] of [
    [true, 'none'],
    [false, 'none'],
    [true, 'timed'],
    [false, 'timed'],
  ] as const) {
    const laws = tame ? 'networks whose laws stay positive' : 'networks with any laws, failures included';
    it(`agrees with its reference bit for bit on 250 ${laws}${changes === 'timed' ? ', with timed changes and passages' : ''}`, async () => {
      const seen = { replicates: 0, failures: 0, leaped: 0, passed: 0 };
      await fc.assert(
        fc.asyncProperty(
          networks({ tame, changes }),
          fc.constantFrom(1, 40, 1_000, 200_000),
          fc.constantFrom(0.01, 1, 30),
          fc.constantFrom(0.001, 0.03, 0.5),
          fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }),
          fc.nat(),
          async (model, times, horizon, epsilon, seed, passage) => {
            const task = batchTask(crowded(model, times), {
              horizon,
              epsilon,
              seed: seed.toString(),
              gridIntervals: 5,
              replicateCount: 6,
              keptTraces: 6,
              eventBudgetPerReplicate: 1_500,
              passages:
                changes === 'none'
                  ? []
                  : ([30 * times, 40 * times, 500] as const).flatMap((threshold) =>
                      (['rises_to', 'falls_to'] as const).map((direction) => ({
                        observable: passage % model.observables.length,
                        direction,
                        threshold: direction === 'rises_to' ? threshold + 1 : threshold / 40,
                      })),
                    ),
            });
            const { events, failure, passages } = await agreeing(task);
            seen.replicates += events.length;
            seen.failures += failure ? 1 : 0;
            seen.passed += passages.filter((time) => time > 0 && time < Infinity).length;
            const exact = await runBatch({ ...task, epsilon: undefined, kernel: 'direct-scalar' });
            seen.leaped += events.some((count, i) => count !== exact.eventsPerReplicate[i]) ? 1 : 0;
          },
        ),
        { seed: 20261201, numRuns: 250 },
      );
      // The comparison means something only where replicates complete, some fail, and many leap.
      expect(seen.replicates).toBeGreaterThan(200);
      expect(seen.failures).toBeGreaterThan(10);
      expect(seen.leaped).toBeGreaterThan(12);
      if (changes === 'timed') expect(seen.passed).toBeGreaterThan(10);
    }, 120_000);
  }

  it.each([
    ['the decaying-dimerising set', decayingDimerising(), 10],
    ['an enzyme', enzyme(5_000, 40, 0.001, 0.3, 5), 5],
    ['an epidemic', epidemic(9_000, 30, 2, 1), 20],
    ['two-stage expression', twoStageExpression(400, 0.5, 30, 0.1), 6],
    ['a chain of 60', chain({ species: 60, counts: () => 300 }), 1],
    [
      'high orders',
      network({
        counts: { A: 900, B: 0 },
        reactions: [
          { consumes: { A: 3 }, produces: { B: 1 }, rate: 1e-6 },
          { consumes: { B: 12 }, produces: { A: 36 }, rate: 1e-12 },
        ],
      }),
      3,
    ],
  ] as const)('agrees over pauses between chunks on %s', async (_, model, horizon) => {
    // The first chunk is 2,048 events.
    const task = batchTask(model, { horizon, epsilon: 0.01, gridIntervals: 3, replicateCount: 3, keptTraces: 3 });
    const { failure } = await agreeing(task);
    expect(failure).toBeNull();
  });

  it('is a module that another tool accepts', async () => {
    const { readWasm } = await wabt();
    for (const model of [decayingDimerising(), enzyme(100)]) {
      const bytes = encodeModule(tauLeapingModule(prepareNetwork(model)));
      const read = readWasm(bytes.slice(), { readDebugNames: false });
      read.validate();
      read.destroy();
    }
  });
});
