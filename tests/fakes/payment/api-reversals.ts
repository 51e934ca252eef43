/** Refunds and disputes of the fake. */
import { expanded, list, positiveAmount, type ApiHandler, type ApiRoute } from './api-call.ts';
import { ApiFailure, missing, noSuch } from './failures.ts';
import { metadataOf, textOf } from './form-body.ts';
import type { FakeDispute, FakeRefund, Store } from './state.ts';
import type { Webhooks } from './webhooks.ts';

const refunded = (store: Store, intentId: string): number =>
  Object.values(store.state.refunds)
    .filter(({ payment_intent, status }) => payment_intent === intentId && status !== 'failed')
    .reduce((sum, { amount }) => sum + amount, 0);

const createRefund: ApiHandler = ({ store, webhooks }, { form, idempotencyKey }) => {
  const intentId = textOf(form, 'payment_intent');
  if (!intentId) throw missing('payment_intent');
  const intent = store.state.intents[intentId];
  if (!intent) throw noSuch('payment_intent', intentId);
  const left = intent.amount_received - refunded(store, intentId);
  if (Object.values(store.state.disputes).some((each) => each.payment_intent === intentId && each.status !== 'won'))
    throw new ApiFailure(400, {
      type: 'invalid_request_error',
      code: 'charge_disputed',
      message: `Charge ${intent.latest_charge} has been charged back; cannot issue a refund.`,
    });
  const amount = textOf(form, 'amount') === undefined ? left : positiveAmount(form, 'amount');
  if (intent.status !== 'succeeded' || amount > left || amount <= 0)
    throw new ApiFailure(400, {
      type: 'invalid_request_error',
      code: left === 0 ? 'charge_already_refunded' : 'parameter_invalid',
      message: `Refund amount (${amount}) is greater than unrefunded amount on charge (${left})`,
      param: 'amount',
    });
  const refund: FakeRefund = {
    id: store.id('re'),
    object: 'refund',
    amount,
    charge: intent.latest_charge,
    created: store.now(),
    currency: intent.currency,
    metadata: metadataOf(form),
    payment_intent: intent.id,
    reason: 'requested_by_customer',
    status: 'succeeded',
  };
  store.state.refunds[refund.id] = refund;
  webhooks.emit('refund.created', refund, idempotencyKey);
  return refund;
};

/** Somebody's bank takes the payment back, as far as it was not refunded; started from the control page. */
export function openDispute(store: Store, webhooks: Webhooks, intentId: string, amount?: number): FakeDispute {
  const intent = store.state.intents[intentId];
  if (intent?.status !== 'succeeded' || !intent.latest_charge) throw noSuch('payment_intent', intentId);
  const dispute: FakeDispute = {
    id: store.id('dp'),
    object: 'dispute',
    amount: amount ?? intent.amount_received - refunded(store, intentId),
    charge: intent.latest_charge,
    created: store.now(),
    currency: intent.currency,
    is_charge_refundable: false,
    livemode: false,
    metadata: {},
    payment_intent: intent.id,
    reason: 'general',
    status: 'needs_response',
  };
  store.state.disputes[dispute.id] = dispute;
  webhooks.emit('charge.dispute.created', dispute);
  return dispute;
}

export function decideDispute(
  store: Store,
  webhooks: Webhooks,
  disputeId: string,
  status: 'won' | 'lost',
): FakeDispute {
  const dispute = store.state.disputes[disputeId];
  if (!dispute) throw noSuch('dispute', disputeId);
  dispute.status = status;
  webhooks.emit('charge.dispute.closed', dispute);
  return dispute;
}

export const reversalRoutes: ApiRoute[] = [
  ['POST', /^\/v1\/refunds$/, createRefund],
  [
    'GET',
    /^\/v1\/refunds\/([^/]+)$/,
    ({ store }, { ids: [id = ''] }) => {
      const refund = store.state.refunds[id];
      if (!refund) throw noSuch('refund', id);
      return refund;
    },
  ],
  [
    'GET',
    /^\/v1\/refunds$/,
    ({ store }, { query }) =>
      list(
        '/v1/refunds',
        Object.values(store.state.refunds).filter(
          ({ payment_intent }) => !query.get('payment_intent') || payment_intent === query.get('payment_intent'),
        ),
        query,
      ),
  ],
  [
    'GET',
    /^\/v1\/disputes\/([^/]+)$/,
    ({ store }, { ids: [id = ''], query }) => {
      const dispute = store.state.disputes[id];
      if (!dispute) throw noSuch('dispute', id);
      const intent = store.state.intents[dispute.payment_intent];
      return { ...dispute, ...(expanded(query).includes('payment_intent') ? { payment_intent: intent } : {}) };
    },
  ],
  [
    'GET',
    /^\/v1\/disputes$/,
    ({ store }, { query }) =>
      list(
        '/v1/disputes',
        Object.values(store.state.disputes).filter(
          ({ payment_intent }) => !query.get('payment_intent') || payment_intent === query.get('payment_intent'),
        ),
        query,
      ),
  ],
];
