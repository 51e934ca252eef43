/** Project codes of a team, newest first. */
import { Op } from 'sequelize';
import { ProjectCode } from '@db/models/teams.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { pageOf } from '../http/page-of.ts';
import { authorise } from './authorise.ts';

export interface PresentedProjectCode {
  id: string;
  code: string;
  client: string | null;
  poNumber: string | null;
  closedAt: string | null;
  createdAt: string;
}

export const presentProjectCode = (row: ProjectCode): PresentedProjectCode => {
  const { id, code, client = null, poNumber = null, closedAt = null, createdAt } = row;
  return { id, code, client, poNumber, closedAt, createdAt };
};

export async function listProjectCodes(options: {
  actor: Actor;
  team: string;
  limit?: number;
  cursor?: string | undefined;
}): Promise<Result<{ projectCodes: PresentedProjectCode[]; nextCursor: string | null }>> {
  const { actor, limit = limits.listPageDefault, cursor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'team:read' });
  if (!authorised.ok) return authorised;
  const found = await ProjectCode.findAll({
    where: { teamId: authorised.value.team.id, ...(cursor ? { id: { [Op.lt]: cursor } } : {}) },
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const { rows, nextCursor } = pageOf(found, limit);
  return accept({ projectCodes: rows.map(presentProjectCode), nextCursor });
}
