/** A dispute was decided for us: what it froze is available again. */
import type { Dispute } from '@db/models/cards.ts';
import { nowText } from '../clock.ts';
import { decideFrozenLot } from '../ledger/decide-frozen-lot.ts';
import { tellOfDispute } from './tell-of-dispute.ts';

/** Inside the caller's write transaction; the dispute is open. */
export async function winDispute(dispute: Dispute): Promise<void> {
  const { id: disputeId, teamId, lotId, frozenMicrocredits: amountMicrocredits } = dispute;
  if (amountMicrocredits > 0) await decideFrozenLot({ teamId, lotId, disputeId, outcome: 'won', amountMicrocredits });
  await dispute.update({ state: 'won', frozenMicrocredits: 0, decidedAt: nowText(), nextCheckAt: null });
  await tellOfDispute(dispute, 'won');
}
