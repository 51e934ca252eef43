/** The endpoint of a team that a path names, and how endpoints and deliveries are shown. */
import { Webhook, type WebhookDelivery } from '@db/models/webhooks.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { authorise } from '../teams/authorise.ts';

export type PresentedWebhook = Pick<Webhook, 'id' | 'url' | 'kinds' | 'createdAt'> & { pausedAt: string | null };
export type PresentedDelivery = Pick<WebhookDelivery, 'id' | 'kind' | 'state' | 'attempts' | 'createdAt'> & {
  nextAttemptAt: string | null;
  lastAttemptAt: string | null;
  lastStatus: number | null;
  lastFault: string | null;
};

export interface WebhookNamed {
  actor: Actor;
  team: string;
  webhook: string;
}

export async function findWebhook(options: WebhookNamed): Promise<Result<Webhook>> {
  const { actor, team } = options;
  const authorised = await authorise({ actor, team, permission: 'team:manage' });
  if (!authorised.ok) return authorised;
  const where = { id: options.webhook, teamId: authorised.value.team.id, removedAt: null };
  const row = await Webhook.findOne({ where });
  return row ? accept(row) : refuse('not_found', 'There is no such endpoint here.');
}

export const presentWebhook = ({ id, url, kinds, createdAt, pausedAt = null }: Webhook): PresentedWebhook => ({
  id,
  url,
  kinds,
  createdAt,
  pausedAt,
});

export const presentDelivery = (row: WebhookDelivery): PresentedDelivery => {
  const { id, kind, state, attempts = 0, createdAt } = row;
  const { nextAttemptAt = null, lastAttemptAt = null, lastStatus = null, lastFault = null } = row;
  return { id, kind, state, attempts, createdAt, nextAttemptAt, lastAttemptAt, lastStatus, lastFault };
};
