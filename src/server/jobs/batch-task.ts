/** Makes the engine's task for a range of a job's replicates at all points. The same range gives the same answer, whenever it runs. */
import { ModelVersion } from '@db/models/models.ts';
import type { Job } from '@db/models/jobs.ts';
import { jobTask } from '@/archives/job-task.ts';
import type { ResolvedNetwork } from '@/domain/network/resolved.ts';
import { networksOf } from '@/domain/jobs/networks-of.ts';
import type { PointsTask } from '@/engine/run-points.ts';

/** The network of a job at each of its points. */
export async function networksOfJob(job: Job): Promise<ResolvedNetwork[]> {
  const version = await ModelVersion.findByPk(job.modelVersionId);
  const resolved = networksOf(version!.document, job.inputs);
  if (!resolved.ok)
    throw new Error(
      `The network of ${job.id} ran when it was quoted and no longer does: ${resolved.problems[0]?.message}`,
    );
  return resolved.networks;
}

export function batchTask(options: {
  job: Job;
  networks: ResolvedNetwork[];
  firstReplicate: number;
  replicateCount: number;
  /** Stops the batch once no further replicate could fit under the cap; it never shapes a replicate. */
  eventBudgetPerBatch?: number | null;
}): PointsTask {
  const { job, eventBudgetPerBatch = null, ...range } = options;
  return { ...jobTask({ ...range, inputs: job.inputs, seed: job.seed }), eventBudgetPerBatch };
}
