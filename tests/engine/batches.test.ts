/** What a batch promises: the same results however the replicates are split and merged; budgets, failures, traces. */
import { describe, expect, it } from 'vitest';
import type { BatchResult, BatchTask, KernelName } from '@/engine/ensemble.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { decodeSummary, type Summary } from '@/engine/statistics/summary.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import {
  binary,
  birthDeath,
  immigrationDeath,
  isomerisation,
  network,
  number,
  pureDeath,
  species,
} from '@tests/factories/networks.ts';

const kernels: KernelName[] = ['reference', 'direct-scalar', 'direct-simd', 'composition-rejection'];
const bytes = (summary: { encode(): Uint8Array }): string => Buffer.from(summary.encode()).toString('base64');

/** Two-species network with a named observable that is not whole. */
const withNamedObservable = network({
  counts: { A: 40, B: 5000 },
  reactions: [
    { consumes: { A: 1 }, produces: { B: 2 }, rate: 1 },
    { consumes: { B: 1 }, produces: { A: 1 }, rate: 0.01 },
  ],
  observables: [{ id: 'ratio', expression: binary('divide', species(0), binary('add', species(1), number(1))) }],
});

async function inBatches(task: BatchTask, size: number): Promise<BatchResult[]> {
  const results: BatchResult[] = [];
  for (let done = 0; done < task.replicateCount; done += size)
    results.push(
      await runBatch({
        ...task,
        firstReplicate: task.firstReplicate + done,
        replicateCount: Math.min(size, task.replicateCount - done),
      }),
    );
  return results;
}

function merged(results: BatchResult[], encoded: boolean): Summary {
  const [first, ...rest] = results.map(({ summary }) =>
    encoded ? decodeSummary(summary.encode()) : (summary as Summary),
  );
  for (const summary of rest) first!.merge(summary);
  return first!;
}

describe.each(['direct-simd', 'composition-rejection'] as const)('splitting into batches, by %s', (kernel) => {
  const task = batchTask(withNamedObservable, {
    kernel,
    replicateCount: 1500,
    gridIntervals: 5,
    horizon: 2,
    keptTraces: 9,
  });

  it('gives the same summary bytes, event counts and traces with batches of 1, 7 and 1000', async () => {
    const whole = await runBatch(task);
    for (const size of [1, 7, 1000]) {
      const results = await inBatches(task, size);
      expect(bytes(merged(results, size !== 7))).toBe(bytes(whole.summary));
      expect(results.flatMap(({ eventsPerReplicate }) => [...eventsPerReplicate])).toEqual([
        ...whole.eventsPerReplicate,
      ]);
      expect(results.flatMap(({ traces }) => traces)).toEqual(whole.traces);
    }
  });

  it('does not depend on the order or grouping of merging', async () => {
    const whole = await runBatch(task);
    const results = await inBatches(task, 100);
    expect(bytes(merged([...results].reverse(), true))).toBe(bytes(whole.summary));
    const [left, right] = [merged(results.slice(0, 4), true), merged(results.slice(4), true)];
    right.merge(left);
    expect(bytes(right)).toBe(bytes(whole.summary));
  });

  it('keeps a summary unchanged through encoding', async () => {
    const { summary } = await runBatch(task);
    expect(bytes(decodeSummary(summary.encode()))).toBe(bytes(summary));
  });

  it('gives replicate r the same trace in a small job, a large one and an extension', async () => {
    const small = await runBatch({ ...task, replicateCount: 10 });
    const late = await runBatch({ ...task, firstReplicate: 8, replicateCount: 2 });
    expect(late.traces).toEqual(small.traces.filter(({ replicate }) => replicate >= 8));
  });

  it('gives other results for another seed, point or purpose', async () => {
    const of = async (change: Partial<BatchTask>): Promise<string> =>
      bytes((await runBatch({ ...task, ...change })).summary);
    const all = await Promise.all([of({}), of({ seed: '1' }), of({ point: 1 }), of({ purpose: 'pilot' })]);
    expect(new Set(all).size).toBe(4);
  });
});

describe.each(kernels)('a network that runs dry by %s', (kernel) => {
  it('rests at nothing left: 10 of 2 X -> ∅ fire from 20 (or 21), and not one more', async () => {
    for (const initial of [20, 21]) {
      const pairs = network({ counts: { X: initial }, reactions: [{ consumes: { X: 2 }, rate: 1 }] });
      const { eventsPerReplicate, failure, traces } = await runBatch(
        batchTask(pairs, { kernel, horizon: 1e9, keptTraces: 100 }),
      );
      expect(failure).toBeNull();
      expect(new Set(eventsPerReplicate)).toEqual(new Set([10]));
      for (const { values } of traces) expect(values.at(-1)).toBe(initial - 20);
    }
  });
});

describe.each(kernels)('budgets and failures by %s', (kernel) => {
  it('keeps the longest prefix of replicates that a batch budget pays for', async () => {
    const task = batchTask(immigrationDeath(), { kernel, replicateCount: 50 });
    const { eventsPerReplicate } = await runBatch(task);
    const cost = (count: number): number => eventsPerReplicate.slice(0, count).reduce((sum, events) => sum + events, 0);
    for (const [budget, kept] of [
      [cost(20), 20],
      [cost(20) - 1, 19],
      [cost(50), 50],
      [0, 0],
    ] as const) {
      const result = await runBatch({ ...task, eventBudgetPerBatch: budget });
      expect(result.replicateCount).toBe(kept);
      expect(result.failure).toBeNull();
      expect([...result.eventsPerReplicate]).toEqual([...eventsPerReplicate.slice(0, kept)]);
    }
  });

  it('fails the first replicate that would exceed its own budget and delivers the prefix before it', async () => {
    const task = batchTask(immigrationDeath(), { kernel, replicateCount: 50 });
    const events = [...(await runBatch(task)).eventsPerReplicate];
    const budget = 150;
    const first = events.findIndex((count) => count > budget);
    const result = await runBatch({ ...task, eventBudgetPerReplicate: budget });
    expect(first).toBeGreaterThan(0);
    expect(result.replicateCount).toBe(first);
    expect(result.failure).toMatchObject({ kind: 'event_budget', replicate: first, reaction: null });
    expect(result.summary.replicates).toBe(first);
  });

  it('names reaction, time and state where a propensity goes negative', async () => {
    const law = binary('subtract', number(3), species(0));
    const model = network({ counts: { X: 0 }, reactions: [{ id: 'making', produces: { X: 1 }, rate: law }] });
    const { failure, replicateCount } = await runBatch(batchTask(model, { kernel, horizon: 1e9 }));
    // 3 − X falls to 0 at X = 3 and the state stays: no failure, and exactly three firings.
    expect(failure).toBeNull();
    expect(replicateCount).toBe(100);
    const leaping = network({ counts: { X: 0 }, reactions: [{ id: 'making', produces: { X: 2 }, rate: law }] });
    const failed = await runBatch(batchTask(leaping, { kernel, horizon: 1e9 }));
    expect(failed.failure).toMatchObject({
      kind: 'negative_propensity',
      replicate: 0,
      reaction: 'making',
      state: { X: 4 },
    });
    expect(failed.failure!.time).toBeGreaterThan(0);
    expect(failed.replicateCount).toBe(0);
  });

  it('names a propensity that is not a number, and an infinite one', async () => {
    for (const right of [species(0), number(0)]) {
      const model = network({
        counts: { X: 0, Y: 1 },
        reactions: [
          { id: 'odd', produces: { Y: 1 }, rate: binary('divide', species(right.kind === 'species' ? 0 : 1), right) },
        ],
      });
      const { failure } = await runBatch(batchTask(model, { kernel }));
      expect(failure).toMatchObject({
        kind: 'not_a_number',
        replicate: 0,
        reaction: 'odd',
        time: 0,
        state: { X: 0, Y: 1 },
      });
    }
  });

  it('fails a named observable that is not a number at the grid time where it is', async () => {
    const observables = [{ id: 'share', expression: binary('divide', species(0), species(0)) }];
    const model = network({ counts: { X: 5 }, reactions: [{ consumes: { X: 1 }, rate: 1 }], observables });
    const { failure } = await runBatch(batchTask(model, { kernel, horizon: 1000 }));
    expect(failure).toMatchObject({ kind: 'not_a_number', replicate: 0, reaction: null, time: 100, state: { X: 0 } });
  });

  it('fails on a count above 2^31 − 1 instead of wrapping', async () => {
    const model = network({ counts: { X: 2 ** 31 - 4 }, reactions: [{ id: 'making', produces: { X: 2 }, rate: 1 }] });
    const { failure } = await runBatch(batchTask(model, { kernel, horizon: 100 }));
    expect(failure).toMatchObject({ kind: 'count_overflow', reaction: 'making', state: { X: 2 ** 31 - 2 } });
  });

  it('keeps the state to the horizon when nothing can fire any more', async () => {
    const { traces, eventsPerReplicate } = await runBatch(
      batchTask(pureDeath(5, 3), { kernel, keptTraces: 1, horizon: 1e6 }),
    );
    expect(eventsPerReplicate[0]).toBe(3);
    expect([...traces[0]!.values]).toEqual([3, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0]);
  });

  it('runs a network without reactions and one without events before the horizon', async () => {
    const still = await runBatch(batchTask(network({ counts: { X: 7 }, reactions: [] }), { kernel, keptTraces: 1 }));
    expect([...still.traces[0]!.values]).toEqual(Array(11).fill(7));
    const slow = await runBatch(batchTask(pureDeath(1e-12, 3), { kernel }));
    expect([...slow.eventsPerReplicate]).toEqual(Array(100).fill(0));
  });

  it('keeps a boundary species at its count while it takes part', async () => {
    const model = network({
      counts: { S: 10, P: 0 },
      boundary: ['S'],
      reactions: [{ consumes: { S: 1 }, produces: { P: 1 }, rate: 1 }],
    });
    const { traces } = await runBatch(batchTask(model, { kernel, keptTraces: 1 }));
    expect([...traces[0]!.values.slice(0, 11)]).toEqual(Array(11).fill(10));
    expect(traces[0]!.values[21]).toBeGreaterThan(50);
  });
});

describe('one compiled kernel', () => {
  it('serves points that differ in values only, one after the other and mixed', async () => {
    const points = [birthDeath(0.1, 0.11, 100), birthDeath(0.2, 0.1, 5), birthDeath(0, 1, 50)];
    const alone = await Promise.all(
      points.map((model) => runBatch(batchTask(model, { kernel: 'reference', horizon: 5 }))),
    );
    const mixed = await Promise.all(
      points.map((model) => runBatch(batchTask(model, { kernel: 'direct-scalar', horizon: 5 }))),
    );
    expect(mixed.map(({ summary }) => bytes(summary))).toEqual(alone.map(({ summary }) => bytes(summary)));
  });
});

describe('an impossible task', () => {
  const refused: [string, Partial<BatchTask>][] = [
    ['a horizon of 0', { horizon: 0 }],
    ['a horizon that is not a number', { horizon: NaN }],
    ['no replicates', { replicateCount: 0 }],
    ['a fraction of a replicate', { replicateCount: 1.5 }],
    ['no grid', { gridIntervals: 0 }],
    ['a seed that is no number', { seed: 'x' }],
    ['a negative budget', { eventBudgetPerBatch: -1 }],
    ['a negative point', { point: -1 }],
  ];
  it.each(refused)('is refused: %s', async (_what, change) => {
    await expect(runBatch(batchTask(isomerisation(1, 1, 10), change))).rejects.toThrow(RangeError);
  });
});
