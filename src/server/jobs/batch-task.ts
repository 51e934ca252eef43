/** Makes the engine's task for a range of a job's replicates. The same range gives the same answer, whenever it runs. */
import { ModelVersion } from '@db/models/models.ts';
import type { Job } from '@db/models/jobs.ts';
import { jobTask } from '@/archives/job-task.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { resolveNetwork } from '@/domain/network/resolve-network.ts';
import type { BatchTask } from '@/engine/ensemble.ts';

/** The network of a job, with its overrides. */
export async function networkOf(job: Job): Promise<ResolvedNetwork> {
  const version = await ModelVersion.findByPk(job.modelVersionId);
  const resolved = resolveNetwork(version!.document, job.inputs.overrides);
  if (!resolved.ok)
    throw new Error(
      `The network of ${job.id} ran when it was quoted and no longer does: ${resolved.problems[0]?.message}`,
    );
  return resolved.network;
}

export function batchTask(options: {
  job: Job;
  network: ResolvedNetwork;
  point: number;
  firstReplicate: number;
  replicateCount: number;
  /** Stops the batch once no further replicate could fit under the cap; it never shapes a replicate. */
  eventBudgetPerBatch?: number | null;
}): BatchTask {
  const { job, eventBudgetPerBatch = null, ...range } = options;
  return { ...jobTask({ ...range, inputs: job.inputs, seed: job.seed }), eventBudgetPerBatch };
}
