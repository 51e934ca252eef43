/** Moves the charge of replicates that joined the delivered prefix: held → spent, drawn from the team's lots. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { drawFromLots } from '@/domain/ledger/lots.ts';
import { findTransaction } from './find-transaction.ts';
import { postTransaction } from './post-transaction.ts';
import { readOpenLots } from './read-open-lots.ts';
import { readSegment } from './read-segment.ts';

export interface SettleCharge {
  teamId: string;
  jobId: string;
  segmentId: string;
  /** Names this settlement, such as the batch's id; the same one again changes nothing. */
  settlementId: string;
  /** The difference to what the segment was charged before; may be 0, when only the memo matters. */
  chargeMicrocredits: number;
  /** `events` metered and `absorbedEvents` computed past the cap and not charged, as decimal text, and what else explains the charge. */
  memo: { events: string; absorbedEvents?: string } & Record<string, unknown>;
}

/**
 * Throws when the charge exceeds what the segment still holds: the meter must have stopped before. Joins the caller's
 * write transaction.
 */
export async function settleCharge(options: SettleCharge): Promise<{ transactionId: string }> {
  const { teamId, jobId, segmentId, settlementId, chargeMicrocredits, memo } = options;
  const transactionKey = `settle:${settlementId}`;
  const postings = flows.settle(teamId, chargeMicrocredits);
  return inWriteTransaction(async () => {
    const earlier = await findTransaction({ transactionKey, teamId, postings });
    if (earlier) return { transactionId: earlier.id };
    const segment = await readSegment(segmentId);
    if (chargeMicrocredits > segment.heldMicrocredits)
      throw new Error(
        `Segment ${segmentId} holds ${segment.heldMicrocredits} microcredits, less than the charge of ${chargeMicrocredits}.`,
      );
    const draws = drawFromLots(teamId, await readOpenLots(teamId), chargeMicrocredits);
    const transaction = await postTransaction({
      transactionKey,
      kind: 'settlement',
      teamId,
      segment: {
        jobId,
        segmentId,
        heldMicrocredits: segment.heldMicrocredits - chargeMicrocredits,
        spentMicrocredits: segment.spentMicrocredits + chargeMicrocredits,
      },
      postings,
      draws,
      memo,
    });
    return { transactionId: transaction.id };
  });
}
