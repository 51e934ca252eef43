/** Leaves a team oneself. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import type { Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from './authorise.ts';
import { endMembership } from './end-membership.ts';
import { findMember, noSuchMember } from './find-member.ts';

export async function leaveTeam(options: { actor: Actor; team: string }): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'membership:leave' });
    if (!authorised.ok) return authorised;
    const { team, userId } = authorised.value;
    const member = userId ? await findMember(team.id, { userId }) : null;
    return member ? endMembership(member) : noSuchMember();
  });
}
