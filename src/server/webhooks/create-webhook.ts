/** Adds an endpoint; its secret is in this answer and, sealed, in the database. Addresses are judged when something is sent. */
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Webhook } from '@db/models/webhooks.ts';
import { limits } from '@/domain/limits.ts';
import { accept, refuse, type Result } from '@/domain/refusals.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import type { WebhookKind } from '@/domain/webhooks/webhook-kinds.ts';
import { sealSecret } from '../auth/sealed-secret.ts';
import { nowText } from '../clock.ts';
import { newId } from '../ids.ts';
import { authorise } from '../teams/authorise.ts';
import { presentWebhook, type PresentedWebhook } from './find-webhook.ts';
import { newWebhookSecret } from './sign-webhook.ts';

export interface CreateWebhookOptions {
  actor: Actor;
  team: string;
  url: string;
  kinds: WebhookKind[];
}

export async function createWebhook(
  options: CreateWebhookOptions,
): Promise<Result<{ webhook: PresentedWebhook; secret: string }>> {
  const { actor, url, kinds } = options;
  return inWriteTransaction(async () => {
    const authorised = await authorise({ actor, team: options.team, permission: 'team:manage' });
    if (!authorised.ok) return authorised;
    const { team, userId } = authorised.value;
    if (!userId) return refuse('forbidden', 'An endpoint is added by a person.');
    if ((await Webhook.count({ where: { teamId: team.id, removedAt: null } })) >= limits.webhooksPerTeam)
      return refuse('limit_reached', `A team has at most ${limits.webhooksPerTeam} endpoints. Remove some first.`);
    const id = newId('webhook');
    const secret = newWebhookSecret();
    const row = await Webhook.create({
      id,
      teamId: team.id,
      createdBy: userId,
      url,
      kinds,
      sealedSecret: sealSecret(secret, id),
      createdAt: nowText(),
    });
    return accept({ webhook: presentWebhook(row), secret });
  });
}
