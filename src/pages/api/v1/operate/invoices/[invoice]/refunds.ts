import * as contracts from '@/contracts/billing.ts';
import { refundPurchase } from '@/server/billing/refund-purchase.ts';
import { endpoint } from '@/server/http/endpoint.ts';
import { readRefundable } from '@/server/operate/read-refundable.ts';

export const GET = endpoint(contracts.readRefundable, ({ actor, parameters: { invoice = '' } }) =>
  readRefundable({ actor, invoiceId: invoice }),
);

export const POST = endpoint(contracts.refundPurchase, ({ actor, parameters: { invoice = '' }, body, idempotency }) =>
  refundPurchase({ actor, invoiceId: invoice, ...body, idempotency }),
);
