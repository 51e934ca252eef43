/** Queues what happened for every endpoint that listens, in the write transaction of what happened. */
import { afterCommit, inWriteTransaction } from '@db/in-write-transaction.ts';
import { Webhook, WebhookDelivery } from '@db/models/webhooks.ts';
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { wakeWebhooks } from './wake-webhooks.ts';

export interface QueueWebhookOptions {
  teamId: string;
  kind: WebhookKind;
  /** Names what happened, such as `invoice:invoice_…`: told again, it is not queued again. */
  occasion: string;
  /** What the body's `data` holds. */
  data: object;
}

export async function queueWebhook(options: QueueWebhookOptions): Promise<void> {
  const { teamId, kind, occasion, data } = options;
  await inWriteTransaction(async () => {
    const rows = await Webhook.findAll({ where: { teamId, removedAt: null, pausedAt: null } });
    const now = nowText();
    for (const { id: webhookId } of rows.filter(({ kinds }) => kinds.includes(kind))) {
      if (await WebhookDelivery.findOne({ where: { webhookId, occasion }, attributes: ['id'] })) continue;
      await WebhookDelivery.create({
        id: newId('delivery'),
        webhookId,
        occasion,
        kind,
        body: JSON.stringify({ type: kind, timestamp: now, data }),
        state: 'queued',
        createdAt: now,
        nextAttemptAt: now,
      });
      afterCommit(wakeWebhooks);
    }
  });
}
