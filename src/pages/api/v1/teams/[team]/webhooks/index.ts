import { createWebhook, listWebhooks } from '@/contracts/webhooks.ts';
import { createWebhook as create } from '@/server/webhooks/create-webhook.ts';
import { listWebhooks as list } from '@/server/webhooks/list-webhooks.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(listWebhooks, ({ actor, parameters }) => list({ actor, team: parameters['team'] ?? '' }));

export const POST = endpoint(createWebhook, ({ actor, parameters, body }) =>
  create({ actor, team: parameters['team'] ?? '', ...body }),
);
