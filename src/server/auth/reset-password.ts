/** Sets a new password by the link of a mail; every session ends and one begins here. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { weaknessOfPassword } from '@/domain/teams/check-password.ts';
import { addressKey, forgetAttempts, takeAttempt } from '../http/rate-limit.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { passwordChangedLetter } from './auth-letters.ts';
import { beginSession, type BegunSession } from './begin-session.ts';
import { checkSecondFactor } from './check-second-factor.ts';
import { deadLink, findLink, useLink, withdrawLinks } from './one-time-links.ts';
import { hashPassword } from './password-hash.ts';
import { presentPerson, type PresentedPerson } from './present-person.ts';
import { sessions } from './sessions.ts';
import { weakPassword } from './sign-up.ts';
import type { Visitor } from './visitor.ts';

export async function resetPassword(options: {
  token: string;
  password: string;
  /** Of the second factor, where there is one: a mailbox alone must not open the account. */
  code?: string | undefined;
  visitor: Visitor;
}): Promise<Result<{ session: BegunSession; answer: PresentedPerson }>> {
  const { token, password, visitor } = options;
  const attempt = await takeAttempt('linkByAddress', addressKey(visitor.address));
  if (!attempt.ok) return attempt;
  const found = await findLink({ token, purpose: 'reset' });
  if (!found.ok) return found;
  const link = found.value;
  const user = link.userId ? await User.findByPk(link.userId) : null;
  if (!user) return deadLink();
  const weakness = weaknessOfPassword(password, { email: user.email, names: [user.name] });
  if (weakness) return weakPassword(weakness, 'password');
  const second = await checkSecondFactor({ user, code: options.code });
  if (!second.ok) return second;
  const passwordHash = await hashPassword(password);

  const begun = await inWriteTransaction(async () => {
    const used = await useLink(link);
    if (!used.ok) return used;
    await user.update({ passwordHash });
    await withdrawLinks({ purpose: 'reset', userId: user.id });
    await sessions().invalidateUserSessions(user.id);
    await queueMail({ to: user.email, ...passwordChangedLetter(), messageKey: `password-changed:${link.id}` });
    const session = await beginSession({ userId: user.id, visitor });
    return accept({ session, answer: await presentPerson(user.id) });
  });
  if (begun.ok) await forgetAttempts('signInByAccount', user.email);
  return begun;
}
