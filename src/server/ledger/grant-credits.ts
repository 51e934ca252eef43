/** Gives credits that nobody paid for: a welcome, a goodwill correction. Each grant is a lot that is never refunded. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { newId } from '../ids.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';

export interface GrantCredits {
  teamId: string;
  amountMicrocredits: number;
  /** A sentence for the ledger's reader. */
  reason: string;
  /** Names this grant, such as `welcome:<teamId>`; the same one again changes nothing. */
  grantId: string;
  /** Who granted it; absent for our own processes. */
  userId?: string | null;
}

/** Joins the caller's write transaction. */
export async function grantCredits(options: GrantCredits): Promise<{ transactionId: string }> {
  const { teamId, amountMicrocredits, reason, grantId, userId } = options;
  if (amountMicrocredits <= 0) throw new Error('A grant is positive.');
  const transactionKey = `grant:${grantId}`;
  const postings = flows.grant(teamId, amountMicrocredits);
  return inWriteTransaction(async () => {
    const earlier = await findTransaction({ transactionKey, teamId, postings });
    if (earlier) return { transactionId: earlier.id };
    const transaction = await postTransaction({
      transactionKey,
      kind: 'grant',
      teamId,
      userId: userId ?? null,
      postings,
      lots: [
        {
          id: newId('lot'),
          teamId,
          source: 'grant',
          creditsMicrocredits: amountMicrocredits,
          netMinor: 0,
          currency: null,
          purchaseId: null,
        },
      ],
      memo: { reason },
    });
    return { transactionId: transaction.id };
  });
}
