/** Does what a recorded payment event asks for: look at what it concerns. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentEvent } from '@db/models/billing.ts';
import type { Result } from '@/domain/refusals.ts';
import { log } from '../log.ts';
import { refreshCardSetup } from './refresh-card-setup.ts';
import { refreshDispute } from './refresh-dispute.ts';
import { refreshTopUp } from './refresh-top-up.ts';

/** Leaves the event open when the payment service cannot be asked; the billing part tries again. Never throws. */
export async function handlePaymentEvent(eventId: string): Promise<void> {
  const event = await PaymentEvent.findByPk(eventId);
  if (event?.state !== 'recorded') return;
  let outcome: string | null = null;
  try {
    const refreshed = await lookAt(event);
    if (refreshed?.ok) outcome = refreshed.value;
  } catch (error) {
    log().error({ err: error, eventId }, 'a payment event could not be handled');
  }
  await inWriteTransaction(() =>
    event.update({ attempts: event.attempts + 1, ...(outcome ? { state: 'handled', outcome } : {}) }),
  );
}

function lookAt({ topUpId, cardSetupId, disputeId }: PaymentEvent): Promise<Result<string>> | null {
  if (disputeId) return refreshDispute(disputeId);
  if (topUpId) return refreshTopUp(topUpId);
  return cardSetupId ? refreshCardSetup(cardSetupId) : null;
}
