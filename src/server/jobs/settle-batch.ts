/** Settles a computed batch: its file first, durably, then one transaction that marks it done and moves its charge. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Batch, Job } from '@db/models/jobs.ts';
import { eventsPerCycle } from '@/engine/run-points.ts';
import type { RunBatchAnswer } from '@workers/protocol.ts';
import { nowText } from '../clock.ts';
import { advancePrefix, type Advance } from './advance-prefix.ts';
import { storeBatch } from './batch-file.ts';
import { announceJobChange } from './job-changes.ts';
import { batchFileName } from './job-folder.ts';

const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0);

/** Settling a batch again, or one whose job has ended meanwhile, charges nothing. */
export async function settleBatch(options: {
  jobId: string;
  batchId: string;
  ordinal: number;
  answer: RunBatchAnswer;
}): Promise<Advance> {
  const { jobId, batchId, ordinal, answer } = options;
  const name = batchFileName(ordinal);
  const fileSha256 = await storeBatch({ jobId, name, content: answer });
  return inWriteTransaction(async () => {
    const job = (await Job.findByPk(jobId))!;
    const batch = (await Batch.findByPk(batchId))!;
    const events = sum(eventsPerCycle(answer.points));
    if (batch.state === 'discarded') await batch.update({ absorbedEvents: events, seconds: answer.seconds });
    if (batch.state === 'planned')
      await batch.update({
        state: 'done',
        completeReplicates: answer.replicateCount,
        events,
        failure: answer.failure,
        seconds: answer.seconds,
        file: name,
        fileSha256,
        doneAt: nowText(),
      });
    if (job.kernel === null) await job.update({ kernel: answer.kernel });
    const advance = await advancePrefix(job);
    afterCommit(() => announceJobChange(jobId));
    return advance;
  });
}
