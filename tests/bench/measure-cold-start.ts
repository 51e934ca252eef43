/** Milliseconds from a network in hand to its first events in a worker that has run nothing yet. */
import { performance } from 'node:perf_hooks';
import Piscina from 'piscina';
import { protocolVersion, type RunBatchMessage } from '@workers/protocol.ts';
import { pointsTask } from '@tests/factories/batch-tasks.ts';
import { benchWorkerFile } from './bench-worker.ts';
import { smallNetworks } from './networks.ts';
import { median, type BenchRow } from './rows.ts';

export async function measureColdStart(options: { rounds: number }): Promise<BenchRow> {
  const { network, horizon, gridIntervals } = smallNetworks.find(({ name }) => name === 'oscillator')!;
  const filename = await benchWorkerFile();
  const times: number[] = [];
  for (let round = 0; round < options.rounds; round += 1) {
    // The thread stands before the network comes, as in the pool; its first task is what is timed.
    const pool = new Piscina({ filename, minThreads: 1, maxThreads: 1, idleTimeout: 60_000 });
    const task = pointsTask([network], { horizon: horizon / 1000, gridIntervals, replicateCount: 1 });
    const message: RunBatchMessage = { version: protocolVersion, task };
    await new Promise((resolve) => setTimeout(resolve, 500));
    const started = performance.now();
    await pool.run(message);
    times.push(performance.now() - started);
    await pool.destroy();
  }
  return {
    measure: 'cold-start-ms',
    network: 'oscillator',
    value: median(times),
    unit: 'ms',
    baseline: 'none: at most',
    baselineValue: null,
    ratio: null,
    atLeast: 25,
    aim: 10,
  };
}
