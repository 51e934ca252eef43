/** Freezes credits of a disputed purchase, as far as the dispute covers them and they are available. */
import type { Dispute } from '@db/models/cards.ts';
import { freezeLot } from '../ledger/freeze-lot.ts';

/**
 * `occasion` names the moment; the same one again changes nothing. `atMostMicrocredits`: what a job has just given
 * back. Joins the caller's write transaction. Answers what was frozen.
 */
export async function freezeDisputed(
  dispute: Dispute,
  occasion: string,
  atMostMicrocredits = Number.MAX_SAFE_INTEGER,
): Promise<number> {
  const { id: disputeId, teamId, lotId, coveredMicrocredits, frozenMicrocredits, takenMicrocredits } = dispute;
  const uncovered = coveredMicrocredits - frozenMicrocredits - takenMicrocredits;
  const frozen = await freezeLot({
    teamId,
    lotId,
    disputeId,
    occasion,
    atMostMicrocredits: Math.min(uncovered, atMostMicrocredits),
  });
  if (frozen.frozenMicrocredits > 0 && dispute.state === 'open')
    await dispute.update({ frozenMicrocredits: frozenMicrocredits + frozen.frozenMicrocredits });
  return frozen.frozenMicrocredits;
}
