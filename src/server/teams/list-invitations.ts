/** Invitations that are neither accepted nor withdrawn, newest first. */
import { Op } from 'sequelize';
import { OneTimeLink, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { nowText } from '../clock.ts';
import { pageOf } from '../http/page-of.ts';
import { authorise } from './authorise.ts';

export interface PresentedInvitation {
  id: string;
  email: string;
  roles: Role[];
  /** Name of the person who invites. */
  invitedBy: string;
  createdAt: string;
  expiresAt: string;
  expired: boolean;
}

export async function presentInvitation(link: OneTimeLink): Promise<PresentedInvitation> {
  const { id, email, createdAt, expiresAt } = link;
  const inviter = link.invitedBy ? await User.findByPk(link.invitedBy) : null;
  const invitedBy = inviter?.name ?? 'Burette';
  return { id, email, roles: link.roles ?? [], invitedBy, createdAt, expiresAt, expired: expiresAt <= nowText() };
}

/** What an open invitation of a team is, for finding them. */
export const openInvitation = (teamId: string) => ({ teamId, purpose: 'invitation', usedAt: null, revokedAt: null });

export async function listInvitations(options: {
  actor: Actor;
  team: string;
  limit?: number;
  cursor?: string | undefined;
}): Promise<Result<{ invitations: PresentedInvitation[]; nextCursor: string | null }>> {
  const { actor, limit = limits.listPageDefault, cursor } = options;
  const authorised = await authorise({ actor, team: options.team, permission: 'team:manage' });
  if (!authorised.ok) return authorised;
  const found = await OneTimeLink.findAll({
    where: { ...openInvitation(authorised.value.team.id), ...(cursor ? { id: { [Op.lt]: cursor } } : {}) },
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const { rows, nextCursor } = pageOf(found, limit);
  const invitations: PresentedInvitation[] = [];
  for (const row of rows) invitations.push(await presentInvitation(row));
  return accept({ invitations, nextCursor });
}
