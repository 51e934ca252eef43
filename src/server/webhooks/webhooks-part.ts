/** Sends webhooks beside the requests: at start, whenever one is queued, when a retry falls due; sweeps old deliveries. */
import { AsyncResource } from 'node:async_hooks';
import { Op } from 'sequelize';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { WebhookDelivery } from '@db/models/webhooks.ts';
import { limits } from '@/domain/limits.ts';
import { nowText } from '../clock.ts';
import { log } from '../log.ts';
import type { Part } from '../part.ts';
import { sendWebhooks } from './send-webhooks.ts';
import { onWebhookQueued } from './wake-webhooks.ts';

/** After trouble with our own database; deliveries have their own retries. */
const troubleDelayMs = 30_000;
const longestSleepMs = 60 * 60 * 1000;

/** Removes deliveries that ended long ago: their bodies are a copy of what stands elsewhere. */
async function sweepDeliveries(): Promise<void> {
  const before = nowText(-limits.webhookLogDays * 24 * 60 * 60 * 1000);
  await inWriteTransaction(() =>
    WebhookDelivery.destroy({ where: { state: { [Op.ne]: 'queued' }, createdAt: { [Op.lt]: before } } }),
  );
}

export const webhooksPart: Part = {
  name: 'webhooks',
  start: async () => {
    await sweepDeliveries();
    const stopping = new AbortController();
    const { signal } = stopping;
    let wanted = false;
    let running: Promise<void> | null = null;
    let timer: NodeJS.Timeout | undefined;

    const round = async (): Promise<void> => {
      let delayMs: number | null = null;
      do {
        wanted = false;
        delayMs = await sendWebhooks({ signal }).catch((error: unknown) => {
          log().error({ err: error }, 'webhooks failed');
          return troubleDelayMs;
        });
      } while (wanted && !signal.aborted);
      running = null;
      if (delayMs !== null && !signal.aborted) timer = setTimeout(wake, Math.min(delayMs, longestSleepMs));
    };
    const wake = (): void => {
      wanted = true;
      if (running || signal.aborted) return;
      clearTimeout(timer);
      running = round();
    };

    // In this part's own context: a request that queues lends it neither its log nor its transaction.
    onWebhookQueued(AsyncResource.bind(wake));
    wake();
    return async () => {
      stopping.abort();
      onWebhookQueued(null);
      clearTimeout(timer);
      await running;
    };
  },
};
