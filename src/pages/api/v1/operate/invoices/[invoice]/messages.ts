import * as contracts from '@/contracts/operate.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { answerInvoice } from '@/server/operate/answer-invoice.ts';
import { readQuestionedInvoice } from '@/server/operate/read-questioned-invoice.ts';

export const GET = endpoint(contracts.readQuestionedInvoice, ({ actor, parameters: { invoice = '' } }) =>
  readQuestionedInvoice({ actor, invoiceId: invoice }),
);

export const POST = endpoint(contracts.answerInvoice, ({ actor, parameters: { invoice = '' }, body }) =>
  answerInvoice({ actor, invoiceId: invoice, ...body }),
);
