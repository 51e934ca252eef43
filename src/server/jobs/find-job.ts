/** Finds a job inside a team; what belongs to another team does not exist. */
import { Job } from '@db/models/jobs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';

export async function findJob(options: { teamId: string; job: string }): Promise<Result<Job>> {
  const job = await Job.findOne({ where: { id: options.job, teamId: options.teamId } });
  return job ? accept(job) : refuse('not_found', 'There is no such job in this team.');
}
