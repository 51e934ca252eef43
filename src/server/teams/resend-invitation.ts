/** Sends an invitation again, expired or not, with a new link; the old link ends. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { OneTimeLink } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { hashSecret, newSecret } from '../auth/secret-hash.ts';
import { nowText } from '../clock.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { authorise } from './authorise.ts';
import { invitationLifetimeMs, takeInvitationMail } from './invite-member.ts';
import { openInvitation, presentInvitation, type PresentedInvitation } from './list-invitations.ts';
import { invitationLetter } from './team-letters.ts';

export async function resendInvitation(options: {
  actor: Actor;
  team: string;
  invitation: string;
}): Promise<Result<{ invitation: PresentedInvitation }>> {
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor: options.actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const { team } = authorised.value;
    const link = await OneTimeLink.findOne({ where: { ...openInvitation(team.id), id: options.invitation } });
    if (!link) return refuse('not_found', 'There is no such open invitation in this team.');
    const mayMail = await takeInvitationMail({ email: link.email, teamId: team.id });
    if (!mayMail.ok) return mayMail;
    const token = newSecret();
    await link.update({ tokenHash: hashSecret(token), expiresAt: nowText(invitationLifetimeMs) });
    const invitation = await presentInvitation(link);
    const { invitedBy, roles, email } = invitation;
    const letter = invitationLetter({ teamName: team.name, invitedBy, roles, token });
    await queueMail({ to: email, ...letter, messageKey: `invitation:${link.tokenHash}` });
    return accept({ invitation });
  });
}
