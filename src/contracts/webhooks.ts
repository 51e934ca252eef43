/** Outgoing webhooks of a team: endpoints, their secrets, the delivery log. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { webhookKinds } from '@/domain/webhooks/webhook-kinds.ts';
import { contract } from './contract.ts';
import { pageQuery } from './page.ts';

const reading = ['not_signed_in', 'not_found', 'forbidden', 'invalid_input'] as const;
const writing = [...reading, 'team_suspended', 'origin_refused'] as const;
const access = { kind: 'team', permission: 'team:manage' } as const;

const url = z
  .url({ protocol: /^https?$/, error: 'An address that begins with https:// or http://.' })
  .max(limits.webhookUrlCharacters)
  .refine(
    (text) => !URL.canParse(text) || (new URL(text).username === '' && new URL(text).password === ''),
    'An address without a user name and password; the signature proves that a delivery is ours.',
  );
const kinds = z
  .array(z.enum(webhookKinds))
  .min(1, 'At least one kind of event.')
  .max(webhookKinds.length)
  .transform((held) => webhookKinds.filter((one) => held.includes(one)));

export const webhookDocument = z.object({
  id: z.string(),
  url: z.string(),
  kinds: z.array(z.enum(webhookKinds)),
  createdAt: z.string(),
  /** While paused, nothing new is queued. */
  pausedAt: z.string().nullable(),
});

export const deliveryDocument = z.object({
  id: z.string(),
  kind: z.enum(webhookKinds),
  state: z.enum(['queued', 'delivered', 'failed']),
  attempts: z.number().int(),
  createdAt: z.string(),
  nextAttemptAt: z.string().nullable(),
  lastAttemptAt: z.string().nullable(),
  /** HTTP status of the last answer. */
  lastStatus: z.number().int().nullable(),
  lastFault: z.string().nullable(),
});

export const listWebhooks = contract({
  id: 'listWebhooks',
  feature: 'webhooks',
  method: 'GET',
  path: '/api/v1/teams/{team}/webhooks',
  summary: 'Endpoints that are told of the team’s events',
  access,
  answers: [
    {
      status: 200,
      description: 'Endpoints, newest first',
      schema: z.object({ webhooks: z.array(webhookDocument), nextCursor: z.null() }),
    },
  ],
  refusals: [...reading],
});

export const createWebhook = contract({
  id: 'createWebhook',
  feature: 'webhooks',
  method: 'POST',
  path: '/api/v1/teams/{team}/webhooks',
  summary: 'Add an endpoint; `secret` is shown this once',
  access,
  body: z.strictObject({ url, kinds }),
  answers: [
    {
      status: 201,
      description: 'Added; the secret cannot be shown again',
      schema: z.object({ webhook: webhookDocument, secret: z.string() }),
    },
  ],
  refusals: [...writing, 'limit_reached'],
});

export const changeWebhook = contract({
  id: 'changeWebhook',
  feature: 'webhooks',
  method: 'PATCH',
  path: '/api/v1/teams/{team}/webhooks/{webhook}',
  summary: 'Change an endpoint’s address or events, pause or resume it',
  access,
  body: z.strictObject({ url: url.optional(), kinds: kinds.optional(), paused: z.boolean().optional() }),
  answers: [{ status: 200, description: 'Changed', schema: z.object({ webhook: webhookDocument }) }],
  refusals: [...writing],
});

export const removeWebhook = contract({
  id: 'removeWebhook',
  feature: 'webhooks',
  method: 'DELETE',
  path: '/api/v1/teams/{team}/webhooks/{webhook}',
  summary: 'Remove an endpoint; what waits for it is not sent',
  access,
  answers: [{ status: 204, description: 'Removed' }],
  refusals: [...writing],
});

export const listDeliveries = contract({
  id: 'listDeliveries',
  feature: 'webhooks',
  method: 'GET',
  path: '/api/v1/teams/{team}/webhooks/{webhook}/deliveries',
  summary: 'The delivery log of an endpoint, 30 days long',
  access,
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Deliveries, newest first',
      schema: z.object({ deliveries: z.array(deliveryDocument), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...reading],
});

export const redeliverWebhook = contract({
  id: 'redeliverWebhook',
  feature: 'webhooks',
  method: 'POST',
  path: '/api/v1/teams/{team}/webhooks/{webhook}/deliveries/{delivery}/redeliver',
  summary: 'Send a delivery again, whatever became of it; its id stays the same',
  access,
  answers: [{ status: 202, description: 'Queued', schema: z.object({ delivery: deliveryDocument }) }],
  refusals: [...writing],
});

export const webhookContracts = [
  listWebhooks,
  createWebhook,
  changeWebhook,
  removeWebhook,
  listDeliveries,
  redeliverWebhook,
];
