/** Writes the results and the archive of a job whose end is settled, then puts the end in force: hold, state, mail. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Job, Segment } from '@db/models/jobs.ts';
import { Team, User } from '@db/models/people.ts';
import { isFinal, stepJob } from '@/domain/jobs/job-state.ts';
import { nowText } from '../clock.ts';
import { releaseHold } from '../ledger/release-hold.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { announceJobChange } from './job-changes.ts';
import { removeOutdatedFiles } from './job-folder.ts';
import { jobEndedMail } from './job-ended-mail.ts';
import { queueJobWebhook } from './queue-job-webhook.ts';
import { writeResults } from './write-results.ts';

/** Finishing again, after a crash anywhere in between, writes the same results and releases nothing twice. */
export async function finishJob(jobId: string): Promise<void> {
  const job = await Job.findByPk(jobId);
  if (!job || isFinal(job.state) || !job.ending) return;
  const finishedAt = nowText();
  const written = job.replicatesDone > 0 ? await writeResults(job, finishedAt) : null;
  await inWriteTransaction(async () => {
    await job.reload();
    const { ending } = job;
    if (isFinal(job.state) || !ending) return;
    const { state } = ending;
    const step = stepJob(job.state, state);
    if (!step.ok) throw new Error(step.detail);
    await releaseSegments(job);
    await job.update({ ...written, state, heldMicrocredits: 0, finishedAt });
    await tellLauncher(job);
    await queueJobWebhook(job);
    afterCommit(() => announceJobChange(jobId));
  });
  await removeOutdatedFiles(jobId, job.archiveRevision);
}

async function releaseSegments(job: Job): Promise<void> {
  for (const segment of await Segment.findAll({ where: { jobId: job.id, releasedAt: null } })) {
    await releaseHold({ teamId: job.teamId, jobId: job.id, segmentId: segment.id, releaseId: segment.id });
    await segment.update({ releasedAt: nowText() });
  }
}

async function tellLauncher(job: Job): Promise<void> {
  const [user, team] = [await User.findByPk(job.userId), await Team.findByPk(job.teamId)];
  if (!user || !team) return;
  await queueMail({
    to: user.email,
    ...jobEndedMail({ job, team: team.slug, name: user.name }),
    messageKey: `job-ended:${job.id}:${job.archiveRevision}:${job.finishedAt}`,
  });
}
