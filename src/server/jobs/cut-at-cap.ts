/**
 * Stops a job at its cap: the longest prefix of the boundary batch that fits is delivered, the rest is absorbed.
 *
 * The boundary batch is run again, shortened, so that its sums hold the delivered replicates alone; being
 * deterministic it gives the same ones.
 */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Batch, Job, Segment } from '@db/models/jobs.ts';
import { longestPrefix } from '@/domain/jobs/longest-prefix.ts';
import { eventsPerCycle } from '@/engine/run-points.ts';
import { joinBatch } from './advance-prefix.ts';
import { storeBatch, type BatchContent } from './batch-file.ts';
import { endJob } from './end-job.ts';
import { announceJobChange } from './job-changes.ts';
import { cutBatchFileName } from './job-folder.ts';

export async function cutAtCap(options: {
  batch: Batch;
  segment: Segment;
  /** The whole boundary batch, as stored. */
  content: BatchContent;
  /** Computes the first `replicates` of the batch. */
  runShortened: (replicates: number) => Promise<BatchContent>;
}): Promise<void> {
  const { batch, segment, content } = options;
  const fit = longestPrefix({
    eventsPerReplicate: eventsPerCycle(content.points),
    segmentEvents: segment.events,
    capMicrocredits: segment.capMicrocredits,
    microcreditsPerMillionEvents: segment.microcreditsPerMillionEvents,
  });
  const shortened = fit.replicates > 0 && fit.replicates < content.replicateCount;
  const file = shortened ? await storeShortened(options, fit.replicates) : null;
  await inWriteTransaction(async () => {
    const job = (await Job.findByPk(batch.jobId))!;
    const present = (await Batch.findByPk(batch.id))!;
    // Cancelled meanwhile, or cut before: then it is settled already.
    if (job.ending || present.state !== 'done') return;
    const segmentNow = (await Segment.findByPk(segment.id))!;
    if (file) await present.update(file);
    await joinBatch({
      job,
      segment: segmentNow,
      batch: present,
      replicates: fit.replicates,
      events: fit.events,
      absorbedEvents: present.events - fit.events,
    });
    await endJob(job, {
      state: 'stopped_at_cap',
      reason: 'cap_reached',
      detail:
        `The next replicate${content.points.length > 1 ? ' of every point' : ''} would have cost more than the cap. ${job.replicatesDone.toLocaleString('en')} of ` +
        `${job.replicatesPlanned.toLocaleString('en')} replicates are complete; what was computed past them was not charged.`,
      failure: null,
    });
    afterCommit(() => announceJobChange(job.id));
  });
}

async function storeShortened(
  options: Parameters<typeof cutAtCap>[0],
  replicates: number,
): Promise<{ file: string; fileSha256: string }> {
  const { batch } = options;
  const content = await options.runShortened(replicates);
  if (content.replicateCount !== replicates)
    throw new Error(`Batch ${batch.id} gave ${content.replicateCount} replicates when run again for ${replicates}.`);
  const file = cutBatchFileName(batch.ordinal);
  return { file, fileSha256: await storeBatch({ jobId: batch.jobId, name: file, content }) };
}
