/** Events per second of two worker threads against one, wall time, the same batches. */
import { performance } from 'node:perf_hooks';
import Piscina from 'piscina';
import { protocolVersion, type RunBatchAnswer, type RunBatchMessage } from '@workers/protocol.ts';
import { pointsTask } from '@tests/factories/batch-tasks.ts';
import { eventsPerCycle } from '@/engine/run-points.ts';
import { benchWorkerFile } from './bench-worker.ts';
import { smallNetworks } from './networks.ts';
import { median, type BenchRow } from './rows.ts';

const batches = 8;

async function speed(threads: number, replicatesPerBatch: number): Promise<number> {
  const { network, horizon, gridIntervals } = smallNetworks.find(({ name }) => name === 'schloegl')!;
  const pool = new Piscina({ filename: await benchWorkerFile(), minThreads: threads, maxThreads: threads });
  const run = (batch: number): Promise<RunBatchAnswer> => {
    const task = pointsTask([network], {
      horizon,
      gridIntervals,
      firstReplicate: batch * replicatesPerBatch,
      replicateCount: replicatesPerBatch,
    });
    const message: RunBatchMessage = { version: protocolVersion, task };
    return pool.run(message);
  };
  await Promise.all([...Array(threads).keys()].map(run));
  const started = performance.now();
  const answers = await Promise.all([...Array(batches).keys()].map(run));
  const seconds = (performance.now() - started) / 1000;
  await pool.destroy();
  const events = answers.flatMap(({ points }) => [...eventsPerCycle(points)]).reduce((sum, count) => sum + count, 0);
  return events / seconds;
}

export async function measureTwoWorkers(options: { rounds: number; eventsPerRound: number }): Promise<BenchRow> {
  const replicatesPerBatch = Math.max(4, 4 * Math.ceil(options.eventsPerRound / 20_000 / batches / 4));
  const one: number[] = [];
  const two: number[] = [];
  for (let round = 0; round < options.rounds; round += 1) {
    one.push(await speed(1, replicatesPerBatch));
    two.push(await speed(2, replicatesPerBatch));
  }
  return {
    measure: 'two-workers',
    network: 'schloegl',
    value: median(two),
    unit: 'events/s',
    baseline: 'one worker',
    baselineValue: median(one),
    ratio: median(two) / median(one),
    atLeast: 1.9,
    aim: 1.97,
  };
}
