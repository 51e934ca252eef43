import { changeWebhook, removeWebhook } from '@/contracts/webhooks.ts';
import { changeWebhook as change } from '@/server/webhooks/change-webhook.ts';
import { removeWebhook as remove } from '@/server/webhooks/remove-webhook.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const PATCH = endpoint(changeWebhook, ({ actor, parameters, body }) =>
  change({ actor, team: parameters['team'] ?? '', webhook: parameters['webhook'] ?? '', ...body }),
);

export const DELETE = endpoint(removeWebhook, ({ actor, parameters }) =>
  remove({ actor, team: parameters['team'] ?? '', webhook: parameters['webhook'] ?? '' }),
);
