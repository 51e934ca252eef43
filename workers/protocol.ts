/** What passes between the server and a simulation worker. Versioned; plain structured-clonable data, no database. */
import type { BatchTask, KernelName, ModelFailure } from '@/engine/ensemble.ts';
import type { BlockShare } from '@/engine/statistics/blocks.ts';

export const protocolVersion = 3;

export interface RunBatchMessage {
  version: typeof protocolVersion;
  task: BatchTask;
}

export interface RunBatchAnswer {
  version: typeof protocolVersion;
  engineVersion: string;
  kernel: KernelName;
  firstReplicate: number;
  replicateCount: number;
  eventsPerReplicate: Float64Array;
  /** Passage by passage; Infinity where a replicate did not pass by the horizon. */
  passageTimes: Float64Array;
  /** Encoded EnsembleSummary (statistics/summary.ts). */
  summary: Uint8Array;
  traces: { replicate: number; values: Float64Array }[];
  /** Null unless the task asked for them. */
  blocks: BlockShare | null;
  failure: ModelFailure | null;
  /** Wall seconds inside the worker; for the dispatcher's planning and provenance.json only. */
  seconds: number;
}
