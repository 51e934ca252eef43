/** A dispute was decided against us: frozen credits are taken back with a credit note, what was spent is owed. */
import { CreditReturn, Invoice } from '@db/models/billing.ts';
import { Receivable, type Dispute } from '@db/models/cards.ts';
import { dayText } from '@/domain/billing/money-text.ts';
import { owedAfter } from '@/domain/billing/decide-dispute.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { decideFrozenLot } from '../ledger/decide-frozen-lot.ts';
import { readOpenLots } from '../ledger/read-open-lots.ts';
import { freezeDisputed } from './freeze-disputed.ts';
import { issueCreditNote } from './issue-credit-note.ts';
import { tellOfDispute } from './tell-of-dispute.ts';

/** Inside the caller's write transaction; the dispute is open. What running jobs hold counts as spent until they give it back. */
export async function loseDispute(dispute: Dispute): Promise<void> {
  const frozen = dispute.frozenMicrocredits;
  await dispute.update({ state: 'lost', frozenMicrocredits: 0, decidedAt: nowText(), nextCheckAt: null });
  const creditedMinor = await takeBack(dispute, frozen, 'decided');
  const { id: disputeId, teamId, invoiceId, currency } = dispute;
  const { coveredMicrocredits, takenMicrocredits, totalMinor: disputedMinor } = dispute;
  const refusedMinor = await settleRefusedRefunds(invoiceId);
  const totalMinor = Math.max(
    0,
    owedAfter({ disputedMinor, creditedMinor, coveredMicrocredits, takenMicrocredits }) - refusedMinor,
  );
  const owed =
    totalMinor > 0
      ? await Receivable.create({
          id: newId('receivable'),
          teamId,
          disputeId,
          invoiceId,
          totalMinor,
          currency,
          state: 'open',
          createdAt: nowText(),
        })
      : null;
  await tellOfDispute(dispute, 'lost', owed);
}

/**
 * Refunds that the service refused because the payment was disputed already: their credits have left and their notes are issued,
 * and the bank has now given that money back. Answers how much, minor units.
 */
async function settleRefusedRefunds(invoiceId: string): Promise<number> {
  const where = { invoiceId, cause: 'refund', state: 'failed' } as const;
  const refused = await CreditReturn.findAll({ where });
  await CreditReturn.update({ state: 'taken' }, { where });
  return refused.reduce((sum, { totalMinor }) => sum + totalMinor, 0);
}

/** A job has given credits back after the loss: they are taken too, and less is owed. */
export async function takeReleased(options: {
  dispute: Dispute;
  receivable: Receivable;
  occasion: string;
  atMostMicrocredits: number;
}): Promise<number> {
  const { dispute, receivable, occasion, atMostMicrocredits } = options;
  const frozen = await freezeDisputed(dispute, occasion, atMostMicrocredits);
  const creditedMinor = await takeBack(dispute, frozen, occasion);
  const { coveredMicrocredits, takenMicrocredits } = dispute;
  const disputedMinor = receivable.totalMinor;
  const totalMinor = owedAfter({ disputedMinor, creditedMinor, coveredMicrocredits, takenMicrocredits });
  if (totalMinor > 0) await receivable.update({ totalMinor });
  else
    await receivable.update({
      totalMinor,
      state: 'settled',
      decidedAt: nowText(),
      reason: 'Credits that jobs gave back cover it.',
    });
  return frozen;
}

/** Answers the total of the credit note, minor units. The lot is read before it moves, as the note needs it. */
async function takeBack(dispute: Dispute, amountMicrocredits: number, occasion: string): Promise<number> {
  if (amountMicrocredits === 0) return 0;
  const { id: disputeId, teamId, lotId } = dispute;
  const lot = (await readOpenLots(teamId)).find(({ id }) => id === lotId);
  if (!lot) throw new Error(`Lot ${lotId} holds nothing of what dispute ${disputeId} froze.`);
  await decideFrozenLot({ teamId, lotId, disputeId, outcome: 'lost', amountMicrocredits, occasion });
  await dispute.update({ takenMicrocredits: dispute.takenMicrocredits + amountMicrocredits });
  const invoice = await Invoice.findByPk(dispute.invoiceId, { rejectOnEmpty: true });
  const note: CreditReturn = await issueCreditNote({
    returnId: `dispute:${disputeId}:${occasion}`,
    cause: 'dispute',
    invoice,
    lot,
    amountMicrocredits,
    reason: `The payment was disputed on ${dayText(dispute.openedAt)} and taken back by the bank.`,
    userId: null,
  });
  return note.totalMinor;
}
