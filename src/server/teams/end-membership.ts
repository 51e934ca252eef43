/** Ends a membership: the row stays for the history, the person's tokens for this team are revoked. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { ApiToken, type Membership } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { isLastOwner, lastOwner } from './find-member.ts';

export async function endMembership(member: Membership): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    if (await isLastOwner(member)) return lastOwner();
    const now = nowText();
    await member.update({ removedAt: now });
    await ApiToken.update(
      { revokedAt: now },
      { where: { teamId: member.teamId, userId: member.userId, revokedAt: null } },
    );
    return accept(null);
  });
}
