/** Changes a member's roles. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { authorise } from './authorise.ts';
import { findMember, isLastOwner, lastOwner, noSuchMember } from './find-member.ts';
import { presentMember, type PresentedMember } from './list-members.ts';

export async function changeMember(options: {
  actor: Actor;
  team: string;
  member: string;
  roles: Role[];
}): Promise<Result<{ member: PresentedMember }>> {
  const { actor, roles } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const member = await findMember(authorised.value.team.id, { id: options.member });
    if (!member) return noSuchMember();
    if (!roles.includes('owner') && (await isLastOwner(member))) return lastOwner();
    await member.update({ roles });
    const user = await User.findByPk(member.userId, { rejectOnEmpty: true });
    return accept({ member: presentMember(member, user) });
  });
}
