import * as contracts from '@/contracts/billing.ts';
import { reviewInvoice } from '@/server/billing/review-invoice.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(contracts.reviewInvoice, ({ actor, parameters: { team = '', invoice = '' }, body }) =>
  reviewInvoice({ actor, team, invoiceId: invoice, ...body }),
);
