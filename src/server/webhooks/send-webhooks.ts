/**
 * Sends what is due, each delivery at least once: the mark follows the answer. A round takes at most one delivery of
 * each endpoint, so an endpoint that hangs delays the others by one time limit and not by all that waits for it.
 */
import { Op, col, fn } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Webhook, WebhookDelivery } from '@db/models/webhooks.ts';
import { retryDelayMs } from '@/domain/webhooks/retry-delay.ts';
import { openSecret } from '../auth/sealed-secret.ts';
import { nowMs, nowText } from '../clock.ts';
import { log } from '../log.ts';
import { postGuarded, type Posted, type PostOptions } from './post-guarded.ts';
import { signWebhook } from './sign-webhook.ts';

const atOnce = 16;

/** How requests leave; tests bring their own resolver and time limit. */
export type Way = Pick<PostOptions, 'resolve' | 'allowed' | 'timeoutMs'>;

/** Resolves to the milliseconds until the next delivery is due, or null when none waits. */
export async function sendWebhooks(options: { signal: AbortSignal; way?: Way }): Promise<number | null> {
  const { signal, way = {} } = options;
  while (!signal.aborted) {
    const due = await WebhookDelivery.findAll({
      attributes: ['webhookId', [fn('MIN', col('id')), 'id']],
      where: { state: 'queued', nextAttemptAt: { [Op.lte]: nowText() } },
      group: ['webhookId'],
      order: [[fn('MIN', col('nextAttemptAt')), 'ASC']],
      limit: atOnce,
    });
    if (due.length === 0) break;
    await Promise.all(due.map(({ id }) => sendOne(id, { signal, way })));
  }
  const next = await WebhookDelivery.findOne({ where: { state: 'queued' }, order: [['nextAttemptAt', 'ASC']] });
  return next?.nextAttemptAt ? Math.max(0, Date.parse(next.nextAttemptAt) - nowMs()) : null;
}

async function sendOne(id: string, { signal, way }: { signal: AbortSignal; way: Way }): Promise<void> {
  const delivery = await WebhookDelivery.findByPk(id, { rejectOnEmpty: true });
  const webhook = await Webhook.findByPk(delivery.webhookId, { rejectOnEmpty: true });
  const posted = webhook.removedAt
    ? { fault: 'The endpoint was removed.' }
    : await postGuarded({
        url: webhook.url,
        body: delivery.body,
        headers: headersOf(delivery, webhook),
        signal,
        ...way,
      });
  // What the house's stopping cut short is tried again at the next start.
  if (signal.aborted) return;
  await recordAttempt(delivery, posted, webhook.removedAt !== null);
}

function headersOf({ id, body }: WebhookDelivery, webhook: Webhook): Record<string, string> {
  const timestampSeconds = Math.floor(nowMs() / 1000);
  const secret = openSecret(webhook.sealedSecret, webhook.id);
  return {
    'Content-Type': 'application/json',
    'User-Agent': 'Burette-Webhooks/1',
    'webhook-id': id,
    'webhook-timestamp': String(timestampSeconds),
    'webhook-signature': signWebhook({ secret, id, timestampSeconds, body }),
  };
}

async function recordAttempt(delivery: WebhookDelivery, posted: Posted, removed: boolean): Promise<void> {
  const status = 'status' in posted ? posted.status : null;
  const delivered = status !== null && status >= 200 && status < 300;
  const attempts = delivery.attempts + 1;
  const delayMs = delivered || removed ? null : retryDelayMs(attempts);
  await inWriteTransaction(() =>
    delivery.update({
      attempts,
      state: delivered ? 'delivered' : delayMs === null ? 'failed' : 'queued',
      nextAttemptAt: delayMs === null ? null : nowText(delayMs),
      lastAttemptAt: nowText(),
      lastStatus: status,
      lastFault: 'fault' in posted ? posted.fault : delivered ? null : faultOf(posted.status),
    }),
  );
  log().info({ delivery: delivery.id, status, attempts, delivered }, 'webhook attempted');
}

const faultOf = (status: number): string =>
  status >= 300 && status < 400
    ? `The endpoint answered ${status}; redirects are not followed.`
    : `The endpoint answered ${status}.`;
