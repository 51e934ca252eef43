/**
 * Takes a wish for an account. The answer and the work are the same for a known and an unknown address; only the mail
 * tells them apart. Nothing exists until the address is verified, so a wish for somebody else's address binds nobody.
 */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { weaknessOfPassword } from '@/domain/teams/check-password.ts';
import { nowText } from '../clock.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { alreadyRegisteredLetter, verifyLetter } from './auth-letters.ts';
import { issueLink } from './one-time-links.ts';
import { hashPassword } from './password-hash.ts';
import type { Visitor } from './visitor.ts';

export interface SignUpOptions {
  email: string;
  name: string;
  password: string;
  teamName: string;
  visitor: Pick<Visitor, 'address'>;
}

export async function signUp(options: SignUpOptions): Promise<Result<{ message: string }>> {
  const { email, name, password, teamName, visitor } = options;
  const weakness = weaknessOfPassword(password, { email, names: [name, teamName] });
  if (weakness) return weakPassword(weakness, 'password');
  const byAddress = await takeAttempt('mailByAddress', addressKey(visitor.address));
  if (!byAddress.ok) return byAddress;
  const byRecipient = await takeAttempt('signUpMailByRecipient', email);
  if (!byRecipient.ok) return byRecipient;

  const passwordHash = await hashPassword(password);
  await inWriteTransaction(async () => {
    const { link, token } = await issueLink({
      purpose: 'verify',
      email,
      lifetimeMs: limits.linkHours * 60 * 60 * 1000,
      details: { name, teamName, passwordHash },
    });
    const known = await User.findOne({ where: { email } });
    if (known) await link.update({ revokedAt: nowText(), details: null });
    const letter = known ? alreadyRegisteredLetter() : verifyLetter(token);
    await queueMail({ to: email, ...letter, messageKey: `sign-up:${link.id}` });
  });
  return accept({
    message: `We have sent a mail to ${email}. Follow its link within ${limits.linkHours} hours to open the account.`,
  });
}

export const weakPassword = (weakness: string, path: string): ReturnType<typeof refuse> =>
  refuse('password_too_weak', weakness, { errors: [{ path, code: 'password_too_weak', message: weakness }] });
