/** Changes an endpoint's address or events, pauses or resumes it. What is queued already goes to the new address. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { nowText } from '../clock.ts';
import { findWebhook, presentWebhook, type PresentedWebhook, type WebhookNamed } from './find-webhook.ts';

export interface ChangeWebhookOptions extends WebhookNamed {
  url?: string | undefined;
  kinds?: WebhookKind[] | undefined;
  paused?: boolean | undefined;
}

export async function changeWebhook(options: ChangeWebhookOptions): Promise<Result<{ webhook: PresentedWebhook }>> {
  const { url, kinds, paused } = options;
  return inWriteTransaction(async () => {
    const found = await findWebhook(options);
    if (!found.ok) return found;
    const row = found.value;
    await row.update({
      ...(url === undefined ? {} : { url }),
      ...(kinds === undefined ? {} : { kinds }),
      ...(paused === undefined ? {} : { pausedAt: paused ? (row.pausedAt ?? nowText()) : null }),
    });
    return accept({ webhook: presentWebhook(row) });
  });
}
