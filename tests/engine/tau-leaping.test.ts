/**
 * Tau-leaping: closed forms of the fixed step, the adaptive method within its stated error of exact means and sds, and its edges.
 * Citations from memory; values recomputed. False-alarm rate: statistical-checks.ts.
 */
import { describe, expect, it } from 'vitest';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import type { BatchResult, BatchTask, KernelName } from '@/engine/ensemble.ts';
import { gridTimes } from '@/engine/exact/direct-method.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { statisticsOf } from '@/engine/statistics/statistics-of.ts';
import { batchTask } from '@tests/factories/batch-tasks.ts';
import {
  binary,
  decayingDimerising,
  immigrationDeath,
  isomerisation,
  network,
  number,
  parameter,
  pureDeath,
  species,
} from '@tests/factories/networks.ts';
import { fixedStepLeaps } from './fixed-step-leap.ts';
import { bound, expectMean, expectVariance } from './statistical-checks.ts';

const mean = (values: ArrayLike<number>): number => Array.from(values).reduce((a, b) => a + b, 0) / values.length;
const variance = (values: number[]): number => {
  const middle = mean(values);
  return values.reduce((sum, value) => sum + (value - middle) ** 2, 0) / (values.length - 1);
};

describe('explicit leaps of a fixed step (Cao, Petzold, Rathinam & Gillespie 2004, J. Chem. Phys. 121:12169)', () => {
  it('leave immigration-death with the stationary variance (a/m) · 2/(2 − mτ): 111.111 at a = 10, m = 0.1, τ = 2', () => {
    // The mean settles as (1 − mτ)^k: after 60 steps both are within 10⁻⁵ of the limit.
    const n = 5_000;
    const counts = fixedStepLeaps(immigrationDeath(10, 0.1, 100), { tau: 2, steps: 60, replicates: n, seed: 1n });
    const values = counts.map(([x]) => x!);
    expectMean(mean(values), 100, Math.sqrt(1000 / 9), n);
    expectVariance(variance(values), 1000 / 9, 3.05, n);
  });

  it('leave decay of 10⁵ at 1 with mean 34867.844 and variance 25233.53 after ten steps of 0.1', () => {
    const n = 20_000;
    const counts = fixedStepLeaps(pureDeath(1, 100_000), { tau: 0.1, steps: 10, replicates: n, seed: 2n });
    const values = counts.map(([x]) => x!);
    expectMean(mean(values), 34867.844, Math.sqrt(25233.53), n);
    expectVariance(variance(values), 25233.53, 3, n);
  });
});

const kernels: KernelName[] = ['tau-leaping-reference', 'tau-leaping'];

describe.each(kernels)('%s', (kernel) => {
  const run = (model: ResolvedNetwork, given: Partial<BatchTask> = {}): Promise<BatchResult> =>
    runBatch(batchTask(model, { kernel, epsilon: 0.03, gridIntervals: 1, ...given }));
  const atHorizon = ({ summary }: BatchResult, horizon: number, intervals = 1) =>
    statisticsOf(summary, gridTimes(horizon, intervals)).observables.map(({ id, ...of }) => ({
      id,
      mean: of.mean[intervals]!,
      sd: of.sd[intervals]!,
      meanError: of.meanStandardError[intervals]!,
      sdError: of.sdStandardError[intervals]!,
    }));

  it('has the means and sds of the decaying-dimerising set within 0.3 % and 5 % at ε 0.03 (8,000 exact runs, own code)', async () => {
    const n = 500;
    const answer = await run(decayingDimerising(), { replicateCount: n });
    expect(answer.failure).toBeNull();
    const exact = [
      { mean: 2418.36, sd: 49.99 },
      { mean: 13958.05, sd: 91.54 },
      { mean: 13513.28, sd: 84.52 },
    ];
    for (const [i, one] of atHorizon(answer, 10).entries()) {
      const { mean: exactMean, sd: exactSd } = exact[i]!;
      expect(Math.abs(one.mean - exactMean)).toBeLessThan(0.003 * exactMean + bound * one.meanError);
      expect(Math.abs(one.sd - exactSd)).toBeLessThan(0.05 * exactSd + bound * one.sdError);
    }
    // 279,042 firings become some 1,600 draws.
    expect(mean(answer.eventsPerReplicate)).toBeGreaterThan(1_000);
    expect(mean(answer.eventsPerReplicate)).toBeLessThan(2_500);
  });

  it('draws nearer to the exact mean as ε shrinks (A ⇌ B from 5,000 A; exact mean of B 2589.566, Darvey & Staff 1966)', async () => {
    const exact = 2589.56613284;
    const departures: number[] = [];
    for (const epsilon of [0.3, 0.1, 0.03]) {
      const answer = await run(isomerisation(1, 0.5, 5_000), { horizon: 1, replicateCount: 400, epsilon });
      departures.push(Math.abs(atHorizon(answer, 1)[1]!.mean - exact));
    }
    expect(departures[0]).toBeGreaterThan(departures[1]!);
    expect(departures[1]).toBeGreaterThan(departures[2]!);
    expect(departures[2]).toBeLessThan(0.015 * exact);
  });

  it('gives the bytes of the direct method where every reaction is critical', async () => {
    const model = isomerisation(1, 0.5, 9);
    const leaped = await run(model, { gridIntervals: 20, replicateCount: 50, keptTraces: 50, horizon: 200 });
    const exact = await runBatch(
      batchTask(model, { gridIntervals: 20, replicateCount: 50, keptTraces: 50, horizon: 200 }),
    );
    expect([...leaped.eventsPerReplicate]).toEqual([...exact.eventsPerReplicate]);
    expect(leaped.summary.encode()).toEqual(exact.summary.encode());
    // More firings than exact steps in a row, so that the choice is made again and again.
    expect(Math.min(...leaped.eventsPerReplicate)).toBeGreaterThan(200);
  });

  it('never goes below zero, and exact firings finish what leaps began', async () => {
    const answer = await run(pureDeath(1, 3_000), {
      horizon: 40,
      gridIntervals: 200,
      replicateCount: 50,
      keptTraces: 50,
      epsilon: 0.5,
    });
    const values = answer.traces.flatMap((trace) => [...trace.values]);
    expect(Math.min(...values)).toBe(0);
    expect(values.filter((value) => value === 0).length).toBeGreaterThan(1_000);
    // The trace only falls: nothing was overshot and mended.
    for (const { values: trace } of answer.traces) expect([...trace]).toEqual([...trace].sort((a, b) => b - a));
  });

  it('stays where the total propensity is zero', async () => {
    const answer = await run(pureDeath(1, 0), { gridIntervals: 4, replicateCount: 3, keptTraces: 3 });
    expect([...answer.eventsPerReplicate]).toEqual([0, 0, 0]);
    expect(answer.traces.flatMap(({ values }) => [...values])).toEqual(Array(15).fill(0));
  });

  it('counts a draw for each reaction that leaps, by hand for one leap to each grid time', async () => {
    // ∅ → X, ∅ → Y: no propensity reads X or Y, so leaps reach from grid time to grid time.
    const model = network({
      counts: { X: 0, Y: 0 },
      reactions: [
        { produces: { X: 1 }, rate: 1000 },
        { produces: { Y: 1 }, rate: 500 },
      ],
    });
    const n = 400;
    const answer = await run(model, { horizon: 8, gridIntervals: 4, replicateCount: n });
    expect(new Set(answer.eventsPerReplicate)).toEqual(new Set([8]));
    // A Poisson process is leaped exactly.
    const [x] = atHorizon(answer, 8, 4);
    expectMean(x!.mean, 8000, Math.sqrt(8000), n);
    expectVariance(x!.sd ** 2, 8000, 3, n);
  });

  it('fires critical reactions at exact times amid leaps', async () => {
    // Five heads die out at 0.2 each while a Poisson stream leaps by; P(alive at 5) = e⁻¹ each.
    const model = network({
      counts: { X: 0, head: 5 },
      reactions: [
        { produces: { X: 1 }, rate: 1e4 },
        { consumes: { head: 1 }, rate: 0.2 },
      ],
    });
    const n = 2_000;
    const alive = Math.exp(-1);
    const answer = await run(model, { horizon: 5, replicateCount: n });
    expectMean(atHorizon(answer, 5)[1]!.mean, 5 * alive, Math.sqrt(5 * alive * (1 - alive)), n);
    expect(mean(answer.eventsPerReplicate)).toBeLessThan(10);
  });

  it('makes timed changes at their times, the state at a grid time including those at it', async () => {
    const model: ResolvedNetwork = {
      ...network({
        counts: { X: 100_000 },
        parameters: { rate: 0 },
        reactions: [{ consumes: { X: 1 }, rate: binary('multiply', parameter(0), species(0)) }],
      }),
      changes: [
        {
          id: 'dose',
          when: { kind: 'times', times: [2, 3.5] },
          sets: [
            { target: { kind: 'species', index: 0 }, expression: binary('add', species(0), number(50_000)) },
            { target: { kind: 'parameter', index: 0 }, expression: number(1) },
          ],
        },
      ],
    };
    const n = 200;
    const answer = await run(model, { horizon: 4, gridIntervals: 4, replicateCount: n, keptTraces: n });
    const at = (point: number): number[] => answer.traces.map(({ values }) => values[point]!);
    expect(new Set(at(1))).toEqual(new Set([100_000]));
    expect(new Set(at(2))).toEqual(new Set([150_000]));
    // Decay from 2: e^−1.5 of 150,000 to 3.5, 50,000 more, and e^−0.5 of that; explicit leaps fall a little too fast.
    const expected = (150_000 * Math.exp(-1.5) + 50_000) * Math.exp(-0.5);
    expect(Math.abs(mean(at(4)) / expected - 1)).toBeLessThan(0.02);
  });

  it('resolves first passages to the leap’s end', async () => {
    const model = network({ counts: { X: 0 }, reactions: [{ produces: { X: 1 }, rate: 1000 }] });
    const passages = [
      { observable: 0, direction: 'rises_to', threshold: 1 },
      { observable: 0, direction: 'rises_to', threshold: 2_500 },
      { observable: 0, direction: 'falls_to', threshold: 0 },
      { observable: 0, direction: 'rises_to', threshold: 1e6 },
    ] as const;
    const answer = await run(model, { horizon: 4, gridIntervals: 4, replicateCount: 2, passages: [...passages] });
    expect([...answer.passageTimes]).toEqual([1, 1, 3, 3, 0, 0, Infinity, Infinity]);
  });

  it('leaves it to exact firings to find a law that turns negative', async () => {
    // Made from nothing at 5 (2000 − X) for ever: leaps that pass 2000 are taken back, and no replicate fails.
    const filling = network({
      counts: { X: 0 },
      reactions: [
        { produces: { X: 1 }, rate: binary('multiply', number(5), binary('subtract', number(2000), species(0))) },
      ],
    });
    const answer = await run(filling, { replicateCount: 20, epsilon: 0.5 });
    expect(answer.failure).toBeNull();
    expect(atHorizon(answer, 10)[0]).toMatchObject({ mean: 2000, sd: 0 });
    const failing = network({
      counts: { X: 0 },
      reactions: [{ id: 'made', produces: { X: 1 }, rate: binary('subtract', number(2000.5), species(0)) }],
    });
    const failed = await run(failing, { replicateCount: 20, horizon: 100 });
    expect(failed.failure).toMatchObject({ kind: 'negative_propensity', replicate: 0, reaction: 'made' });
    expect(failed.failure!.state).toEqual({ X: 2001 });
  });

  it('names the reaction whose firing overflows a count', async () => {
    const model = network({ counts: { X: 2 ** 31 - 1e5 }, reactions: [{ id: 'made', produces: { X: 1 }, rate: 1e6 }] });
    const { failure } = await run(model, { replicateCount: 2 });
    expect(failure).toMatchObject({ kind: 'count_overflow', reaction: 'made', state: { X: 2 ** 31 - 1 } });
  });

  it('fails the replicate that passes its event budget, and keeps those before', async () => {
    const free = await run(decayingDimerising(), { replicateCount: 8 });
    const costs = [...free.eventsPerReplicate];
    const dearest = Math.max(...costs);
    const expected = costs.indexOf(costs.find((cost) => cost > dearest - 1)!);
    const capped = await run(decayingDimerising(), { replicateCount: 8, eventBudgetPerReplicate: dearest - 1 });
    expect(capped.failure).toMatchObject({ kind: 'event_budget', replicate: expected });
    expect([...capped.eventsPerReplicate]).toEqual(costs.slice(0, expected));
    const batch = await run(decayingDimerising(), { replicateCount: 8, eventBudgetPerBatch: costs[0]! + costs[1]! });
    expect(batch).toMatchObject({ failure: null, replicateCount: 2 });
  });

  it('gives the same whatever the batches', async () => {
    const whole = await run(decayingDimerising(), { replicateCount: 9, keptTraces: 9, horizon: 2 });
    const parts: BatchResult[] = [];
    for (const [firstReplicate, replicateCount] of [
      [0, 2],
      [2, 6],
      [8, 1],
    ] as const)
      parts.push(await run(decayingDimerising(), { firstReplicate, replicateCount, keptTraces: 9, horizon: 2 }));
    expect(parts.flatMap(({ traces }) => traces)).toEqual(whole.traces);
    expect(parts.flatMap(({ eventsPerReplicate }) => [...eventsPerReplicate])).toEqual([...whole.eventsPerReplicate]);
  });
});

describe('what does not leap', () => {
  it('is refused: triggered changes, an ε out of range, a kernel without ε and the other way round', async () => {
    const model = immigrationDeath();
    const triggered: ResolvedNetwork = {
      ...model,
      changes: [
        {
          id: 'reset',
          when: { kind: 'condition', condition: binary('greater', species(0), number(5)), before: false },
          sets: [{ target: { kind: 'species', index: 0 }, expression: number(0) }],
        },
      ],
    };
    await expect(runBatch(batchTask(triggered, { epsilon: 0.03 }))).rejects.toThrow(/triggered/);
    for (const epsilon of [0, -1, 0.51, NaN])
      await expect(runBatch(batchTask(model, { epsilon }))).rejects.toThrow(RangeError);
    await expect(runBatch(batchTask(model, { kernel: 'tau-leaping' }))).rejects.toThrow(RangeError);
    await expect(runBatch(batchTask(model, { kernel: 'direct-scalar', epsilon: 0.1 }))).rejects.toThrow(RangeError);
  });
});
