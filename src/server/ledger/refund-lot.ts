/** Takes unused credits of one bought lot back, for money that is returned: available → returned. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { moveLot } from '@/domain/ledger/lots.ts';
import { creditsText } from '@/domain/pricing/credits-text.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';
import { readBalance } from './read-balance.ts';
import { readOpenLots } from './read-open-lots.ts';

export interface RefundLot {
  teamId: string;
  lotId: string;
  amountMicrocredits: number;
  /** Names this refund; the same one again changes nothing. */
  refundId: string;
  userId?: string | null;
}

/** Refuses when the lot or the team has less free than asked, or the lot was not bought. Joins the caller's write transaction. */
export async function refundLot(options: RefundLot): Promise<Result<{ transactionId: string }>> {
  const { teamId, lotId, amountMicrocredits, refundId } = options;
  const transactionKey = `refund:${refundId}`;
  const postings = flows.refund(teamId, amountMicrocredits);
  return inWriteTransaction(async () => {
    const earlier = await findTransaction({ transactionKey, teamId, postings });
    if (earlier) return accept({ transactionId: earlier.id });
    const lot = (await readOpenLots(teamId)).find(({ id }) => id === lotId);
    const { available } = await readBalance(teamId);
    const free = lot?.source === 'bought' ? Math.min(available, lot.remainingMicrocredits - lot.frozenMicrocredits) : 0;
    if (!lot || amountMicrocredits > free || amountMicrocredits <= 0)
      return refuse('insufficient_credits', `Of this purchase ${creditsText(free)} can be refunded now.`);
    const transaction = await postTransaction({
      transactionKey,
      kind: 'refund',
      teamId,
      userId: options.userId ?? null,
      postings,
      draws: [moveLot(teamId, lot, { takenMicrocredits: amountMicrocredits })],
      memo: { lotId },
    });
    return accept({ transactionId: transaction.id });
  });
}
