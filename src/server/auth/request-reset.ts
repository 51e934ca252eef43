/** Sends a link that sets a new password, if the address has an account; the answer never tells. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { User } from '@db/models/people.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { addressKey, takeAttempt } from '../http/rate-limit.ts';
import { queueMail } from '../mail/queue-mail.ts';
import { resetLetter } from './auth-letters.ts';
import { issueLink } from './one-time-links.ts';
import type { Visitor } from './visitor.ts';

export async function requestReset(options: {
  email: string;
  visitor: Pick<Visitor, 'address'>;
}): Promise<Result<{ message: string }>> {
  const { email, visitor } = options;
  const byAddress = await takeAttempt('mailByAddress', addressKey(visitor.address));
  if (!byAddress.ok) return byAddress;
  const byRecipient = await takeAttempt('resetMailByRecipient', email);
  if (!byRecipient.ok) return byRecipient;
  await inWriteTransaction(async () => {
    const user = await User.findOne({ where: { email } });
    if (!user) return;
    const lifetimeMs = limits.resetMinutes * 60 * 1000;
    const { link, token } = await issueLink({ purpose: 'reset', email, userId: user.id, lifetimeMs });
    await queueMail({ to: email, ...resetLetter(token), messageKey: `reset:${link.id}` });
  });
  return accept({ message: `If ${email} has an account, a mail with a link is on its way to it.` });
}
