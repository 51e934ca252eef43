/** Members of a team, longest-standing first. */
import { Op } from 'sequelize';
import { Membership, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { pageOf } from '../http/page-of.ts';
import { authorise } from './authorise.ts';

export interface PresentedMember {
  id: string;
  userId: string;
  name: string;
  email: string;
  roles: Role[];
  joinedAt: string;
}

export const presentMember = ({ id, userId, roles, createdAt }: Membership, user: User): PresentedMember => ({
  id,
  userId,
  name: user.name,
  email: user.email,
  roles,
  joinedAt: createdAt,
});

export async function listMembers(options: {
  actor: Actor;
  team: string;
  limit?: number;
  cursor?: string | undefined;
}): Promise<Result<{ members: PresentedMember[]; nextCursor: string | null }>> {
  const { actor, limit = limits.listPageDefault, cursor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'team:read' });
  if (!authorised.ok) return authorised;
  const found = await Membership.findAll({
    where: { teamId: authorised.value.team.id, removedAt: null, ...(cursor ? { id: { [Op.gt]: cursor } } : {}) },
    order: [['id', 'ASC']],
    limit: limit + 1,
  });
  const { rows, nextCursor } = pageOf(found, limit);
  const users = await User.findAll({ where: { id: rows.map(({ userId }) => userId) } });
  const byId = new Map(users.map((user) => [user.id, user]));
  return accept({ members: rows.map((row) => presentMember(row, byId.get(row.userId)!)), nextCursor });
}
