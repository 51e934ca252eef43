/** Withdraws an invitation: its link ends at once. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { OneTimeLink } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { nowText } from '../clock.ts';
import { authorise } from './authorise.ts';
import { openInvitation } from './list-invitations.ts';

export async function revokeInvitation(options: {
  actor: Actor;
  team: string;
  invitation: string;
}): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const where = { ...openInvitation(authorised.value.team.id), id: options.invitation };
    const [changed] = await OneTimeLink.update({ revokedAt: nowText() }, { where });
    return changed === 1 ? accept(null) : refuse('not_found', 'There is no such open invitation in this team.');
  });
}
