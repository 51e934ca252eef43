/** The saved card of a team. Its number is typed on the payment service's page and never comes here. */
import { z } from 'zod';
import { contract } from './contract.ts';

const team = ['not_signed_in', 'not_found', 'forbidden'] as const;

export const savedCard = z.object({
  /** As the service writes it, such as `visa`. */
  brand: z.string(),
  lastFour: z.string(),
  expiryMonth: z.number().int(),
  expiryYear: z.number().int(),
  expired: z.boolean(),
  savedAt: z.string(),
});
export type SavedCardDocument = z.infer<typeof savedCard>;

export const cardAnswer = z.object({
  card: savedCard.nullable(),
  /** A visit to the service's page that has not ended: where to go on. */
  openPageUrl: z.string().nullable(),
});
export type CardAnswer = z.infer<typeof cardAnswer>;

export const readCard = contract({
  id: 'readCard',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/card',
  summary: 'Brand, last four digits and expiry of the saved card',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Card, or null', schema: cardAnswer }],
  refusals: [...team],
});

export const saveCard = contract({
  id: 'saveCard',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/card',
  summary: 'Begin saving a card, or replacing the saved one; answers where it is typed',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.strictObject({}),
  answers: [{ status: 201, description: 'Page opened', schema: z.object({ pageUrl: z.string() }) }],
  refusals: [...team, 'team_suspended', 'invalid_input', 'payment_service_unavailable', 'idempotency_key_reused'],
  idempotency: 'service',
});

export const removeCard = contract({
  id: 'removeCard',
  feature: 'billing',
  method: 'DELETE',
  path: '/api/v1/teams/{team}/card',
  summary: 'Remove the saved card; automatic top-up is switched off with it',
  access: { kind: 'team', permission: 'billing:write' },
  answers: [{ status: 200, description: 'Removed', schema: cardAnswer }],
  refusals: [...team],
});

export const cardContracts = [readCard, saveCard, removeCard];
