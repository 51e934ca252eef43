/** Queues a delivery once more, as if it had not been tried. Its id stays, so that receivers know what they have seen. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { WebhookDelivery } from '@db/models/webhooks.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { findWebhook, presentDelivery, type PresentedDelivery, type WebhookNamed } from './find-webhook.ts';
import { wakeWebhooks } from './wake-webhooks.ts';

export async function redeliverWebhook(
  options: WebhookNamed & { delivery: string },
): Promise<Result<{ delivery: PresentedDelivery }>> {
  return inWriteTransaction(async () => {
    const found = await findWebhook(options);
    if (!found.ok) return found;
    const row = await WebhookDelivery.findOne({ where: { id: options.delivery, webhookId: found.value.id } });
    if (!row) return refuse('not_found', 'There is no such delivery in this log.');
    await row.update({ state: 'queued', attempts: 0, nextAttemptAt: nowText() });
    afterCommit(wakeWebhooks);
    return accept({ delivery: presentDelivery(row) });
  });
}
