/** Charges the saved card for an automatic top-up, or asks how an earlier charge stands. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { TopUp } from '@db/models/billing.ts';
import { decideCharge, type FetchedCharge } from '@/domain/billing/decide-automatic-top-up.ts';
import type { TopUpDecision } from '@/domain/billing/decide-top-up.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { chargeCard, fetchCharge, findCharge } from './payment-cards.ts';

/**
 * While the service remembers the key, an answer that was lost is fetched by calling again: it charges once. Later the
 * payment is looked for among the customer's; one that is not there was never made.
 */
export async function refreshCharge(topUp: TopUp): Promise<Result<TopUpDecision>> {
  if (topUp.paymentIntentId) return decided(topUp, await fetchCharge(topUp.paymentIntentId));
  const { id: topUpId, teamId, customerId, paymentMethodId, totalMinor, currency, idempotencyKey } = topUp;
  if (!customerId || !paymentMethodId) throw new Error(`Automatic top-up ${topUpId} has no card.`);
  if (topUp.expiresAt <= nowText()) {
    const found = await findCharge({ customerId, topUpId });
    if (!found.ok) return found;
    return found.value ? decided(topUp, accept(found.value)) : accept({ kind: 'expired' });
  }
  const charged = await chargeCard({
    topUpId,
    teamId,
    customerId,
    paymentMethodId,
    description: `${Number(topUp.pack).toLocaleString('en')} Burette credits`,
    totalMinor,
    currency,
    idempotencyKey,
  });
  if (!charged.ok) return charged;
  const { paymentIntentId } = charged.value;
  if (!paymentIntentId)
    return accept({
      kind: 'failed',
      problem: 'The payment service does not take this card any more.',
      needsHolder: false,
    });
  await inWriteTransaction(() => TopUp.update({ paymentIntentId }, { where: { id: topUpId, paymentIntentId: null } }));
  return decided(topUp, await fetchCharge(paymentIntentId));
}

const decided = (topUp: TopUp, fetched: Result<FetchedCharge>): Result<TopUpDecision> =>
  fetched.ok ? accept(decideCharge(topUp, fetched.value)) : fetched;
