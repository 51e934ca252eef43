import * as contracts from '@/contracts/billing.ts';
import { refundPurchase } from '@/server/billing/refund-purchase.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(contracts.refundPurchase, ({ actor, parameters: { invoice = '' }, body, idempotency }) =>
  refundPurchase({ actor, invoiceId: invoice, ...body, idempotency }),
);
