/** A present membership of a team, and whether it is the team's only ownership. */
import { Op } from 'sequelize';
import { Membership } from '@db/models/people.ts';
import { refuse, type Refusal } from '@/domain/refusals.ts';

export const findMember = (teamId: string, where: { id: string } | { userId: string }): Promise<Membership | null> =>
  Membership.findOne({ where: { ...where, teamId, removedAt: null } });

/** Inside a write transaction, so that two owners cannot leave each other at once. */
export async function isLastOwner(member: Membership): Promise<boolean> {
  if (!member.roles.includes('owner')) return false;
  const others = await Membership.findAll({
    where: { teamId: member.teamId, removedAt: null, id: { [Op.ne]: member.id } },
  });
  return !others.some(({ roles }) => roles.includes('owner'));
}

export const lastOwner = (): Refusal =>
  refuse('last_owner', 'This is the team’s only owner. Make somebody else an owner first; nothing was changed.');

export const noSuchMember = (): Refusal => refuse('not_found', 'There is no such member in this team.');
