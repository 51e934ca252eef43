/** Freezes what is left of a disputed purchase, as far as it is available: available → frozen. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { moveLot } from '@/domain/ledger/lots.ts';
import { postTransaction } from './post-transaction.ts';
import { readBalance } from './read-balance.ts';
import { readOpenLots } from './read-open-lots.ts';

/**
 * Freezes min(what is left of the lot, available, `atMostMicrocredits`). `occasion` names the moment (the opening, or the release of a job
 * whose remainder is frozen too); the same one again changes nothing. Joins the caller's write transaction.
 */
export async function freezeLot(options: {
  teamId: string;
  lotId: string;
  disputeId: string;
  occasion: string;
  atMostMicrocredits?: number;
}): Promise<{ frozenMicrocredits: number }> {
  const { teamId, lotId, disputeId, occasion, atMostMicrocredits = Number.MAX_SAFE_INTEGER } = options;
  const transactionKey = `freeze:${disputeId}:${occasion}`;
  return inWriteTransaction(async () => {
    if (await LedgerTransaction.findOne({ where: { transactionKey }, attributes: ['id'] }))
      return { frozenMicrocredits: 0 };
    const lot = (await readOpenLots(teamId)).find(({ id }) => id === lotId);
    const { available } = await readBalance(teamId);
    const amount = lot
      ? Math.min(available, lot.remainingMicrocredits - lot.frozenMicrocredits, atMostMicrocredits)
      : 0;
    if (!lot || amount === 0) return { frozenMicrocredits: 0 };
    await postTransaction({
      transactionKey,
      kind: 'dispute_opened',
      teamId,
      postings: flows.disputeOpened(teamId, amount),
      draws: [moveLot(teamId, lot, { frozenMicrocredits: amount })],
      memo: { lotId, disputeId },
    });
    return { frozenMicrocredits: amount };
  });
}
