/**
 * The kernel for large networks: bit for bit against its reference on networks large enough for shared lists and many pages, in
 * distribution against published laws and the direct method, and at its edges. False-alarm rate: statistical-checks.ts. What every
 * kernel must do (budgets, failures, changes) is in batches.test.ts, changes.test.ts and kernel-agreement.test.ts.
 */
import binomial from '@stdlib/stats-base-dists-binomial';
import poisson from '@stdlib/stats-base-dists-poisson';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import wabt from 'wabt';
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { chooseKernel, largestDenseNetwork, largestSimdNetwork } from '@/engine/choose-kernel.ts';
import type { BatchTask } from '@/engine/ensemble.ts';
import { roundedPropensity, roundingBits } from '@/engine/exact/composition-rejection.ts';
import { compositionRejectionModule } from '@/engine/kernel/composition-rejection.ts';
import { dependencyGraph } from '@/engine/kernel/dependency-graph.ts';
import { directScalarModule } from '@/engine/kernel/direct-scalar.ts';
import { groupTables } from '@/engine/kernel/group-layout.ts';
import { prepareNetwork } from '@/engine/kernel/prepare-network.ts';
import { encodeModule } from '@/engine/kernel/wasm/encode-module.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import { chain, steadyChain } from '@tests/factories/large-networks.ts';
import {
  binary,
  birthDeath,
  immigrationDeath,
  network,
  number,
  parameter,
  species,
  type ReactionSketch,
} from '@tests/factories/networks.ts';
import { bound, expectDistribution, expectMean, expectShare, expectVariance } from './statistical-checks.ts';

const kernel = 'composition-rejection';

/** A network with a hub that everything reads, rules upon rules, and orders up to 11. */
const largeNetwork: fc.Arbitrary<ResolvedNetwork> = fc
  .record({
    species: fc.integer({ min: 20, max: 60 }),
    steps: fc.array(
      fc.record({
        from: fc.nat(),
        to: fc.nat(),
        kind: fc.nat(11),
        rate: fc.constantFrom(1e-9, 1e-4, 0.01, 0.3, 1, 2, 1e3),
      }),
      { minLength: 90, maxLength: 300 },
    ),
    counts: fc.array(fc.integer({ min: 0, max: 40 }), { minLength: 60, maxLength: 60 }),
  })
  .map((drawn) => {
    const id = (index: number): string => `S${index % drawn.species}`;
    const counts = Object.fromEntries(drawn.counts.slice(0, drawn.species).map((count, i) => [`S${i}`, count]));
    const reactions = drawn.steps.map(({ from, to, kind, rate }): ReactionSketch => {
      const [source, target] = [id(from), id(to)];
      const number_ = from % drawn.species;
      if (kind === 0) return { produces: { [target]: 1 }, rate };
      if (kind === 1) return { consumes: { [source]: 2 }, produces: { [target]: 1 }, rate };
      if (kind === 2) return { consumes: { [source]: 3 }, produces: { [source]: 1, [target]: 2 }, rate };
      if (kind === 3) return { consumes: { [source]: 11 }, produces: { [target]: 11 }, rate };
      // Laws that read the hub S0, alone or through a rule.
      if (kind <= 6)
        return {
          consumes: { [source]: 1 },
          produces: { [target]: 1 },
          rate: binary('divide', species(number_), binary('add', species(0), number(3))),
        };
      if (kind === 7)
        return {
          consumes: { [source]: 1 },
          produces: { S0: 1 },
          rate: binary('multiply', species(number_), parameter(1)),
        };
      return { consumes: { [source]: 1 }, produces: { [target]: 1 }, rate };
    });
    return network({
      counts,
      reactions,
      parameters: { half: 0, level: 0 },
      assignments: [
        { parameter: 0, expression: binary('divide', species(0), number(2)) },
        { parameter: 1, expression: binary('divide', number(1), binary('add', parameter(0), number(1))) },
      ],
      observables: [{ id: 'level', expression: parameter(1) }],
    });
  });

async function outcome(task: BatchTask): Promise<unknown> {
  const { summary, eventsPerReplicate, traces, failure } = await runBatch(task);
  return {
    summary: Buffer.from(summary.encode()).toString('base64'),
    events: [...eventsPerReplicate],
    traces: traces.map(({ values }) => [...values]),
    failure,
  };
}

describe('against its reference', () => {
  it('agrees bit for bit on 40 networks of 90 to 300 reactions, over pauses between chunks', async () => {
    let firings = 0;
    let longest = 0;
    await fc.assert(
      fc.asyncProperty(largeNetwork, fc.bigInt({ min: 0n, max: 2n ** 64n - 1n }), async (model, seed) => {
        const given = {
          horizon: 4,
          gridIntervals: 5,
          replicateCount: 2,
          keptTraces: 2,
          eventBudgetPerReplicate: 6_000,
        };
        const task = batchTask(model, { ...given, seed: seed.toString() });
        const expected = await outcome({ ...task, kernel: 'composition-rejection-reference' });
        expect(await outcome({ ...task, kernel })).toEqual(expected);
        const { events, failure } = expected as { events: number[]; failure: { kind: string } | null };
        // A replicate that ran out of its budget is compared by its last state.
        for (const count of [...events, ...(failure?.kind === 'event_budget' ? [6_000] : [])]) {
          firings += count;
          longest = Math.max(longest, count);
        }
      }),
      { seed: 20261201, numRuns: 40 },
    );
    // The first chunk is 2,048 firings.
    expect(longest).toBeGreaterThan(2_048);
    expect(firings).toBeGreaterThan(40_000);
  }, 120_000);

  it('agrees bit for bit over 41 orders of magnitude of the constants', async () => {
    const rates = Array.from({ length: 41 }, (_, k) => 10 ** (k - 20));
    const reactions = rates.map((rate, k): ReactionSketch => ({ consumes: { [`X${k}`]: 1 }, rate }));
    const model = network({ counts: Object.fromEntries(rates.map((_, k) => [`X${k}`, 3])), reactions });
    const task = batchTask(model, { horizon: 1e24, replicateCount: 20, gridIntervals: 3 });
    const expected = await outcome({ ...task, kernel: 'composition-rejection-reference' });
    expect(await outcome({ ...task, kernel })).toEqual(expected);
    expect((expected as { events: number[] }).events).toEqual(Array(20).fill(123));
  });
});

describe('the dependency graph', () => {
  it('reaches through assignment rules, and shares the list of a species that everything reads', () => {
    const model = network({
      counts: { X: 1, Y: 1, Z: 1 },
      parameters: { first: 0, second: 0 },
      assignments: [
        { parameter: 0, expression: binary('multiply', species(0), number(2)) },
        { parameter: 1, expression: binary('add', parameter(0), number(1)) },
      ],
      reactions: [
        { produces: { X: 1 }, rate: 1 },
        { consumes: { Y: 1 }, rate: parameter(1) },
        { consumes: { Z: 1 }, rate: 1 },
        { consumes: { X: 1, Z: 1 }, rate: 1 },
      ],
    });
    const graph = dependencyGraph(prepareNetwork(model));
    expect(graph.assigned).toEqual([[0, 1], [], [], [0, 1]]);
    expect(graph.reactions).toEqual([[[1, 3]], [[1]], [[2, 3]], [[1, 2, 3]]]);
    const hub = network({
      counts: { H: 5 },
      reactions: Array.from({ length: 100 }, () => ({ consumes: { H: 1 }, rate: 1 })),
    });
    const lists = dependencyGraph(prepareNetwork(hub)).reactions.flat();
    expect(new Set(lists).size).toBe(1);
  });
});

describe('rounding', () => {
  it('moves a propensity by less than 2^−38 of itself for 10,000 reactions, and sums of a group are exact', () => {
    const bits = roundingBits(10_000);
    for (const value of [1, 1.7, Math.PI, 1e-300, 12345.678e200]) {
      const rounded = roundedPropensity(value, bits);
      expect(Math.abs(rounded - value)).toBeLessThanOrEqual(value * 2 ** -39);
    }
    // 10,000 members of one group, taken away in another order than added.
    const members = Array.from({ length: 10_000 }, (_, i) => roundedPropensity(1 + ((i * 0.6180339887) % 1), bits));
    let sum = members.reduce((a, b) => a + b, 0);
    for (let i = 0; i < members.length; i++) sum -= members[(i * 7919) % 10_000]!;
    expect(sum).toBe(0);
    expect(roundedPropensity(2 ** -1023, bits)).toBe(0);
  });
});

describe('in distribution', () => {
  const ensemble = async (model: ResolvedNetwork, horizon: number, n: number, given: Partial<BatchTask> = {}) => {
    const task = { kernel, horizon, replicateCount: n, gridIntervals: 1, keptTraces: n, ...given } as const;
    const { traces, failure, eventsPerReplicate } = await runBatch(batchTask(model, task));
    expect(failure).toBeNull();
    const values = (observable: number): number[] => traces.map((trace) => trace.values[2 * observable + 1]!);
    return { values, events: [...eventsPerReplicate] };
  };
  const mean = (values: number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  const variance = (values: number[]): number => {
    const middle = mean(values);
    return values.reduce((sum, value) => sum + (value - middle) ** 2, 0) / (values.length - 1);
  };
  const tally = (values: number[]): Map<number, number> => {
    const counts = new Map<number, number>();
    for (const value of values) counts.set(value, (counts.get(value) ?? 0) + 1);
    return counts;
  };

  it('immigration-death from 0 is Poisson with mean 63.2120558829 at 10 (Gardiner ch. 7; citation from memory)', async () => {
    const n = 20_000;
    const { values, events } = await ensemble(immigrationDeath(), 10, n);
    expectDistribution(tally(values(0)), (value) => poisson.pmf(value, 63.2120558829), n);
    expectMean(mean(events), 136.787944117, Math.sqrt(210.363832351), n);
  });

  it('birth-death 1, 0.5 from 5 has the mean, variance and extinction of Kendall 1948 at 2 (citation from memory)', async () => {
    const n = 50_000;
    const { values } = await ensemble(birthDeath(1, 0.5, 5), 2, n);
    expectMean(mean(values(0)), 13.5914091423, Math.sqrt(70.0616140571), n);
    expectVariance(variance(values(0)), 70.0616140571, 5, n);
    expectShare(values(0).filter((count) => count === 0).length, 0.00871441824829, n);
  });

  it('a closed chain is multinomial (Darvey & Staff 1966, J. Chem. Phys. 44:990; citation from memory)', async () => {
    const [length, molecules, horizon, n] = [50, 400, 6, 10_000];
    const model = chain({ species: length, counts: (i) => (i === 0 ? molecules : 0) });
    expect(chooseKernel(prepareNetwork(model))).toBe(kernel);
    const { values } = await ensemble(model, horizon, n, { kernel: undefined });
    const occupation = occupationOfChain(length, 1, 0.5, horizon);
    for (const place of [0, 2, 4, 8])
      expectDistribution(tally(values(place)), (k) => binomial.pmf(k, molecules, occupation[place]!), n);
    // Covariance −n p q of two members, by the variance of their sum, which is binomial with p + q.
    const both = values(2).map((count, i) => count + values(3)[i]!);
    expectDistribution(tally(both), (k) => binomial.pmf(k, molecules, occupation[2]! + occupation[3]!), n);
  });

  it('a network of 120 reactions with feedback through rules has the means and variances of the direct method', async () => {
    const n = 3_000;
    const model = feedback(40);
    const ours = await ensemble(model, 3, n);
    const direct = await ensemble(model, 3, n, { kernel: 'direct-scalar', seed: '7' });
    for (const observable of [0, 1, 13, 39, 40]) {
      const [a, b] = [ours.values(observable), direct.values(observable)];
      expectMean(mean(a) - mean(b), 0, Math.sqrt(variance(a) + variance(b)), n);
      // Counts are near Poisson: kurtosis below 5, two samples.
      expect(Math.abs(Math.log(variance(a) / variance(b))) / Math.sqrt((2 * 4) / n)).toBeLessThan(bound);
    }
    expectMean(
      mean(ours.events) - mean(direct.events),
      0,
      Math.sqrt(variance(ours.events) + variance(direct.events)),
      n,
    );
  });
});

/** Where a molecule of a closed chain is at `time`, begun at place 0: by uniformisation, to 1e-13. */
function occupationOfChain(length: number, forward: number, backward: number, time: number): number[] {
  const rate = forward + backward;
  let at: number[] = Array.from({ length }, (_, i) => (i === 0 ? 1 : 0));
  const occupation = Array<number>(length).fill(0);
  let weight = Math.exp(-rate * time);
  for (let jump = 0; jump < 200; jump++) {
    at.forEach((p, i) => (occupation[i]! += weight * p));
    at = at.map((p, i) => {
      const out = (i + 1 < length ? forward : 0) + (i > 0 ? backward : 0);
      return p * (1 - out / rate) + ((at[i - 1] ?? 0) * forward + (at[i + 1] ?? 0) * backward) / rate;
    });
    weight *= (rate * time) / (jump + 1);
  }
  return occupation;
}

/** Genes that make a product each, slowed down by all products together: a rule that every making reads. */
function feedback(genes: number): ResolvedNetwork {
  const indices = Array.from({ length: genes }, (_, i) => i);
  const sum = indices.map(species).reduce((a, b) => binary('add', a, b));
  const slowed: Expression = binary('divide', number(30), binary('add', number(1), parameter(0)));
  return network({
    counts: { ...Object.fromEntries(indices.map((i) => [`P${i}`, i])), W: 0 },
    parameters: { load: 0 },
    assignments: [{ parameter: 0, expression: binary('divide', sum, number(400)) }],
    reactions: indices.flatMap((i): ReactionSketch[] => [
      { produces: { [`P${i}`]: 1 }, rate: slowed },
      { consumes: { [`P${i}`]: 1 }, rate: 1 + i / 40 },
      { consumes: { [`P${i}`]: 1 }, produces: { W: 1 }, rate: 0.1 },
    ]),
  });
}

describe('its code', () => {
  it('is valid by the WebAssembly reference tools (wabt), with laws, rules, observables, changes and passages', async () => {
    const { readWasm } = await wabt();
    for (const model of [steadyChain(100), feedback(5), network({ counts: { X: 1 }, reactions: [] })]) {
      const prepared = prepareNetwork(model, [{ observable: 0, direction: 'rises_to', threshold: 30 }]);
      const bytes = encodeModule(compositionRejectionModule(prepared, groupTables(prepared).layout));
      const module = readWasm(bytes.slice(), { readDebugNames: false });
      module.validate();
      module.destroy();
    }
  });

  it('is of one size for chains of any length', () => {
    const size = (reactions: number): number => {
      const prepared = prepareNetwork(steadyChain(reactions));
      return encodeModule(compositionRejectionModule(prepared, groupTables(prepared).layout)).length;
    };
    expect(size(10_000) - size(100)).toBeLessThan(200);
  });
});

describe('the choice of kernel', () => {
  const of = (model: ResolvedNetwork) => chooseKernel(prepareNetwork(model));
  const hub = (reactions: number) =>
    network({
      counts: { H: 5 },
      reactions: Array.from({ length: reactions }, () => ({ consumes: { H: 1 }, rate: 1 })),
    });

  it('is direct for small networks and dense ones of middling size, composition-rejection beyond', () => {
    expect(of(steadyChain(largestSimdNetwork))).toBe('direct-simd');
    expect(of(steadyChain(largestSimdNetwork + 2))).toBe(kernel);
    expect(of(hub(largestDenseNetwork))).toBe('direct-scalar');
    expect(of(hub(largestDenseNetwork + 1))).toBe(kernel);
  });

  it('leaves the scalar kernel able to hold 20,000 reactions, for who asks for it', () => {
    const bytes = encodeModule(directScalarModule(prepareNetwork(steadyChain(20_000))));
    expect(WebAssembly.validate(bytes)).toBe(true);
  });

  it('lets 20,000 reactions of one reactant run, all of which every firing alters', async () => {
    const {
      replicateCount,
      eventsPerReplicate,
      kernel: used,
    } = await runBatch(batchTask(hub(20_000), { replicateCount: 4 }));
    expect({ replicateCount, used }).toEqual({ replicateCount: 4, used: kernel });
    expect([...eventsPerReplicate]).toEqual([5, 5, 5, 5]);
  });
});
