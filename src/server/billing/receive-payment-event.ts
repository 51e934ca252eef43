/** Takes a webhook of the payment service: checks, records once, and looks up what it is about. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { PaymentEvent, TopUp } from '@db/models/billing.ts';
import { CardSetup } from '@db/models/cards.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { handlePaymentEvent } from './handle-payment-event.ts';
import { readEvent } from './payment-service.ts';

/**
 * An event is acknowledged once it is recorded; a failure to handle it is ours to repeat (the billing part does), not
 * the service's. Duplicates and order do not matter: the event only says where to look.
 */
export async function receivePaymentEvent(options: {
  body: string;
  signature: string | null;
}): Promise<Result<{ received: true }>> {
  const event = readEvent(options.body, options.signature);
  if (!event.ok) return event;
  const { id, type, objectId, sessionId, topUpId, disputeId } = event.value;
  const isNew = await inWriteTransaction(async () => {
    if (await PaymentEvent.findByPk(id, { attributes: ['id'] })) return false;
    const bySession = sessionId ? await TopUp.findOne({ where: { sessionId }, attributes: ['id'] }) : null;
    const named = !bySession && topUpId ? await TopUp.findByPk(topUpId, { attributes: ['id'] }) : null;
    const setup = sessionId ? await CardSetup.findOne({ where: { sessionId }, attributes: ['id'] }) : null;
    const known = bySession !== null || named !== null || setup !== null || disputeId !== null;
    await PaymentEvent.create({
      id,
      type,
      objectId,
      topUpId: bySession?.id ?? named?.id ?? null,
      cardSetupId: setup?.id ?? null,
      disputeId,
      receivedAt: nowText(),
      state: known ? 'recorded' : 'ignored',
      outcome: known ? null : 'concerns nothing of ours',
    });
    return known;
  });
  if (isNew) await handlePaymentEvent(id);
  return accept({ received: true });
}
