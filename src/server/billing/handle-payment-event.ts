/** Does what a recorded payment event asks for: look at the top-up it concerns. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentEvent } from '@db/models/billing.ts';
import { log } from '../log.ts';
import { refreshTopUp } from './refresh-top-up.ts';

/** Leaves the event open when the payment service cannot be asked; the billing part tries again. Never throws. */
export async function handlePaymentEvent(eventId: string): Promise<void> {
  const event = await PaymentEvent.findByPk(eventId);
  if (event?.state !== 'recorded' || !event.topUpId) return;
  let outcome: string | null = null;
  try {
    const refreshed = await refreshTopUp(event.topUpId);
    if (refreshed.ok) outcome = refreshed.value;
  } catch (error) {
    log().error({ err: error, eventId }, 'a payment event could not be handled');
  }
  await inWriteTransaction(() =>
    event.update({ attempts: event.attempts + 1, ...(outcome ? { state: 'handled', outcome } : {}) }),
  );
}
