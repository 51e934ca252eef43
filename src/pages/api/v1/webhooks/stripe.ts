import * as contracts from '@/contracts/billing.ts';
import { receivePaymentEvent } from '@/server/billing/receive-payment-event.ts';
import { endpoint } from '@/server/http/endpoint.ts';

export const POST = endpoint(contracts.receivePaymentEvent, ({ textBody, context }) =>
  receivePaymentEvent({
    body: textBody?.text ?? '',
    signature: context.request.headers.get('stripe-signature'),
  }),
);
