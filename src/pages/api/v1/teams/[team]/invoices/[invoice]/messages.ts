import * as contracts from '@/contracts/billing.ts';
import { listInvoiceMessages } from '@/server/billing/list-invoice-messages.ts';
import { writeInvoiceMessage } from '@/server/billing/write-invoice-message.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const GET = endpoint(contracts.listInvoiceMessages, ({ actor, parameters: { team = '', invoice = '' } }) =>
  listInvoiceMessages({ actor, team, invoiceId: invoice }),
);

export const POST = endpoint(
  contracts.writeInvoiceMessage,
  ({ actor, parameters: { team = '', invoice = '' }, body }) =>
    writeInvoiceMessage({ actor, team, invoiceId: invoice, ...body }),
);
