/** Runs batches on threads of this process (Piscina): a bounded queue, niced so that pages stay quick. */
import { Piscina } from 'piscina';
import type { PointsTask } from '@/engine/run-points.ts';
import { protocolVersion, type RunBatchAnswer, type RunBatchMessage } from '@workers/protocol.ts';
import type { Executor } from './executor.ts';

export function startPiscinaExecutor(options: { workerFile: string; threads: number }): Executor {
  const pool = new Piscina({
    filename: options.workerFile,
    minThreads: options.threads,
    maxThreads: options.threads,
    // The dispatcher keeps the threads busy and no more; pilots and boundary batches queue behind.
    maxQueue: 256,
    niceIncrement: 10,
    idleTimeout: Infinity,
    closeTimeout: 5_000,
  });
  return {
    capacity: options.threads,
    async run(task: PointsTask, { signal } = {}): Promise<RunBatchAnswer> {
      const message: RunBatchMessage = { version: protocolVersion, task };
      const answer = (await pool.run(message, signal ? { signal } : {})) as RunBatchAnswer;
      if (answer.version !== protocolVersion)
        throw new Error(`The worker speaks version ${answer.version} of the protocol, not ${protocolVersion}.`);
      return answer;
    },
    close: () => pool.destroy(),
  };
}
