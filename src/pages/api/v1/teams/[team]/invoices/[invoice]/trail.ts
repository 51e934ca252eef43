import * as contracts from '@/contracts/billing.ts';
import { readInvoiceTrail } from '@/server/billing/read-invoice-trail.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readInvoiceTrail, ({ actor, parameters: { team = '', invoice = '' }, query }) =>
  readInvoiceTrail({ actor, team, invoiceId: invoice, ...query }),
);
