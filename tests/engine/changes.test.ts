/**
 * Timed and triggered changes and first passages by every form of the direct method, against hand-derived expectations and
 * laws known in closed form (citations from memory, values recomputed). False-alarm rate: statistical-checks.ts.
 */
import binomial from '@stdlib/stats-base-dists-binomial';
import poisson from '@stdlib/stats-base-dists-poisson';
import { describe, expect, it } from 'vitest';
import type { Expression } from '@/domain/network/expression.ts';
import type { ResolvedChange, ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchTask, KernelName } from '@/engine/ensemble.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import {
  binary,
  birthDeath,
  immigrationDeath,
  network,
  number,
  parameter,
  pureDeath,
  species,
} from '@tests/factories/networks.ts';
import { expectDistribution, expectMean, expectShare } from './statistical-checks.ts';

const kernels: KernelName[] = ['reference', 'direct-scalar', 'direct-simd', 'composition-rejection'];

const setSpecies = (index: number, expression: Expression) => ({
  target: { kind: 'species' as const, index },
  expression,
});
const setParameter = (index: number, expression: Expression) => ({
  target: { kind: 'parameter' as const, index },
  expression,
});
const at = (times: number[], ...sets: ResolvedChange['sets']): ResolvedChange => ({
  id: `at${times.join('and')}`,
  when: { kind: 'times', times },
  sets,
});
const whenever = (condition: Expression, before: boolean, ...sets: ResolvedChange['sets']): ResolvedChange => ({
  id: 'trigger',
  when: { kind: 'condition', condition, before },
  sets,
});
/** Nothing fires: what happens is changes alone. */
const still = (count: number, ...changes: ResolvedChange[]): ResolvedNetwork => ({
  ...network({ counts: { X: count }, reactions: [{ consumes: { X: 1 }, rate: 0 }], parameters: { dose: 3 } }),
  changes,
});
const plus = (count: number): Expression => binary('add', species(0), number(count));

/** The one trace of a network in which nothing is left to chance. */
async function course(model: ResolvedNetwork, kernel: KernelName, given: Partial<BatchTask> = {}): Promise<number[]> {
  const { traces, failure } = await runBatch(
    batchTask(model, { kernel, horizon: 4, gridIntervals: 4, replicateCount: 5, keptTraces: 5, ...given }),
  );
  expect(failure).toBeNull();
  const points = (given.gridIntervals ?? 4) + 1;
  for (const { values } of traces) expect(values).toEqual(traces[0]!.values);
  return [...traces[0]!.values.subarray(0, points)];
}

describe.each(kernels)('changes by %s', (kernel) => {
  it('happen at their times: at 0, on the grid, between grid times, and not after the horizon', async () => {
    const model = still(1, at([0], setSpecies(0, plus(10))), at([1, 2.5, 4, 4.5], setSpecies(0, plus(100))));
    expect(await course(model, kernel)).toEqual([11, 111, 111, 211, 311]);
  });

  it('of one moment happen in document order, each with what the one before it left', async () => {
    const doubled = at([2], setSpecies(0, binary('multiply', species(0), number(2))));
    const raised = at([2], setSpecies(0, plus(1)));
    expect(await course(still(5, doubled, raised), kernel)).toEqual([5, 5, 11, 11, 11]);
    expect(await course(still(5, raised, doubled), kernel)).toEqual([5, 5, 12, 12, 12]);
  });

  it('work out all values before any is set', async () => {
    const model = {
      ...network({ counts: { X: 7, Y: 2 }, reactions: [{ consumes: { X: 1 }, rate: 0 }] }),
      changes: [at([1], setSpecies(0, species(1)), setSpecies(1, species(0)))],
    };
    const [result] = (await runBatch(batchTask(model, { kernel, horizon: 2, gridIntervals: 2, keptTraces: 1 }))).traces;
    expect([...result!.values]).toEqual([7, 2, 2, 2, 7, 7]);
  });

  it('set a parameter until the next change, anew in every replicate', async () => {
    const model = still(
      0,
      at([1, 3], setSpecies(0, binary('add', species(0), parameter(0)))),
      at([2], setParameter(0, number(40))),
    );
    expect(await course(model, kernel)).toEqual([0, 3, 3, 43, 43]);
  });

  it('triggered: once for each time that the condition becomes true, in a cascade at one moment', async () => {
    const low = whenever(binary('less', species(0), number(5)), false, setSpecies(0, plus(10)));
    expect(await course(still(1, low), kernel)).toEqual([11, 11, 11, 11, 11]);
    const counts = still(
      1,
      { ...low, when: { ...low.when, before: true } as ResolvedChange['when'] },
      at([2], setSpecies(0, number(0))),
    );
    // True from the start and not counted as becoming so: stays true until something sets it right.
    expect(await course(counts, kernel)).toEqual([1, 1, 0, 0, 0]);
    const cascade = still(
      0,
      at([1], setSpecies(0, number(1))),
      whenever(binary('equal', species(0), number(1)), false, setSpecies(0, number(2))),
      {
        ...whenever(binary('equal', species(0), number(2)), false, setSpecies(0, number(3))),
        id: 'second',
      },
    );
    expect(await course(cascade, kernel)).toEqual([0, 3, 3, 3, 3]);
  });

  it('fail in words where a count is not whole, negative or too large, with the state as before', async () => {
    for (const value of [2.5, -1, 2 ** 31, NaN]) {
      const { failure, replicateCount } = await runBatch(
        batchTask(still(3, at([2], setSpecies(0, number(value)))), { kernel }),
      );
      expect(replicateCount).toBe(0);
      expect(failure).toMatchObject({ kind: 'bad_assignment', replicate: 0, change: 'at2', time: 2, state: { X: 3 } });
    }
    const atStart = await runBatch(
      batchTask(still(3, at([0], setSpecies(0, number(0.5)))), { kernel, firstReplicate: 4 }),
    );
    expect(atStart.failure).toMatchObject({ kind: 'bad_assignment', replicate: 4, time: 0 });
    // A whole number that arithmetic missed by a unit in the last place is meant as whole.
    const tenth = binary('multiply', number(0.1), number(30));
    expect(await course(still(0, at([2], setSpecies(0, tenth))), kernel)).toEqual([0, 0, 3, 3, 3]);
  });

  it('that set each other off without an end fail as a cascade', async () => {
    const odd = whenever(binary('equal', species(0), number(1)), false, setSpecies(0, number(2)));
    const even = { ...whenever(binary('equal', species(0), number(2)), false, setSpecies(0, number(1))), id: 'back' };
    const { failure } = await runBatch(batchTask(still(0, at([3], setSpecies(0, number(1))), odd, even), { kernel }));
    expect(failure).toMatchObject({ kind: 'change_cascade', time: 3 });
  });

  it('happen where nothing fires any more, and firing goes on after them', async () => {
    const model: ResolvedNetwork = {
      ...network({ counts: { X: 4 }, reactions: [{ consumes: { X: 1 }, rate: 1000 }] }),
      changes: [at([2], setSpecies(0, number(6)))],
    };
    const { eventsPerReplicate } = await runBatch(batchTask(model, { kernel, horizon: 4 }));
    expect(new Set(eventsPerReplicate)).toEqual(new Set([10]));
  });

  it('give the same bytes in batches of 1, 7 and 100', async () => {
    const model: ResolvedNetwork = {
      ...immigrationDeath(),
      changes: [at([0.7, 3.3], setSpecies(0, plus(20)), setParameter(0, number(2)))],
    };
    const passages = [{ observable: 0, direction: 'rises_to' as const, threshold: 30 }];
    const task = batchTask(model, { kernel, replicateCount: 100, passages });
    const whole = await runBatch(task);
    for (const size of [1, 7]) {
      const times: number[] = [];
      for (let first = 0; first < 100; first += size) {
        const part = await runBatch({ ...task, firstReplicate: first, replicateCount: Math.min(size, 100 - first) });
        times.push(...part.passageTimes);
      }
      expect(times).toEqual([...whole.passageTimes]);
    }
  });
});

describe('doses into immigration-death (superposition: old molecules die independently, new ones are Poisson; Gardiner ch. 7)', () => {
  it('a wash-out at 5 leaves Poisson with mean 100 (1 − e^−0.5) at 10', async () => {
    const n = 50_000;
    const model = { ...immigrationDeath(10, 0.1, 80), changes: [at([5], setSpecies(0, number(0)))] };
    const lambda = 100 * (1 - Math.exp(-0.5));
    const { traces } = await runBatch(batchTask(model, { gridIntervals: 2, replicateCount: n, keptTraces: n }));
    const counts = new Map<number, number>();
    for (const { values } of traces) {
      expect(values[1]).toBe(0);
      counts.set(values[2]!, (counts.get(values[2]!) ?? 0) + 1);
    }
    expectDistribution(counts, (value) => poisson.pmf(value, lambda), n);
  });

  it('a dose of 50 at 4 and half the immigration from 6 on: at 10 binomial(50, e^−0.6) and Poisson together', async () => {
    const n = 50_000;
    const model = {
      ...immigrationDeath(),
      changes: [at([4], setSpecies(0, plus(50))), at([6], setParameter(0, number(5)))],
    };
    // ∫ rate · e^(−0.1 (10 − s)) ds: 100 (e^−0.4 − e^−1) up to 6, then 50 (1 − e^−0.4).
    const lambda = 100 * (Math.exp(-0.4) - Math.exp(-1)) + 50 * (1 - Math.exp(-0.4));
    const alive = Math.exp(-0.6);
    const pmf = (value: number): number => {
      let sum = 0;
      for (let old = 0; old <= 50; old++) sum += binomial.pmf(old, 50, alive) * poisson.pmf(value - old, lambda);
      return sum;
    };
    // Intervals of 2.5: the dose lies off the grid.
    const { traces } = await runBatch(batchTask(model, { gridIntervals: 4, replicateCount: n, keptTraces: n }));
    const counts = new Map<number, number>();
    for (const { values } of traces) counts.set(values[4]!, (counts.get(values[4]!) ?? 0) + 1);
    expectDistribution(counts, pmf, n);
    const average = traces.reduce((sum, { values }) => sum + values[4]!, 0) / n;
    expectMean(average, lambda + 50 * alive, Math.sqrt(lambda + 50 * alive * (1 - alive)), n);
  });
});

describe('first passages', () => {
  const times = async (model: ResolvedNetwork, given: Partial<BatchTask>): Promise<Float64Array> => {
    const { passageTimes, failure } = await runBatch(batchTask(model, { gridIntervals: 1, ...given }));
    expect(failure).toBeNull();
    return passageTimes;
  };
  const mean = (values: Float64Array): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  const sd = (values: Float64Array): number => {
    const middle = mean(values);
    return Math.sqrt(values.reduce((sum, value) => sum + (value - middle) ** 2, 0) / (values.length - 1));
  };

  it('of immigration-death from 0 to 50 take 6.83658932625 on average (Karlin & Taylor 1975 ch. 4, birth-death chain)', async () => {
    const n = 20_000;
    const passages = [{ observable: 0, direction: 'rises_to' as const, threshold: 50 }];
    const found = await times(immigrationDeath(), { horizon: 60, replicateCount: n, passages });
    expectMean(mean(found), 6.83658932625, sd(found), n);
  });

  it('pure death of 100 at 0.5 takes H_100 / 0.5 = 10.3747550353 on average to extinction (Bailey 1964 §8.5)', async () => {
    const n = 20_000;
    const passages = [{ observable: 0, direction: 'falls_to' as const, threshold: 0 }];
    const found = await times(pureDeath(0.5, 100), { horizon: 200, replicateCount: n, passages });
    expectMean(mean(found), 10.3747550353, sd(found), n);
  });

  it('extinction of birth-death 1, 0.5 from 5 by time 2 has probability 0.00871441824829 (Kendall 1948), infinite where not passed', async () => {
    const n = 50_000;
    const passages = [{ observable: 0, direction: 'falls_to' as const, threshold: 0 }];
    const found = await times(birthDeath(1, 0.5, 5), { horizon: 2, replicateCount: n, passages });
    const extinct = found.filter((time) => time <= 2).length;
    expect(found.filter((time) => time === Infinity)).toHaveLength(n - extinct);
    expectShare(extinct, 0.00871441824829, n);
  });

  it.each(kernels)('count what holds at time 0 and what a change brings about, by %s', async (kernel) => {
    const model = still(5, at([2.5], setSpecies(0, number(9))));
    const found = await times(model, {
      kernel,
      horizon: 4,
      replicateCount: 2,
      passages: [
        { observable: 0, direction: 'rises_to', threshold: 5 },
        { observable: 0, direction: 'rises_to', threshold: 8.5 },
        { observable: 0, direction: 'falls_to', threshold: 4 },
      ],
    });
    expect([...found]).toEqual([0, 0, 2.5, 2.5, Infinity, Infinity]);
  });
});
