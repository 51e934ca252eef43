/** Invites somebody by e-mail; a second invitation of the same address replaces the first. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Membership, OneTimeLink, User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { Role } from '@/domain/teams/permissions.ts';
import { issueLink, withdrawLinks } from '../auth/one-time-links.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { takeAttempt } from '../http/rate-limit.ts';
import { authorise } from './authorise.ts';
import { openInvitation, presentInvitation, type PresentedInvitation } from './list-invitations.ts';
import { invitationLetter } from './team-letters.ts';

export const invitationLifetimeMs = limits.invitationDays * 24 * 60 * 60 * 1000;

export async function inviteMember(options: {
  actor: Actor;
  team: string;
  email: string;
  roles: Role[];
}): Promise<Result<{ invitation: PresentedInvitation }>> {
  const { actor, email, roles } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const { team, userId } = authorised.value;
    const known = await User.findOne({ where: { email } });
    if (known && (await Membership.findOne({ where: { teamId: team.id, userId: known.id, removedAt: null } })))
      return refuse('already_a_member', `${email} is already a member of this team.`);
    await withdrawLinks({ purpose: 'invitation', teamId: team.id, email });
    if ((await OneTimeLink.count({ where: openInvitation(team.id) })) >= limits.openInvitationsPerTeam)
      return refuse(
        'limit_reached',
        `A team has at most ${limits.openInvitationsPerTeam} open invitations. Withdraw some first.`,
      );
    const mayMail = await takeInvitationMail({ email, teamId: team.id });
    if (!mayMail.ok) return mayMail;
    const { link, token } = await issueLink({
      purpose: 'invitation',
      email,
      teamId: team.id,
      roles,
      lifetimeMs: invitationLifetimeMs,
      ...(userId ? { invitedBy: userId } : {}),
    });
    const invitation = await presentInvitation(link);
    const letter = invitationLetter({ teamName: team.name, invitedBy: invitation.invitedBy, roles, token });
    await queueMail({ to: email, ...letter, messageKey: `invitation:${link.tokenHash}` });
    return accept({ invitation });
  });
}

/** Invitations carry words that the inviter chose, so a team cannot send them without end. */
export async function takeInvitationMail(options: { email: string; teamId: string }): Promise<Result<null>> {
  const byRecipient = await takeAttempt('invitationMailByRecipient', options.email);
  return byRecipient.ok ? takeAttempt('invitationMailByTeam', options.teamId) : byRecipient;
}
