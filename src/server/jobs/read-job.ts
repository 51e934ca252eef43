/** Reads one job as it stands. */
import type { JobDocument } from '@/contracts/jobs.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { findJob } from './find-job.ts';
import { presentJob } from './present-job.ts';

export async function readJob(options: {
  actor: Actor;
  team: string;
  job: string;
}): Promise<Result<{ job: JobDocument }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:read' });
  if (!authorised.ok) return authorised;
  const job = await findJob({ teamId: authorised.value.team.id, job: options.job });
  return job.ok ? accept({ job: await presentJob(job.value) }) : job;
}
