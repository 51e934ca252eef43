import * as contracts from '@/contracts/billing.ts';
import { readInvoice } from '@/server/billing/read-invoice.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.readInvoice, ({ actor, parameters: { team = '', invoice = '' } }) =>
  readInvoice({ actor, team, invoiceId: invoice }),
);
