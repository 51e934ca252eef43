/** Points of a sweep: one compiled kernel, whole cycles, the same replicates as each point alone, and Bailey's moments at each. */
import fc from 'fast-check';
import { describe, expect, it, vi } from 'vitest';
import { networksOf } from '@/domain/jobs/networks-of.ts';
import type { Sweep } from '@/domain/jobs/sweep.ts';
import { runBatch } from '@/engine/run-batch.ts';
import { eventsPerCycle, runPoints } from '@/engine/run-points.ts';
import { momentsAt, asSummary } from '@/engine/statistics/statistics-of.ts';
import { batchTask, pointsTask } from '@tests/factories/batch-tasks.ts';
import { immigrationDeath } from '@tests/support/jobs.ts';
import { network } from '@tests/factories/networks.ts';

const sweep: Sweep = {
  kind: 'grid',
  targets: [
    { kind: 'parameter', id: 'birth' },
    { kind: 'initial_count', id: 'X' },
  ],
  values: [5, 20, 80].flatMap((birth) => [0, 30].map((count) => [birth, count])),
};
function networks() {
  const resolved = networksOf(immigrationDeath(20, 0.5), { overrides: {}, sweep });
  if (!resolved.ok) throw new Error(resolved.problems[0]?.message);
  return resolved.networks;
}

describe('points of a sweep', () => {
  it('share one compiled module when only values differ', async () => {
    const compile = vi.spyOn(WebAssembly, 'compile');
    await runPoints(pointsTask(networks(), { replicateCount: 8, horizon: 2.25 }));
    expect(compile.mock.calls.length).toBeLessThanOrEqual(1);
    compile.mockRestore();
  });

  it('have the replicates that each point has by itself, and equally many', async () => {
    const all = await runPoints(pointsTask(networks(), { replicateCount: 40, keptTraces: 2 }));
    expect(all).toMatchObject({ replicateCount: 40, failure: null });
    for (const [point, alone] of networks().entries()) {
      const result = await runBatch(batchTask(alone, { point, replicateCount: 40, keptTraces: 2 }));
      expect(Buffer.from(all.points[point]!.summary.encode())).toEqual(Buffer.from(result.summary.encode()));
      expect(all.points[point]!.traces).toEqual(result.traces);
    }
    const cycle = eventsPerCycle(all.points);
    expect(cycle[7]).toBe(all.points.reduce((sum, { eventsPerReplicate }) => sum + eventsPerReplicate[7]!, 0));
  });

  it('have the same replicates and the same cost of a cycle however their range is cut', async () => {
    const cyclesOf = async (firstReplicate: number, replicateCount: number) => {
      const task = pointsTask(networks(), { firstReplicate, replicateCount, horizon: 1, keptTraces: 60 });
      const { points } = await runPoints(task);
      return { costs: [...eventsPerCycle(points)], traces: points.map(({ traces }) => traces) };
    };
    const whole = await cyclesOf(0, 60);
    await fc.assert(
      fc.asyncProperty(fc.uniqueArray(fc.integer({ min: 1, max: 59 }), { maxLength: 6 }), async (cuts) => {
        const starts = [0, ...cuts.sort((a, b) => a - b)];
        const parts = await Promise.all(starts.map((start, i) => cyclesOf(start, (starts[i + 1] ?? 60) - start)));
        expect(parts.flatMap(({ costs }) => costs)).toEqual(whole.costs);
        for (const point of sweep.values.keys())
          expect(parts.flatMap(({ traces }) => traces[point]!)).toEqual(whole.traces[point]);
      }),
      { seed: 6, numRuns: 20 },
    );
  });

  it('end together before the first replicate that fails at any of them, named with its point', async () => {
    // A birth process without end: the more there are at the start, the sooner the event budget is spent.
    const growing = (count: number) =>
      network({ counts: { X: count }, reactions: [{ consumes: { X: 1 }, produces: { X: 2 }, rate: 1 }] });
    const given = { horizon: 4, replicateCount: 60, eventBudgetPerReplicate: 150 };
    const task = pointsTask([growing(1), growing(4), growing(2)], given);
    const result = await runPoints(task);
    const alone = await Promise.all(task.networks.map((each, point) => runBatch(batchTask(each, { ...given, point }))));
    const least = Math.min(...alone.map(({ replicateCount }) => replicateCount));
    expect(least).toBeGreaterThan(0);
    expect(result.replicateCount).toBe(least);
    expect(result.failure).toMatchObject({
      kind: 'event_budget',
      replicate: least,
      point: alone.findIndex(({ replicateCount }) => replicateCount === least),
    });
    for (const point of result.points) expect(point.replicateCount).toBe(least);
  });

  // Bailey 1964, chapter 8, from memory: from x0, mean x0·e^(−mt) + (a/m)(1 − e^(−mt)), variance x0·e^(−mt)(1 − e^(−mt)) + (a/m)(1 − e^(−mt)).
  // Twelve checks at 4.4 standard errors: a false alarm in about 8,000 runs.
  it('have the mean and the variance of immigration and death at each rate and count', async () => {
    const t = 3;
    const { points } = await runPoints(
      pointsTask(networks(), { replicateCount: 20_000, horizon: t, gridIntervals: 1 }),
    );
    for (const [point, [birth, count]] of sweep.values.entries()) {
      const decay = Math.exp(-0.5 * t);
      const born = (birth! / 0.5) * (1 - decay);
      const { mean, meanStandardError, sd, sdStandardError } = momentsAt(asSummary(points[point]!.summary), 0, 1);
      expect(Math.abs(mean - (count! * decay + born)) / meanStandardError).toBeLessThan(4.4);
      const exactSd = Math.sqrt(count! * decay * (1 - decay) + born);
      expect(Math.abs(sd - exactSd) / sdStandardError).toBeLessThan(4.4);
    }
  });
});
