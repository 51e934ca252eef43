/** Has one batch of a job computed, bounded by what its segment can still pay for. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Job, Segment } from '@db/models/jobs.ts';
import { eventsWithinCap } from '@/domain/jobs/longest-prefix.ts';
import { stepJob } from '@/domain/jobs/job-state.ts';
import type { RunBatchAnswer } from '@workers/protocol.ts';
import { nowText } from '../clock.ts';
import { batchTask } from './batch-task.ts';
import { executor } from './executor.ts';
import { announceJobChange } from './job-changes.ts';
import type { OpenJob, WaitingBatch } from './open-job.ts';

export async function runBatch(options: {
  open: OpenJob;
  batch: WaitingBatch;
  signal: AbortSignal;
}): Promise<RunBatchAnswer> {
  const { open, batch, signal } = options;
  const job = await started(open.jobId);
  const segment = (await Segment.findByPk(batch.segmentId))!;
  const most = eventsWithinCap(segment.capMicrocredits, segment.microcreditsPerMillionEvents);
  const left = most === null ? null : Number(most - BigInt(segment.events));
  const task = batchTask({
    job,
    networks: open.networks,
    firstReplicate: batch.firstReplicate,
    replicateCount: batch.replicateCount,
    // With several points the budget would run out at one of them first, and cut the cycle elsewhere than the cap does.
    eventBudgetPerBatch:
      left === null || left > Number.MAX_SAFE_INTEGER || open.networks.length > 1 ? null : Math.max(0, left),
  });
  return executor().run(task, { signal });
}

/** The job's row; its first batch sets it running. */
async function started(jobId: string): Promise<Job> {
  const job = (await Job.findByPk(jobId))!;
  if (job.state !== 'queued') return job;
  await inWriteTransaction(async () => {
    await job.reload();
    if (!stepJob(job.state, 'running').ok || job.state !== 'queued') return;
    await job.update({ state: 'running', startedAt: job.startedAt ?? nowText() });
  });
  announceJobChange(jobId);
  return job;
}
