/** Changes one's password; every session ends and a new one begins here. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { weaknessOfPassword } from '@/domain/teams/check-password.ts';
import { newId } from '../ids.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { passwordChangedLetter } from './auth-letters.ts';
import { beginSession, type BegunSession } from './begin-session.ts';
import { checkPresentPassword } from './check-present-password.ts';
import { withdrawLinks } from './one-time-links.ts';
import { hashPassword } from './password-hash.ts';
import { requirePerson } from './require-person.ts';
import { sessions } from './sessions.ts';
import { weakPassword } from './sign-up.ts';
import type { Visitor } from './visitor.ts';

export async function changePassword(options: {
  actor: Actor;
  presentPassword: string;
  newPassword: string;
  visitor: Visitor;
}): Promise<Result<{ session: BegunSession }>> {
  const { actor, presentPassword, newPassword, visitor } = options;
  const person = await requirePerson(actor);
  if (!person.ok) return person;
  const { user } = person.value;
  const proven = await checkPresentPassword({ user, presentPassword, visitor });
  if (!proven.ok) return proven;
  const weakness = weaknessOfPassword(newPassword, { email: user.email, names: [user.name] });
  if (weakness) return weakPassword(weakness, 'newPassword');
  const passwordHash = await hashPassword(newPassword);
  return inWriteTransaction(async () => {
    await user.update({ passwordHash });
    await withdrawLinks({ purpose: 'reset', userId: user.id });
    await sessions().invalidateUserSessions(user.id);
    await queueMail({ to: user.email, ...passwordChangedLetter(), messageKey: `password-changed:${newId('link')}` });
    return accept({ session: await beginSession({ userId: user.id, visitor }) });
  });
}
