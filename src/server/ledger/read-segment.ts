/** What a charge segment of a job holds and has spent, from its newest transaction. */
import { LedgerTransaction } from '@db/models/ledger.ts';

export interface SegmentTotals {
  heldMicrocredits: number;
  spentMicrocredits: number;
}

export async function readSegment(segmentId: string): Promise<SegmentTotals> {
  const newest = await LedgerTransaction.findOne({
    where: { segmentId },
    order: [['sequence', 'DESC']],
    attributes: ['segmentHeldMicrocredits', 'segmentSpentMicrocredits'],
  });
  return {
    heldMicrocredits: newest?.segmentHeldMicrocredits ?? 0,
    spentMicrocredits: newest?.segmentSpentMicrocredits ?? 0,
  };
}
