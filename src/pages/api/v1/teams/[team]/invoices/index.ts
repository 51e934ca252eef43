import * as contracts from '@/contracts/billing.ts';
import { listInvoices } from '@/server/billing/list-invoices.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.listInvoices, ({ actor, parameters: { team = '' }, query }) =>
  listInvoices({ actor, team, ...query }),
);
