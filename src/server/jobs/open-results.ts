/** Opens the ensemble of a job's complete prefix for a reader of results. */
import type { Job } from '@db/models/jobs.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { EnsembleSummary } from '@/engine/ensemble.ts';
import { authorise } from '../teams/authorise.ts';
import { findJob } from './find-job.ts';
import { prefixEnsemble, type PrefixEnsemble } from './prefix-ensemble.ts';
import { pointsOf } from '@/domain/jobs/sweep.ts';
import type { PointEnsemble } from '@/archives/ensemble.ts';

export interface OpenResults {
  job: Job;
  /** Complete at every point. */
  replicates: number;
  /** Of all points. */
  points: PointEnsemble[];
  /** Of the point asked for. */
  ensemble: PointEnsemble;
  summary: EnsembleSummary;
}

export async function openResults(options: {
  actor: Actor;
  team: string;
  job: string;
  point: number;
}): Promise<Result<OpenResults>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'results:read' });
  if (!authorised.ok) return authorised;
  const found = await findJob({ teamId: authorised.value.team.id, job: options.job });
  if (!found.ok) return found;
  const job = found.value;
  const points = pointsOf(job.inputs);
  if (options.point >= points) {
    const message = points === 1 ? 'This job has one point: 0.' : `This job has points 0 to ${points - 1}.`;
    return refuse('invalid_input', message, { errors: [{ path: 'query.point', code: 'unknown_point', message }] });
  }
  if (job.replicatesDone === 0)
    return refuse(
      'results_not_ready',
      job.finishedAt ? 'This job ended before a replicate was complete.' : 'No replicate is complete yet.',
    );
  const { points: ensembles, replicates } = await ensembleOf(job);
  const ensemble = ensembles[options.point];
  return ensemble
    ? accept({ job, replicates, points: ensembles, ensemble, summary: ensemble.summary })
    : refuse('results_not_ready', 'No replicate is complete yet.');
}

/** Files of batches go once the job's results are written; whoever was in between looks again. */
async function ensembleOf(job: Job): Promise<PrefixEnsemble> {
  const { archiveRevision } = job;
  try {
    return await prefixEnsemble(job);
  } catch (error) {
    await job.reload();
    if (job.archiveRevision === archiveRevision) throw error;
    return prefixEnsemble(job);
  }
}
