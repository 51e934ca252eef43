/** Stops a job: what its complete prefix holds is kept and charged, everything else is given back. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { stepJob } from '@/domain/jobs/job-state.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { endJob } from './end-job.ts';
import { findJob } from './find-job.ts';
import { announceJobChange, wakeDispatcher } from './job-changes.ts';
import { presentJob } from './present-job.ts';

export async function cancelJob(options: {
  actor: Actor;
  team: string;
  job: string;
}): Promise<Result<{ job: JobDocument }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:launch' });
  if (!authorised.ok) return authorised;
  return inWriteTransaction(async () => {
    const found = await findJob({ teamId: authorised.value.team.id, job: options.job });
    if (!found.ok) return found;
    const job = found.value;
    const step = stepJob(job.state, 'cancelled');
    if (!step.ok) return step;
    if (job.ending)
      return refuse('job_not_running', 'This job has computed all it will; its results are being written.');
    await endJob(job, {
      state: 'cancelled',
      reason: 'cancelled',
      detail:
        job.replicatesDone > 0
          ? `Cancelled; the first ${job.replicatesDone.toLocaleString('en')} replicates were kept and charged.`
          : 'Cancelled before a replicate was complete; nothing was charged.',
      failure: null,
    });
    afterCommit(() => {
      announceJobChange(job.id);
      wakeDispatcher(job.id);
    });
    return accept({ job: await presentJob(job) });
  });
}
