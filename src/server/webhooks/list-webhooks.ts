/** A team's endpoints, newest first. Secrets are never shown again. */
import { Webhook } from '@db/models/webhooks.ts';
import { accept, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';
import { presentWebhook, type PresentedWebhook } from './find-webhook.ts';

export async function listWebhooks(options: {
  actor: Actor;
  team: string;
}): Promise<Result<{ webhooks: PresentedWebhook[]; nextCursor: null }>> {
  const authorised = await authorise({ ...options, permission: 'team:manage' });
  if (!authorised.ok) return authorised;
  const where = { teamId: authorised.value.team.id, removedAt: null };
  const rows = await Webhook.findAll({ where, order: [['id', 'DESC']] });
  return accept({ webhooks: rows.map(presentWebhook), nextCursor: null });
}
