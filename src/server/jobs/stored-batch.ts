/** Gives the content of a batch that is in: from its file, or computed again when the file was lost or damaged. */
import { Job, type Batch } from '@db/models/jobs.ts';
import { eventsPerCycle } from '@/engine/run-points.ts';
import { log } from '../log.ts';
import { batchTask, networksOfJob } from './batch-task.ts';
import { loadBatch, storeBatch, type BatchContent } from './batch-file.ts';
import { executor } from './executor.ts';

/** The complete replicates of the batch; never charged again, whatever had to be computed again. */
export async function storedBatch(job: Job, batch: Batch): Promise<BatchContent> {
  const name = batch.file;
  if (!name) throw new Error(`Batch ${batch.id} is ${batch.state} and has no file.`);
  const stored = await loadBatch({ jobId: job.id, name, sha256: batch.fileSha256 ?? null });
  if (stored) return stored;
  const present = await Job.findByPk(job.id);
  if (present?.archiveRevision !== job.archiveRevision)
    throw new Error(`The batches of ${job.id} have made room for its results.`);
  log().warn({ jobId: job.id, batchId: batch.id }, 'batch file lost or damaged; computing it again');
  const content = await executor().run(
    batchTask({
      job,
      networks: await networksOfJob(job),
      firstReplicate: batch.firstReplicate,
      replicateCount: batch.completeReplicates,
    }),
  );
  const events = eventsPerCycle(content.points).reduce((sum, value) => sum + value, 0);
  if (content.replicateCount !== batch.completeReplicates || events !== batch.events)
    throw new Error(`Batch ${batch.id} came out differently when computed again.`);
  await storeBatch({ jobId: job.id, name, content: { ...content, failure: batch.failure ?? null } });
  return content;
}
