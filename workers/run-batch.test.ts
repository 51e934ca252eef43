/** The bundled worker in a real pool: the answer of a batch is the same in one thread, in two and without any. */
import path from 'node:path';
import Piscina from 'piscina';
import { afterAll, describe, expect, it } from 'vitest';
import { runBatch } from '@/engine/run-batch.ts';
import { decodeSummary } from '@/engine/statistics/summary.ts';
import { batchTask, pointsTask } from '@tests/factories/batch-tasks.ts';
import { network, twoStageExpression } from '@tests/factories/networks.ts';
import { protocolVersion, type RunBatchAnswer, type RunBatchMessage } from './protocol.ts';
import { workerOutputs } from '../astro.integration.mjs';

const filename = path.join(workerOutputs.development, 'run-batch.mjs');
const pools = [1, 2].map((maxThreads) => new Piscina({ filename, minThreads: maxThreads, maxThreads }));
afterAll(() => Promise.all(pools.map((pool) => pool.destroy())));

const message = (task: RunBatchMessage['task']): RunBatchMessage => ({ version: protocolVersion, task });

describe('the simulation worker', () => {
  it('gives the same summary with one thread, with two, and called directly', async () => {
    const given = { replicateCount: 400, keptTraces: 3 };
    const task = pointsTask([twoStageExpression()], given);
    const direct = await runBatch(batchTask(twoStageExpression(), given));
    for (const pool of pools) {
      const halves = [0, 200].map((firstReplicate) => ({ ...task, firstReplicate, replicateCount: 200 }));
      const answers = (await Promise.all(halves.map((half) => pool.run(message(half))))) as RunBatchAnswer[];
      const [left, right] = answers.map(({ points: [point] }) => decodeSummary(point!.summary));
      right!.merge(left!);
      expect(Buffer.compare(right!.encode(), direct.summary.encode())).toBe(0);
      expect(answers[0]!.points[0]!.traces).toEqual(direct.traces);
      expect(answers.flatMap(({ points: [point] }) => [...point!.eventsPerReplicate])).toEqual([
        ...direct.eventsPerReplicate,
      ]);
      expect(answers[0]!.seconds).toBeGreaterThan(0);
    }
  });

  it('answers a failure of the model as a value, and an impossible task or another protocol as an error', async () => {
    const exploding = network({ counts: { X: 1 }, reactions: [{ consumes: { X: 1 }, produces: { X: 2 }, rate: 1 }] });
    const task = pointsTask([exploding], { horizon: 1000, eventBudgetPerReplicate: 10_000 });
    const { failure } = (await pools[0]!.run(message(task))) as RunBatchAnswer;
    expect(failure).toMatchObject({ kind: 'event_budget', replicate: 0 });
    await expect(pools[0]!.run(message({ ...task, horizon: -1 }))).rejects.toThrow(/horizon/);
    await expect(pools[0]!.run({ ...message(task), version: 99 })).rejects.toThrow(/protocol/);
  });

  it('can be stopped during an endless replicate and then takes the next task', async () => {
    const endless = pointsTask([twoStageExpression()], { horizon: 1e9, replicateCount: 1 });
    const stop = new AbortController();
    const running = pools[1]!.run(message(endless), { signal: stop.signal });
    stop.abort();
    await expect(running).rejects.toThrow();
    const next = (await pools[1]!.run(message(pointsTask([twoStageExpression()])))) as RunBatchAnswer;
    expect(next.replicateCount).toBe(100);
  });
});
