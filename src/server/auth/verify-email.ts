/**
 * Opens the account that a sign-up asked for: person, team, ownership, welcome grant, session, in one transaction.
 * The password is asked for again, so that following a link which a stranger had sent to you opens nothing for them.
 */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { grantCredits } from '../ledger/grant-credits.ts';
import { createTeam } from '../teams/create-team.ts';
import { beginSession, type BegunSession } from './begin-session.ts';
import { createPerson } from './create-person.ts';
import { deadLink, findLink, useLink } from './one-time-links.ts';
import { passwordMatches } from './password-hash.ts';
import { presentPerson, type PresentedPerson } from './present-person.ts';
import type { Visitor } from './visitor.ts';

/** Ten credits: enough for the quick start. */
const welcomeGrantMicrocredits = 10_000_000;

export interface Verified extends PresentedPerson {
  team: PresentedPerson['teams'][number];
}

export async function verifyEmail(options: {
  token: string;
  password: string;
  visitor: Visitor;
}): Promise<Result<{ session: BegunSession; answer: Verified }>> {
  const { token, password, visitor } = options;
  const attempt = await takeAttempt('linkByAddress', addressKey(visitor.address));
  if (!attempt.ok) return attempt;
  const found = await findLink({ token, purpose: 'verify' });
  if (!found.ok) return found;
  const link = found.value;
  const byLink = await takeAttempt('verifyByLink', link.id);
  if (!byLink.ok) return byLink;
  const { details, email } = link;
  if (!details) return deadLink();
  if (!(await passwordMatches(password, details.passwordHash)))
    return refuse('wrong_credentials', 'This is not the password that was chosen at sign-up. The link still works.');

  return inWriteTransaction(async () => {
    const used = await useLink(link);
    if (!used.ok) return used;
    if (await User.findOne({ where: { email } })) return deadLink();
    const person = await createPerson({ email, name: details.name, passwordHash: details.passwordHash });
    const team = await createTeam({ name: details.teamName, ownerUserId: person.id });
    await grantCredits({
      teamId: team.id,
      amountMicrocredits: welcomeGrantMicrocredits,
      reason: 'Welcome grant',
      grantId: `welcome:${team.id}`,
    });
    const session = await beginSession({ userId: person.id, visitor });
    const presented = await presentPerson(person.id);
    return accept({ session, answer: { ...presented, team: { slug: team.slug, name: team.name, roles: ['owner'] } } });
  });
}
