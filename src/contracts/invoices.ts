/** Invoices and finance's review of them. */
import { z } from 'zod';
import { contract } from './contract.ts';
import { pageQuery } from './page.ts';
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
  refusals: [...team, 'team_suspended', 'invalid_input'],
});

export const invoiceContracts = [listInvoices, readInvoice, downloadInvoicePdf, downloadInvoiceUbl, reviewInvoice];
