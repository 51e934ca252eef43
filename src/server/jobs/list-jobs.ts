/** Lists a team's jobs, newest first, with filters. */
import { Op, type WhereOptions } from 'sequelize';
import { Job } from '@db/models/jobs.ts';
import { ProjectCode } from '@db/models/teams.ts';
import type { JobDocument } from '@/contracts/jobs.ts';
import { jobStates, type JobState } from '@/domain/jobs/job-state.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentJobs } from './present-job.ts';

export async function listJobs(options: {
  actor: Actor;
  team: string;
  limit?: number | undefined;
  cursor?: string | undefined;
  /** One state, or several with commas. */
  state?: string | undefined;
  model?: string | undefined;
  member?: string | undefined;
  /** Id or code. */
  projectCode?: string | undefined;
}): Promise<Result<{ jobs: JobDocument[]; nextCursor: string | null }>> {
  const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'jobs:read' });
  if (!authorised.ok) return authorised;
  const teamId = authorised.value.team.id;
  const states = options.state?.split(',').map((state) => state.trim());
  const unknown = states?.find((state) => !jobStates.includes(state as JobState));
  if (unknown !== undefined)
    return refuse('invalid_input', `There is no state “${unknown}”. States: ${jobStates.join(', ')}.`, {
      errors: [{ path: 'query.state', code: 'unknown_state', message: `Unknown state “${unknown}”.` }],
    });
  const where: WhereOptions = { teamId };
  if (options.cursor) where['id'] = { [Op.lt]: options.cursor };
  if (states) where['state'] = states;
  if (options.model) where['modelId'] = options.model;
  if (options.member) where['userId'] = options.member;
  if (options.projectCode) {
    const code = options.projectCode;
    const found = await ProjectCode.findOne({ where: { teamId, [Op.or]: [{ id: code }, { code }] } });
    where['projectCodeId'] = found?.id ?? 'none';
  }
  const limit = options.limit ?? limits.listPageDefault;
  const rows = await Job.findAll({ where, order: [['id', 'DESC']], limit: limit + 1 });
  const page = rows.slice(0, limit);
  return accept({
    jobs: await presentJobs(page),
    nextCursor: rows.length > limit ? (page.at(-1)?.id ?? null) : null,
  });
}
