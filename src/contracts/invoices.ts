/** Invoices and finance's review of them. */
import { z } from 'zod';
import { contract } from './contract.ts';
import { dayRange, pageQuery } from './page.ts';
import { money } from './purchase.ts';

const team = ['not_signed_in', 'not_found', 'forbidden'] as const;

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
  /** Of a credit note: taken back, to six decimals. */
  credits: z.number(),
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

const invoiceFilters = z.object({
  review: z.enum(reviewStates).optional(),
  kind: z.enum(invoiceKinds).optional(),
  /** Issued. */
  ...dayRange,
  /** Part of the number, the buyer's name, a line or the PO number. */
  search: z.string().trim().max(100).optional(),
  /** Id of whoever bought. */
  member: z.string().max(100).optional(),
  /** Id or code: invoices whose credits paid for jobs booked to it. */
  projectCode: z.string().max(100).optional(),
});
export type InvoiceFilters = z.infer<typeof invoiceFilters>;

export const listInvoices = contract({
  id: 'listInvoices',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices',
  summary: 'Invoices, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery.extend(invoiceFilters.shape),
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

export const downloadInvoiceUbl = contract({
  id: 'downloadInvoiceUbl',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/{invoice}/ubl',
  summary: 'The invoice as UBL 2.1 in the core of EN 16931',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'XML', contentType: 'application/xml' }],
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
  refusals: [...team, 'team_suspended', 'invalid_input', 'limit_reached'],
});

export const exportInvoices = contract({
  id: 'exportInvoices',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/csv',
  summary: 'Invoices as CSV, newest first',
  access: { kind: 'team', permission: 'billing:read' },
  query: invoiceFilters,
  answers: [{ status: 200, description: 'CSV', contentType: 'text/csv' }],
  refusals: [...team, 'invalid_input'],
});

export const downloadInvoices = contract({
  id: 'downloadInvoices',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/zip',
  summary: 'Invoices as one zip: the PDF and the UBL file of each',
  access: { kind: 'team', permission: 'billing:read' },
  query: invoiceFilters,
  answers: [{ status: 200, description: 'Zip', contentType: 'application/zip' }],
  refusals: [...team, 'invalid_input', 'too_large'],
});

const microcredits = z.number().int();

/** What happened to an invoice and to the credits that it bought. */
export const invoiceTrail = z.object({
  /** Oldest first. */
  timeline: z.array(z.object({ at: z.string(), words: z.string() })),
  /** The credits bought; null for a credit note. */
  lot: z
    .object({
      id: z.string(),
      creditsMicrocredits: microcredits,
      spentMicrocredits: microcredits,
      returnedMicrocredits: microcredits,
      frozenMicrocredits: microcredits,
      remainingMicrocredits: microcredits,
    })
    .nullable(),
  /** Jobs that were charged to these credits, the newest first. */
  jobs: z.array(
    z.object({
      id: z.string(),
      name: z.string(),
      projectCode: z.string().nullable(),
      member: z.string(),
      drawnMicrocredits: microcredits,
    }),
  ),
  nextCursor: z.string().nullable(),
});
export type InvoiceTrail = z.infer<typeof invoiceTrail>;

export const readInvoiceTrail = contract({
  id: 'readInvoiceTrail',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/{invoice}/trail',
  summary: 'The payment of an invoice step by step, and the jobs that its credits paid for',
  access: { kind: 'team', permission: 'billing:read' },
  query: pageQuery,
  answers: [{ status: 200, description: 'Trail', schema: z.object({ trail: invoiceTrail }) }],
  refusals: [...team, 'invalid_input'],
});

/** The thread between the team's finance people and the operator. */
export const invoiceMessage = z.object({
  id: z.string(),
  at: z.string(),
  side: z.enum(['team', 'operator']),
  person: z.string(),
  body: z.string(),
});
export type InvoiceMessageDocument = z.infer<typeof invoiceMessage>;
export const messageBody = z.object({ body: z.string().trim().min(1, 'Write something.').max(2_000) });

export const listInvoiceMessages = contract({
  id: 'listInvoiceMessages',
  feature: 'billing',
  method: 'GET',
  path: '/api/v1/teams/{team}/invoices/{invoice}/messages',
  summary: 'What the team and the operator wrote to each other about an invoice, oldest first',
  access: { kind: 'team', permission: 'billing:read' },
  answers: [{ status: 200, description: 'Messages', schema: z.object({ messages: z.array(invoiceMessage) }) }],
  refusals: [...team],
});

export const writeInvoiceMessage = contract({
  id: 'writeInvoiceMessage',
  feature: 'billing',
  method: 'POST',
  path: '/api/v1/teams/{team}/invoices/{invoice}/messages',
  summary: 'Write to the operator about an invoice',
  access: { kind: 'team', permission: 'billing:write' },
  body: messageBody,
  answers: [{ status: 201, description: 'Written', schema: z.object({ messages: z.array(invoiceMessage) }) }],
  refusals: [...team, 'team_suspended', 'invalid_input', 'limit_reached', 'idempotency_key_reused'],
  idempotency: 'transaction',
});

export const invoiceContracts = [
  listInvoices,
  exportInvoices,
  downloadInvoices,
  readInvoice,
  readInvoiceTrail,
  downloadInvoicePdf,
  downloadInvoiceUbl,
  reviewInvoice,
  listInvoiceMessages,
  writeInvoiceMessage,
];
