/**
 * Signs somebody in by e-mail and password.
 *
 * Guessing is slowed by address, by address and account, and by account. The last would let anybody shut a person out,
 * so it spares addresses at which the person has a session; a reset by mail makes a new address such a place.
 */
import { Session, User } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { addressKey, forgetAttempts, giveBackAttempt, takeAttempt, type LimitName } from '../http/rate-limit.ts';
import { beginSession, type BegunSession } from './begin-session.ts';
import { checkSecondFactor } from './check-second-factor.ts';
import { passwordMatches } from './password-hash.ts';
import { presentPerson, type PresentedPerson } from './present-person.ts';
import type { Visitor } from './visitor.ts';

export interface SignInOptions {
  email: string;
  password: string;
  /** Of the second factor, where there is one. */
  code?: string | undefined;
  visitor: Visitor;
}

export async function signIn(
  options: SignInOptions,
): Promise<Result<{ session: BegunSession; answer: PresentedPerson }>> {
  const { email, password, code, visitor } = options;
  const user = await User.findOne({ where: { email } });
  const address = addressKey(visitor.address);
  const counters: [LimitName, string][] = [
    ['signInByAddress', address],
    ['signInByAddressAndAccount', `${address} ${email}`],
  ];
  if (!(await isAtHome(user, address))) counters.push(['signInByAccount', email]);
  for (const [name, key] of counters) {
    const attempt = await takeAttempt(name, key);
    if (!attempt.ok) return attempt;
  }
  if (!(await passwordMatches(password, user?.passwordHash)) || !user)
    return refuse(
      'wrong_credentials',
      'E-mail and password do not belong together. If you have just signed up, follow the link in the mail first.',
    );
  for (const [name, key] of counters) await giveBackAttempt(name, key);
  await forgetAttempts('signInByAddressAndAccount', `${address} ${email}`);
  const second = await checkSecondFactor({ user, code });
  if (!second.ok) return second;
  const session = await beginSession({ userId: user.id, visitor });
  return accept({ session, answer: await presentPerson(user.id) });
}

async function isAtHome(user: User | null, address: string): Promise<boolean> {
  const sessions = await Session.findAll({ where: { userId: user?.id ?? '' }, attributes: ['address'] });
  return sessions.some((session) => session.address !== null && addressKey(session.address) === address);
}
