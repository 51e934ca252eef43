/** Asks the person signed in for their password again, before an act that a stranger at their desk must not do. */
import type { User } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { addressKey, giveBackAttempt, takeAttempt } from '../http/rate-limit.ts';
import { passwordMatches } from './password-hash.ts';
import type { Visitor } from './visitor.ts';

export async function checkPresentPassword(options: {
  user: User;
  presentPassword: string;
  visitor: Visitor;
}): Promise<Result<null>> {
  const { user, presentPassword, visitor } = options;
  const key = `${addressKey(visitor.address)} ${user.email}`;
  const attempt = await takeAttempt('signInByAddressAndAccount', key);
  if (!attempt.ok) return attempt;
  if (!(await passwordMatches(presentPassword, user.passwordHash)))
    return refuse('wrong_credentials', 'This is not your present password; nothing was changed.');
  await giveBackAttempt('signInByAddressAndAccount', key);
  return accept(null);
}
