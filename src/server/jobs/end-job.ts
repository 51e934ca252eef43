/** Settles how a job ends: nothing more joins it. Results and archive are written after this, then it is in force. */
import { Op } from 'sequelize';
import { database } from '@db/connection.ts';
import { Batch, type Job } from '@db/models/jobs.ts';
import type { JobEnding } from '@/domain/jobs/job-inputs.ts';

/** Inside a write transaction. What was computed past the prefix is discarded: recorded as absorbed, never charged. */
export async function endJob(job: Job, ending: JobEnding): Promise<void> {
  await Batch.update(
    { state: 'discarded', absorbedEvents: database().literal('absorbedEvents + events') as unknown as number },
    { where: { jobId: job.id, state: { [Op.in]: ['planned', 'done'] } } },
  );
  await job.update({ ending });
}
