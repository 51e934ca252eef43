/** Removes a member; their work and history stay with the team, and a job of theirs that runs goes on. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from './authorise.ts';
import { endMembership } from './end-membership.ts';
import { findMember, noSuchMember } from './find-member.ts';

export async function removeMember(options: { actor: Actor; team: string; member: string }): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const member = await findMember(authorised.value.team.id, { id: options.member });
    return member ? endMembership(member) : noSuchMember();
  });
}
