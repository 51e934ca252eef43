/** Issues credits that were paid for, as a lot that remembers the net money. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { newId } from '../ids.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';

export interface IssueBoughtCredits {
  teamId: string;
  creditsMicrocredits: number;
  /** Net money paid, minor units of `currency`. */
  netMinor: number;
  currency: string;
  /** The top-up or pro-forma; it issues credits once. */
  purchaseId: string;
  userId?: string | null;
  memo?: Record<string, unknown>;
}

/** Joins the caller's write transaction. */
export async function issueBoughtCredits(options: IssueBoughtCredits): Promise<{ transactionId: string }> {
  const { teamId, creditsMicrocredits, netMinor, currency, purchaseId } = options;
  if (creditsMicrocredits <= 0) throw new Error('A purchase is positive.');
  const transactionKey = `buy:${purchaseId}`;
  const postings = flows.topUp(teamId, creditsMicrocredits);
  return inWriteTransaction(async () => {
    const earlier = await findTransaction({ transactionKey, teamId, postings });
    if (earlier) return { transactionId: earlier.id };
    const transaction = await postTransaction({
      transactionKey,
      kind: 'top_up',
      teamId,
      userId: options.userId ?? null,
      postings,
      lots: [{ id: newId('lot'), teamId, source: 'bought', creditsMicrocredits, netMinor, currency, purchaseId }],
      memo: options.memo ?? {},
    });
    return { transactionId: transaction.id };
  });
}
