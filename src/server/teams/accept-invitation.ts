/**
 * Joins the team that invites: the person signed in under the invited address, or, where that address has no account,
 * somebody who names a password. The token came by mail, so it proves the address.
 */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Team, User, type OneTimeLink } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { weaknessOfPassword } from '@/domain/teams/check-password.ts';
import { beginSession, type BegunSession } from '../auth/begin-session.ts';
import { createPerson } from '../auth/create-person.ts';
import { deadLink, findLink, useLink } from '../auth/one-time-links.ts';
import { hashPassword } from '../auth/password-hash.ts';
import { presentPerson, type PresentedPerson } from '../auth/present-person.ts';
import { weakPassword } from '../auth/sign-up.ts';
import type { Visitor } from '../auth/visitor.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { addMember } from './add-member.ts';

export interface AcceptInvitationOptions {
  actor: Actor;
  token: string;
  /** For a new account. */
  name?: string | undefined;
  password?: string | undefined;
  visitor: Visitor;
}

export interface Joined {
  /** For a new account; the one signed in keeps theirs. */
  session: BegunSession | null;
  answer: PresentedPerson & { team: PresentedPerson['teams'][number] };
}

export async function acceptInvitation(options: AcceptInvitationOptions): Promise<Result<Joined>> {
  const { actor, token, visitor } = options;
  const attempt = await takeAttempt('linkByAddress', addressKey(visitor.address));
  if (!attempt.ok) return attempt;
  const found = await findLink({ token, purpose: 'invitation' });
  if (!found.ok) return found;
  const link = found.value;
  const invited = await User.findOne({ where: { email: link.email } });
  if (actor.kind === 'user') {
    if (invited?.id !== actor.userId)
      return refuse(
        'forbidden',
        `This invitation is for ${link.email}. Sign out, then open the link again under that address.`,
      );
    return inWriteTransaction(() => join({ link, user: invited, session: null }));
  }
  if (invited)
    return refuse('not_signed_in', `${link.email} has an account. Sign in with it, then open the link again.`);
  return joinNewPerson(link, options);
}

async function joinNewPerson(link: OneTimeLink, options: AcceptInvitationOptions): Promise<Result<Joined>> {
  const { name, password, visitor } = options;
  const missing = [
    ...(name === undefined ? [{ path: 'name', code: 'missing', message: 'Your name is needed.' }] : []),
    ...(password === undefined ? [{ path: 'password', code: 'missing', message: 'Choose a password.' }] : []),
  ];
  if (name === undefined || password === undefined)
    return refuse('invalid_input', 'A new account needs a name and a password.', { errors: missing });
  const { email } = link;
  const weakness = weaknessOfPassword(password, { email, names: [name] });
  if (weakness) return weakPassword(weakness, 'password');
  const passwordHash = await hashPassword(password);
  return inWriteTransaction(async () => {
    if (await User.findOne({ where: { email } })) return deadLink();
    const user = await createPerson({ email, name, passwordHash });
    return join({ link, user, session: await beginSession({ userId: user.id, visitor }) });
  });
}

async function join(options: { link: OneTimeLink; user: User; session: BegunSession | null }): Promise<Result<Joined>> {
  const { link, user, session } = options;
  const used = await useLink(link);
  if (!used.ok) return used;
  const team = await Team.findByPk(link.teamId ?? '');
  if (!team) return deadLink();
  const roles = link.roles ?? [];
  const member = await addMember({ teamId: team.id, userId: user.id, roles });
  if (!member.ok) return member;
  return accept({
    session,
    answer: { ...(await presentPerson(user.id)), team: { slug: team.slug, name: team.name, roles } },
  });
}
