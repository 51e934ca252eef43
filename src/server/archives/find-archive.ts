/** The archive of a job's newest revision, for whoever may read results. */
import type { Job } from '@db/models/jobs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { archiveFileName, jobFile } from '../jobs/job-folder.ts';
import { findJob } from '../jobs/find-job.ts';
import { authorise } from '../teams/authorise.ts';

export async function findArchive(options: {
  actor: Actor;
  team: string;
  job: string;
}): Promise<Result<{ job: Job; file: string; sha256: string }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'results:read' });
  if (!authorised.ok) return authorised;
  const found = await findJob({ teamId: authorised.value.team.id, job: options.job });
  if (!found.ok) return found;
  const job = found.value;
  if (!job.archiveSha256 || job.archiveRevision === 0)
    return refuse('results_not_ready', 'This job has no archive: it has not finished, or no replicate was complete.');
  return accept({ job, file: jobFile(job.id, archiveFileName(job.archiveRevision)), sha256: job.archiveSha256 });
}
