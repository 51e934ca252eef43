/** Where batches are computed. The dispatcher, the meter and the archive do not know which executor runs. */
import type { PointsTask } from '@/engine/run-points.ts';
import type { RunBatchAnswer } from '@workers/protocol.ts';

export interface Executor {
  /** Batches that run at the same time. */
  readonly capacity: number;
  /**
   * Computes a batch. The answer depends on the task alone, so a lost batch is simply run again. Rejects when the
   * worker was lost or the queue is full; aborting the signal stops the work within milliseconds and rejects too.
   */
  run(task: PointsTask, options?: { signal?: AbortSignal }): Promise<RunBatchAnswer>;
  /** Ends all work. */
  close(): Promise<void>;
}

const house = globalThis as typeof globalThis & { buretteExecutor?: Executor };

/** The executor of this process; throws before jobs have started. */
export function executor(): Executor {
  if (!house.buretteExecutor) throw new Error('No executor is running.');
  return house.buretteExecutor;
}

/** Set by the jobs part; tests set their own. */
export function setExecutor(value: Executor | null): void {
  if (value) house.buretteExecutor = value;
  else delete house.buretteExecutor;
}
