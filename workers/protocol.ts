/** What passes between the server and a simulation worker. Versioned; plain structured-clonable data, no database. */
import type { KernelName } from '@/engine/ensemble.ts';
import type { PointFailure, PointsTask } from '@/engine/run-points.ts';
import type { BlockShare } from '@/engine/statistics/blocks.ts';

export const protocolVersion = 4;

export interface RunBatchMessage {
  version: typeof protocolVersion;
  task: PointsTask;
}

/** What one point answers. */
export interface PointAnswer {
  eventsPerReplicate: Float64Array;
  /** Passage by passage; Infinity where a replicate did not pass by the horizon. */
  passageTimes: Float64Array;
  /** Encoded EnsembleSummary (statistics/summary.ts). */
  summary: Uint8Array;
  traces: { replicate: number; values: Float64Array }[];
  /** Null unless the task asked for them. */
  blocks: BlockShare | null;
}

export interface RunBatchAnswer {
  version: typeof protocolVersion;
  engineVersion: string;
  kernel: KernelName;
  firstReplicate: number;
  /** Complete at every point. */
  replicateCount: number;
  /** In order; none when no replicate is complete. */
  points: PointAnswer[];
  failure: PointFailure | null;
  /** Wall seconds inside the worker; for the dispatcher's planning and provenance.json only. */
  seconds: number;
}
