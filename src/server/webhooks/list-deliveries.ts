/** The delivery log of an endpoint, newest first. */
import { Op } from 'sequelize';
import { WebhookDelivery } from '@db/models/webhooks.ts';
import { limits } from '@/domain/limits.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import { pageOf } from '../http/page-of.ts';
import { findWebhook, presentDelivery, type PresentedDelivery, type WebhookNamed } from './find-webhook.ts';

export async function listDeliveries(
  options: WebhookNamed & { limit?: number; cursor?: string | undefined },
): Promise<Result<{ deliveries: PresentedDelivery[]; nextCursor: string | null }>> {
  const { limit = limits.listPageDefault, cursor } = options;
  const found = await findWebhook(options);
  if (!found.ok) return found;
  const listed = await WebhookDelivery.findAll({
    where: { webhookId: found.value.id, ...(cursor ? { id: { [Op.lt]: cursor } } : {}) },
    order: [['id', 'DESC']],
    limit: limit + 1,
  });
  const { rows, nextCursor } = pageOf(listed, limit);
  return accept({ deliveries: rows.map(presentDelivery), nextCursor });
}
