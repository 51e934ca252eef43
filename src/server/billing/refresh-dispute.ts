/** Asks the payment service how a dispute stands and does what follows: freezes, thaws, takes back. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice, TopUp } from '@db/models/billing.ts';
import { Dispute } from '@db/models/cards.ts';
import { Lot } from '@db/models/ledger.ts';
import { coveredBy } from '@/domain/billing/decide-dispute.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import { freezeDisputed } from './freeze-disputed.ts';
import { loseDispute } from './lose-dispute.ts';
import { fetchDispute, type FetchedDispute } from './payment-disputes.ts';
import { refreshTopUp } from './refresh-top-up.ts';
import { tellOfDispute } from './tell-of-dispute.ts';
import { winDispute } from './win-dispute.ts';

const nextCheckMs = 60 * 60 * 1000;

/**
 * Safe to call any number of times and in any order of events: what counts is how the dispute stands now, and a
 * decision that was taken stays. A dispute heard of first when it is closed is opened and decided at once.
 */
export async function refreshDispute(disputeId: string): Promise<Result<string>> {
  const fetched = await fetchDispute(disputeId);
  if (!fetched.ok) return fetched;
  const topUp = await findTopUp(fetched.value);
  if (!topUp.ok) return topUp;
  if (!topUp.value) return accept('concerns nothing of ours');
  const { value: paid } = topUp;
  if (paid.state !== 'paid' || paid.currency !== fetched.value.currency.toUpperCase()) {
    log().error({ disputeId, topUpId: paid.id }, 'a dispute does not match the payment that it names');
    return accept('mismatch');
  }
  return inWriteTransaction(async () => {
    const dispute = (await Dispute.findByPk(disputeId)) ?? (await open(fetched.value, paid));
    const { state } = fetched.value;
    if (dispute.state === 'open') {
      if (state === 'won') await winDispute(dispute);
      else if (state === 'lost') await loseDispute(dispute);
      else await dispute.update({ nextCheckAt: nowText(nextCheckMs), checks: dispute.checks + 1 });
    } else if (state !== dispute.state && state !== 'open') {
      log().error({ disputeId, ours: dispute.state, theirs: state }, 'a decided dispute was decided otherwise');
      const problem = `The payment service says ${state} after it said ${dispute.state}. Settle the difference by hand.`;
      await dispute.update({ problem });
    }
    return accept(dispute.state);
  });
}

/** By the payment; one whose success we have not heard of yet is named by its own metadata, and looked up first. */
async function findTopUp(fetched: FetchedDispute): Promise<Result<TopUp | null>> {
  const { paymentIntentId, topUpId } = fetched;
  if (!paymentIntentId) return accept(null);
  const known = await TopUp.findOne({ where: { paymentIntentId } });
  if (known?.state === 'paid') return accept(known);
  const named = known ?? (topUpId ? await TopUp.findByPk(topUpId) : null);
  if (!named) return accept(null);
  const refreshed = await refreshTopUp(named.id);
  if (!refreshed.ok) return refreshed;
  await named.reload();
  return accept(named.paymentIntentId === paymentIntentId ? named : null);
}

/** Freezes what is left of the purchase, as far as it is available. */
async function open(fetched: FetchedDispute, topUp: TopUp): Promise<Dispute> {
  const { id, totalMinor, reason } = fetched;
  const invoice = await Invoice.findOne({ where: { topUpId: topUp.id, kind: 'invoice' }, rejectOnEmpty: true });
  const lot = await Lot.findOne({ where: { purchaseId: topUp.id }, rejectOnEmpty: true });
  const { creditsMicrocredits } = lot;
  const dispute = await Dispute.create({
    id,
    teamId: topUp.teamId,
    topUpId: topUp.id,
    invoiceId: invoice.id,
    lotId: lot.id,
    state: 'open',
    reason,
    totalMinor,
    currency: topUp.currency,
    coveredMicrocredits: coveredBy({ creditsMicrocredits, disputedMinor: totalMinor, paidMinor: topUp.totalMinor }),
    frozenMicrocredits: 0,
    takenMicrocredits: 0,
    openedAt: nowText(),
    nextCheckAt: nowText(nextCheckMs),
  });
  await freezeDisputed(dispute, 'opened');
  await tellOfDispute(dispute, 'opened');
  return dispute;
}
