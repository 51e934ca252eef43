/** Removes an endpoint: what waits for it is not sent. The log stays until it is swept. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { WebhookDelivery } from '@db/models/webhooks.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { nowText } from '../clock.ts';
import { findWebhook, type WebhookNamed } from './find-webhook.ts';

export async function removeWebhook(options: WebhookNamed): Promise<Result<null>> {
  return inWriteTransaction(async () => {
    const found = await findWebhook(options);
    if (!found.ok) return found;
    await found.value.update({ removedAt: nowText() });
    await WebhookDelivery.update(
      { state: 'failed', nextAttemptAt: null, lastFault: 'The endpoint was removed.' },
      { where: { webhookId: found.value.id, state: 'queued' } },
    );
    return accept(null);
  });
}
