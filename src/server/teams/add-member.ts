/** Puts a person into a team; a present member is refused. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Membership } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';

export async function addMember(options: {
  teamId: string;
  userId: string;
  roles: Role[];
}): Promise<Result<Membership>> {
  const { teamId, userId, roles } = options;
  return inWriteTransaction(async () => {
    if (await Membership.findOne({ where: { teamId, userId, removedAt: null } }))
      return refuse('already_a_member', 'This person is already a member of the team.');
    if ((await Membership.count({ where: { teamId, removedAt: null } })) >= limits.membersPerTeam)
      return refuse('limit_reached', `A team has at most ${limits.membersPerTeam} members.`);
    return accept(await Membership.create({ id: newId('membership'), teamId, userId, roles, createdAt: nowText() }));
  });
}
