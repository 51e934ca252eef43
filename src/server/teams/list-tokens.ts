/** API tokens of a team: one's own; an owner sees everybody's. Newest first; the secret is never shown again. */
import { Op } from 'sequelize';
import { ApiToken, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { TokenScope } from '@/domain/teams/permissions.ts';
import { usedByTokens } from '../budgets/check-token-cap.ts';
import { pageOf } from '../http/page-of.ts';
import { authorise, type Authorised } from './authorise.ts';

export interface PresentedToken {
  id: string;
  name: string;
  person: { id: string; name: string };
  scopes: TokenScope[];
  capMicrocredits: number | null;
  usedMicrocredits: number;
  createdAt: string;
  expiresAt: string | null;
  lastUsedAt: string | null;
  revokedAt: string | null;
}

export const presentToken = (row: ApiToken, user: User, usedMicrocredits: number): PresentedToken => {
  const { id, name, scopes, createdAt, expiresAt = null, lastUsedAt = null, revokedAt = null } = row;
  const person = { id: user.id, name: user.name };
  const { capMicrocredits = null } = row;
  return { id, name, person, scopes, capMicrocredits, usedMicrocredits, createdAt, expiresAt, lastUsedAt, revokedAt };
};

/** The tokens that an authorised person may see and revoke. */
export const tokensOf = ({ team, userId, roles }: Authorised): { teamId: string; userId?: string } => ({
  teamId: team.id,
  ...(roles.includes('owner') ? {} : { userId: userId ?? '' }),
});

export async function listTokens(options: {
  actor: Actor;
  team: string;
  limit?: number;
  cursor?: string | undefined;
}): Promise<Result<{ tokens: PresentedToken[]; nextCursor: string | null }>> {
  const { actor, limit = limits.listPageDefault, cursor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'tokens:manage' });
  if (!authorised.ok) return authorised;
  const found = await ApiToken.findAll({
    where: { ...tokensOf(authorised.value), ...(cursor ? { id: { [Op.lt]: cursor } } : {}) },
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const { rows, nextCursor } = pageOf(found, limit);
  const users = await User.findAll({ where: { id: rows.map(({ userId }) => userId) } });
  const byId = new Map(users.map((user) => [user.id, user]));
  const used = await usedByTokens(rows.map(({ id }) => id));
  const tokens = rows.map((row) => presentToken(row, byId.get(row.userId)!, used.get(row.id) ?? 0));
  return accept({ tokens, nextCursor });
}
