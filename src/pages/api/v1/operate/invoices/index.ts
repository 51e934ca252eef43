import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { listQuestionedInvoices } from '@/server/operate/list-questioned-invoices.ts';

export const GET = endpoint(contracts.listQuestionedInvoices, ({ actor, query }) =>
  listQuestionedInvoices({ actor, ...query }),
);
