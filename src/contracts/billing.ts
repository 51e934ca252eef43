/** Price book, top-ups, billing details and payment webhooks; what belongs to them is passed on from its own files. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { automaticTopUpContracts } from './automatic-top-up.ts';
import { cardContracts } from './cards.ts';
import { contract } from './contract.ts';
import { disputeContracts } from './disputes.ts';
import { invoiceContracts } from './invoices.ts';
import { pageQuery } from './page.ts';
import { proFormaContracts } from './pro-formas.ts';
import { currency, line, money, pack } from './purchase.ts';
import { refundContracts } from './refunds.ts';
import { topUp } from './top-up.ts';

export * from './automatic-top-up.ts';
export * from './cards.ts';
export * from './disputes.ts';
export * from './invoices.ts';
export * from './pro-formas.ts';
export * from './refunds.ts';
export * from './top-up.ts';
export { money, type Money } from './purchase.ts';

const team = ['not_signed_in', 'not_found', 'forbidden'] as const;
const perFamily = z.object({ exact: z.number().int(), leap: z.number().int() });

export const priceBookAnswer = z.object({
  priceBook: z.object({
    id: z.string(),
    version: z.number().int(),
    startsAt: z.string(),
    microcreditsPerMillionEvents: z.object({ steady: perFamily, express: perFamily, overnight: perFamily }),
    packs: z.array(z.object({ id: z.string(), credits: z.number().int(), prices: z.array(money) })),
  }),
});

export const readPriceBook = contract({
  id: 'readPriceBook',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/price-book',
  summary: 'Rates and credit packs in force now; prices before tax',
  access: { kind: 'public' },
  answers: [{ status: 200, description: 'Price book', schema: priceBookAnswer }],
  refusals: [],
});

export const startTopUp = contract({
  id: 'startTopUp',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/top-ups',
  summary: 'Begin buying a credit pack by card; answers where to pay',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.object({ pack, currency }),
  answers: [
    { status: 201, description: 'Checkout opened', schema: z.object({ checkoutUrl: z.string(), topUpId: z.string() }) },
  ],
  refusals: [
    ...team,
    'team_suspended',
    'invalid_input',
    'unknown_pack',
    'payment_service_unavailable',
    'idempotency_key_reused',
  ],
  idempotency: 'service',
});

export const listTopUps = contract({
  id: 'listTopUps',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/top-ups',
  summary: 'Top-ups, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Top-ups',
      schema: z.object({ topUps: z.array(topUp), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...team, 'invalid_input'],
});

export const readTopUp = contract({
  id: 'readTopUp',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/top-ups/{topUp}',
  summary: 'One top-up as our own database has it',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Top-up', schema: z.object({ topUp }) }],
  refusals: [...team],
});

export const billingDetails = z.object({
  /** The buyer as it stands on invoices. */
  name: line(limits.nameCharacters),
  /** Street, town, postcode: up to 6 lines. */
  address: z
    .string()
    .trim()
    .min(1)
    .max(600)
    .refine((text) => text.split('\n').length <= 6, 'An address has at most 6 lines.'),
  /** ISO 3166-1 alpha-2. */
  country: z
    .string()
    .trim()
    .toUpperCase()
    .regex(/^[A-Z]{2}$/, 'Two letters, such as DE.'),
  vatNumber: z.string().trim().max(20).nullable().default(null),
  /** Where receipts go beside the buyer; absent: the owners. */
  email: z.email().max(254).nullable().default(null),
});
export type BillingDetails = z.infer<typeof billingDetails>;

export const readBillingDetails = contract({
  id: 'readBillingDetails',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/billing-details',
  summary: 'Who invoices are made out to; null until set',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Details', schema: z.object({ billingDetails: billingDetails.nullable() }) }],
  refusals: [...team],
});

export const setBillingDetails = contract({
  id: 'setBillingDetails',
  feature: 'billing',
  method: 'PUT',
  path: '/api/v1/teams/{team}/billing-details',
  summary: 'Set who invoices are made out to; invoices already issued stay as they are',
  access: { kind: 'team', permission: 'billing:write' },
  body: billingDetails,
  answers: [{ status: 200, description: 'Stored', schema: z.object({ billingDetails }) }],
  refusals: [...team, 'team_suspended', 'invalid_input'],
});

export const receivePaymentEvent = contract({
  id: 'receivePaymentEvent',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/webhooks/stripe',
  summary: 'Signed events of the payment service',
  access: { kind: 'public' },
  textBodyTypes: ['application/json'],
  bodyBytes: limits.bodyBytes,
  answers: [{ status: 200, description: 'Recorded', schema: z.object({ received: z.literal(true) }) }],
  refusals: ['bad_signature', 'too_large', 'unsupported_media_type'],
});

export const billingContracts = [
  readPriceBook,
  startTopUp,
  listTopUps,
  readTopUp,
  readBillingDetails,
  setBillingDetails,
  ...invoiceContracts,
  ...proFormaContracts,
  ...refundContracts,
  ...cardContracts,
  ...automaticTopUpContracts,
  ...disputeContracts,
  receivePaymentEvent,
];
