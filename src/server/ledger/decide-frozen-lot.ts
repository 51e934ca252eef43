/** Ends a dispute over a lot: what is frozen becomes available again (won) or is taken back (lost). */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { moveLot } from '@/domain/ledger/lots.ts';
import { postTransaction } from './post-transaction.ts';
import { readOpenLots } from './read-open-lots.ts';

/**
 * A dispute is decided once; deciding again changes nothing, but on another `occasion` (a job gives credits back after
 * the loss). Absent amount: all that is frozen of the lot. Joins the caller's write transaction.
 */
export async function decideFrozenLot(options: {
  teamId: string;
  lotId: string;
  disputeId: string;
  outcome: 'won' | 'lost';
  amountMicrocredits?: number;
  occasion?: string;
}): Promise<{ movedMicrocredits: number }> {
  const { teamId, lotId, disputeId, outcome, occasion } = options;
  const transactionKey = `decide:${disputeId}${occasion ? `:${occasion}` : ''}`;
  return inWriteTransaction(async () => {
    if (await LedgerTransaction.findOne({ where: { transactionKey }, attributes: ['id'] }))
      return { movedMicrocredits: 0 };
    const lot = (await readOpenLots(teamId)).find(({ id }) => id === lotId);
    const amount = options.amountMicrocredits ?? lot?.frozenMicrocredits ?? 0;
    if (!lot || amount === 0) return { movedMicrocredits: 0 };
    const won = outcome === 'won';
    await postTransaction({
      transactionKey,
      kind: won ? 'dispute_won' : 'dispute_lost',
      teamId,
      postings: won ? flows.disputeWon(teamId, amount) : flows.disputeLost(teamId, amount),
      draws: [moveLot(teamId, lot, { frozenMicrocredits: -amount, takenMicrocredits: won ? 0 : amount })],
      memo: { lotId, disputeId },
    });
    return { movedMicrocredits: amount };
  });
}
