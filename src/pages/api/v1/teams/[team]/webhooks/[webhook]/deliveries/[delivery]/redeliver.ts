import { redeliverWebhook } from '@/contracts/webhooks.ts';
import { redeliverWebhook as redeliver } from '@/server/webhooks/redeliver-webhook.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(redeliverWebhook, ({ actor, parameters }) =>
  redeliver({
    actor,
    team: parameters['team'] ?? '',
    webhook: parameters['webhook'] ?? '',
    delivery: parameters['delivery'] ?? '',
  }),
);
