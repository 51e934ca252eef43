/** Price book, top-ups, billing details, invoices, pro-formas, payment webhooks. Money is `{ amountMinor, currency }`. */
import { z } from 'zod';
import { limits } from '@/domain/limits.ts';
import { currencies } from '@/domain/pricing/price-book.ts';
import { contract } from './contract.ts';
import { pageQuery } from './page.ts';

export const money = z.object({ amountMinor: z.number().int(), currency: z.string().length(3) });
export type Money = z.infer<typeof money>;

const currency = z.string().trim().toUpperCase().pipe(z.enum(currencies));
/** `100` or "100": the number of credits. Whether it exists is for the price book to say. */
const pack = z.union([z.string().trim().min(1).max(20), z.number().int()]).transform(String);
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

/** `processing`: paid by a method that settles later. Only `paid` has issued credits. */
export const topUpStates = ['pending', 'processing', 'paid', 'failed', 'expired'] as const;

export const topUp = z.object({
  id: z.string(),
  state: z.enum(topUpStates),
  credits: z.number().int(),
  net: money,
  tax: money,
  total: money,
  createdAt: z.string(),
  paidAt: z.string().nullable(),
  /** Where to go on paying, while it is pending. */
  checkoutUrl: z.string().nullable(),
  /** Why the last attempt did not pass, in words. */
  problem: z.string().nullable(),
  invoiceId: z.string().nullable(),
});
export type TopUpDocument = z.infer<typeof topUp>;

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

const line = (most: number) => z.string().trim().min(1).max(most);

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

export const reviewStates = ['to_review', 'questioned', 'approved'] as const;
export const invoiceKinds = ['invoice', 'credit_note'] as const;

export const invoiceSummary = z.object({
  id: z.string(),
  /** `BUR-2026-00001`: gapless in its series and year. */
  number: z.string(),
  kind: z.enum(invoiceKinds),
  issuedAt: z.string(),
  buyerName: z.string(),
  description: z.string(),
  credits: z.number().int(),
  net: money,
  tax: money,
  total: money,
  /** Issued at payment, so every invoice is paid. */
  paidAt: z.string(),
  reviewState: z.enum(reviewStates),
  topUpId: z.string().nullable(),
  proFormaId: z.string().nullable(),
});
export type InvoiceSummary = z.infer<typeof invoiceSummary>;

const party = z.object({
  name: z.string(),
  address: z.string(),
  country: z.string(),
  vatNumber: z.string().nullable(),
});

export const invoice = invoiceSummary.extend({
  seller: party,
  buyer: party,
  lines: z.array(z.object({ description: z.string(), quantity: z.number().int(), unit: z.string(), net: money })),
  taxes: z.array(
    z.object({
      /** UNTDID 5305: S standard, AE reverse charge, O outside the scope. */
      category: z.string(),
      ratePercent: z.string(),
      base: money,
      tax: money,
      note: z.string().nullable(),
    }),
  ),
  taxPoint: z.string(),
  /** PO number of the buyer. */
  purchaseOrder: z.string().nullable(),
  notes: z.array(z.string()),
  review: z.array(z.object({ at: z.string(), person: z.string(), state: z.enum(reviewStates), comment: z.string() })),
});
export type InvoiceDocument = z.infer<typeof invoice>;

export const listInvoices = contract({
  id: 'listInvoices',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices',
  summary: 'Invoices, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery.extend({ review: z.enum(reviewStates).optional() }),
  answers: [
    {
      status: 200,
      description: 'Invoices',
      schema: z.object({ invoices: z.array(invoiceSummary), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...team, 'invalid_input'],
});

export const readInvoice = contract({
  id: 'readInvoice',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/{invoice}',
  summary: 'One invoice',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Invoice', schema: z.object({ invoice }) }],
  refusals: [...team],
});

export const downloadInvoicePdf = contract({
  id: 'downloadInvoicePdf',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/{invoice}/pdf',
  summary: 'The invoice as PDF',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'PDF', contentType: 'application/pdf' }],
  refusals: [...team],
});

export const reviewInvoice = contract({
  id: 'reviewInvoice',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/invoices/{invoice}/review',
  summary: 'Approve an invoice, question it, or put it back to review',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.object({ state: z.enum(reviewStates), comment: z.string().trim().max(2_000).default('') }),
  answers: [{ status: 200, description: 'Reviewed', schema: z.object({ invoice }) }],
  refusals: [...team, 'team_suspended', 'invalid_input'],
});

export const proFormaStates = ['open', 'paid', 'expired', 'cancelled'] as const;

export const proForma = z.object({
  id: z.string(),
  /** `PF-2026-00001`: a series of its own; not a tax document. */
  number: z.string(),
  state: z.enum(proFormaStates),
  createdAt: z.string(),
  dueAt: z.string(),
  /** Open and past its due date. */
  overdue: z.boolean(),
  termsDays: z.number().int(),
  purchaseOrder: z.string(),
  credits: z.number().int(),
  net: money,
  tax: money,
  total: money,
  invoiceId: z.string().nullable(),
});
export type ProFormaDocument = z.infer<typeof proForma>;

export const requestProForma = contract({
  id: 'requestProForma',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/pro-formas',
  summary: 'Ask to pay a credit pack by bank transfer',
  access: { kind: 'team', permission: 'billing:write' },
  body: z.object({
    pack,
    currency,
    purchaseOrder: line(limits.nameCharacters),
    termsDays: z.union([z.literal(14), z.literal(30), z.literal(60)]).default(30),
  }),
  answers: [{ status: 201, description: 'Pro-forma opened', schema: z.object({ proForma }) }],
  refusals: [
    ...team,
    'team_suspended',
    'invalid_input',
    'unknown_pack',
    'billing_details_missing',
    'idempotency_key_reused',
  ],
  idempotency: 'transaction',
});

export const listProFormas = contract({
  id: 'listProFormas',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/pro-formas',
  summary: 'Pro-formas, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery,
  answers: [
    {
      status: 200,
      description: 'Pro-formas',
      schema: z.object({ proFormas: z.array(proForma), nextCursor: z.string().nullable() }),
    },
  ],
  refusals: [...team, 'invalid_input'],
});

export const downloadProFormaPdf = contract({
  id: 'downloadProFormaPdf',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/pro-formas/{proForma}/pdf',
  summary: 'The pro-forma as PDF',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'PDF', contentType: 'application/pdf' }],
  refusals: [...team],
});

export const markTransferReceived = contract({
  id: 'markTransferReceived',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/operate/pro-formas/{proForma}/received',
  summary: 'Say that the transfer of a pro-forma has arrived: credits and invoice follow',
  access: { kind: 'operator' },
  answers: [{ status: 200, description: 'Received', schema: z.object({ invoiceId: z.string() }) }],
  refusals: ['not_signed_in', 'not_found', 'invalid_input'],
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
  listInvoices,
  readInvoice,
  downloadInvoicePdf,
  reviewInvoice,
  requestProForma,
  listProFormas,
  downloadProFormaPdf,
  markTransferReceived,
  receivePaymentEvent,
];
