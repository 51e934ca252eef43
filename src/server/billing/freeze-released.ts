/** Freezes what a job gives back while a payment is disputed; takes it back when the dispute is lost already. */
import { Dispute, Receivable } from '@db/models/cards.ts';
import { freezeDisputed } from './freeze-disputed.ts';
import { takeReleased } from './lose-dispute.ts';

/** Inside the write transaction of the release, which `occasion` names. Only what is given back is touched. */
export async function freezeReleased(options: {
  teamId: string;
  releasedMicrocredits: number;
  occasion: string;
}): Promise<void> {
  const { teamId, releasedMicrocredits, occasion } = options;
  const disputes = await Dispute.findAll({ where: { teamId, state: ['open', 'lost'] }, order: [['id', 'ASC']] });
  let left = releasedMicrocredits;
  for (const dispute of disputes) {
    if (left === 0) return;
    if (dispute.state === 'open') {
      left -= await freezeDisputed(dispute, occasion, left);
      continue;
    }
    const receivable = await Receivable.findOne({ where: { disputeId: dispute.id, state: 'open' } });
    if (receivable) left -= await takeReleased({ dispute, receivable, occasion, atMostMicrocredits: left });
  }
}
