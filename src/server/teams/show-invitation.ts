/** What an invitation offers, to whoever holds its token; looking does not use it up. */
import { Team, User } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { deadLink, findLink } from '../auth/one-time-links.ts';
import type { Visitor } from '../auth/visitor.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { presentInvitation, type PresentedInvitation } from './list-invitations.ts';

export interface ShownInvitation extends Pick<PresentedInvitation, 'email' | 'invitedBy' | 'roles' | 'expiresAt'> {
  teamName: string;
  /** Whether to sign in first or to choose a password. */
  hasAccount: boolean;
}

export async function showInvitation(options: {
  token: string;
  visitor: Pick<Visitor, 'address'>;
}): Promise<Result<{ invitation: ShownInvitation }>> {
  const attempt = await takeAttempt('linkByAddress', addressKey(options.visitor.address));
  if (!attempt.ok) return attempt;
  const found = await findLink({ token: options.token, purpose: 'invitation' });
  if (!found.ok) return found;
  const team = await Team.findByPk(found.value.teamId ?? '');
  if (!team) return deadLink();
  const { email, invitedBy, roles, expiresAt } = await presentInvitation(found.value);
  const hasAccount = (await User.count({ where: { email } })) > 0;
  return accept({ invitation: { email, teamName: team.name, invitedBy, roles, expiresAt, hasAccount } });
}
