/** The service's API as far as our billing calls it: one handler per method and path, answering in the published shapes. */
import { list, makeIntent, positiveAmount, type ApiHandler, type ApiRoute } from './api-call.ts';
import { checkoutRoutes } from './api-checkout.ts';
import { reversalRoutes } from './api-reversals.ts';
import { formOf, metadataOf, textOf } from './form-body.ts';
import type { Payments } from './payments.ts';
import { makeCard } from './cards.ts';
import type { FakeIntent } from './state.ts';
import { ApiFailure, invalid, missing, noSuch } from './failures.ts';
import { heldBy } from './balance.ts';

const find = <T>(records: Record<string, T>, kind: string, id: string): T => {
  const found = records[id];
  if (!found) throw noSuch(kind, id);
  return found;
};

const createCustomer: ApiHandler = ({ store, webhooks }, { form, idempotencyKey }) => {
  const customer = {
    id: store.id('cus'),
    object: 'customer' as const,
    created: store.now(),
    livemode: false,
    name: textOf(form, 'name') ?? null,
    email: textOf(form, 'email') ?? null,
    metadata: metadataOf(form),
    invoice_settings: { default_payment_method: null },
  };
  store.state.customers[customer.id] = customer;
  webhooks.emit('customer.created', customer, idempotencyKey);
  return customer;
};

const createIntent: ApiHandler = ({ store, payments, webhooks }, { form, idempotencyKey }) => {
  const currency = textOf(form, 'currency');
  if (!currency) throw missing('currency');
  const intent = makeIntent(store, {
    amount: positiveAmount(form, 'amount'),
    currency,
    customer: textOf(form, 'customer') ?? null,
    metadata: metadataOf(form),
    description: textOf(form, 'description') ?? null,
  });
  if (intent.customer) find(store.state.customers, 'customer', intent.customer);
  webhooks.emit('payment_intent.created', intent, idempotencyKey);
  const method = textOf(form, 'payment_method');
  if (!method) return intent;
  const found = find(store.state.methods, 'PaymentMethod', method);
  if (intent.customer && found.customer !== intent.customer)
    throw invalid('payment_method', 'The payment method does not belong to the customer that you supplied.');
  intent.payment_method = found.id;
  intent.status = 'requires_confirmation';
  return textOf(form, 'confirm') === 'true' ? confirm(payments, intent) : intent;
};

/** A declined off-session charge answers 402 with the intent inside the error, as the service does. */
function confirm(payments: Payments, intent: FakeIntent): FakeIntent {
  payments.confirmOffSession(intent);
  const error = intent.last_payment_error;
  if (error)
    throw new ApiFailure(402, {
      type: 'card_error',
      code: error.code,
      message: error.message,
      payment_intent: structuredClone(intent),
      ...(error.decline_code ? { decline_code: error.decline_code } : {}),
    });
  return intent;
}

const methodsOf: ApiHandler = ({ store }, { ids: [customer = ''], query }) =>
  list(
    `/v1/customers/${customer}/payment_methods`,
    Object.values(store.state.methods).filter(
      (method) => method.customer === customer && (!query.get('type') || method.type === query.get('type')),
    ),
    query,
  );

const routes: ApiRoute[] = [
  ['POST', /^\/v1\/customers$/, createCustomer],
  ['GET', /^\/v1\/customers\/([^/]+)$/, ({ store }, { ids: [id = ''] }) => find(store.state.customers, 'customer', id)],
  [
    'POST',
    /^\/v1\/customers\/([^/]+)$/,
    ({ store }, { ids: [id = ''], form }) => {
      const customer = find(store.state.customers, 'customer', id);
      const settings = formOf(form, 'invoice_settings');
      if (settings)
        customer.invoice_settings.default_payment_method = textOf(settings, 'default_payment_method') ?? null;
      return Object.assign(customer, {
        name: textOf(form, 'name') ?? customer.name,
        email: textOf(form, 'email') ?? customer.email,
        metadata: { ...customer.metadata, ...metadataOf(form) },
      });
    },
  ],
  ['GET', /^\/v1\/customers\/([^/]+)\/payment_methods$/, methodsOf],
  ['POST', /^\/v1\/payment_intents$/, createIntent],
  [
    'GET',
    /^\/v1\/payment_intents$/,
    ({ store }, { query }) =>
      list(
        '/v1/payment_intents',
        Object.values(store.state.intents).filter(
          ({ customer }) => !query.get('customer') || customer === query.get('customer'),
        ),
        query,
      ),
  ],
  [
    'GET',
    /^\/v1\/payment_intents\/([^/]+)$/,
    ({ store }, { ids: [id = ''] }) => find(store.state.intents, 'payment_intent', id),
  ],
  [
    'POST',
    /^\/v1\/payment_intents\/([^/]+)\/confirm$/,
    ({ store, payments }, { ids: [id = ''] }) => confirm(payments, find(store.state.intents, 'payment_intent', id)),
  ],
  [
    'POST',
    /^\/v1\/payment_intents\/([^/]+)\/cancel$/,
    ({ store, payments }, { ids: [id = ''] }) => payments.cancel(find(store.state.intents, 'payment_intent', id)),
  ],
  [
    'GET',
    /^\/v1\/payment_methods\/([^/]+)$/,
    ({ store }, { ids: [id = ''] }) => find(store.state.methods, 'PaymentMethod', id),
  ],
  [
    'POST',
    /^\/v1\/payment_methods$/,
    ({ store }, { form }) => {
      const number = textOf(formOf(form, 'card') ?? {}, 'number');
      if (textOf(form, 'type') !== 'card' || !number) throw missing('card[number]');
      return makeCard(store, number, null);
    },
  ],
  [
    'POST',
    /^\/v1\/payment_methods\/([^/]+)\/attach$/,
    ({ store, webhooks }, { ids: [id = ''], form }) => {
      const method = find(store.state.methods, 'PaymentMethod', id);
      method.customer = find(store.state.customers, 'customer', textOf(form, 'customer') ?? '').id;
      webhooks.emit('payment_method.attached', method);
      return method;
    },
  ],
  [
    'POST',
    /^\/v1\/payment_methods\/([^/]+)\/detach$/,
    ({ store, webhooks }, { ids: [id = ''] }) => {
      const method = find(store.state.methods, 'PaymentMethod', id);
      if (!method.customer)
        throw new ApiFailure(400, {
          type: 'invalid_request_error',
          code: 'payment_method_not_available',
          message: 'The payment method you provided is not attached to a customer so detachment is impossible.',
        });
      method.customer = null;
      webhooks.emit('payment_method.detached', method);
      return method;
    },
  ],
  [
    'GET',
    /^\/v1\/events\/([^/]+)$/,
    ({ store }, { ids: [id = ''] }) => {
      const event = store.state.events.find((each) => each.id === id);
      if (!event) throw noSuch('event', id);
      return event;
    },
  ],
  ['GET', /^\/v1\/events$/, ({ store }, { query }) => list('/v1/events', store.state.events, query)],
  [
    'GET',
    /^\/v1\/balance$/,
    ({ store }) => ({ object: 'balance', available: heldBy(store.state), pending: [], livemode: false }),
  ],
  ...checkoutRoutes,
  ...reversalRoutes,
];

/** The handler of a call and the variable parts of its path, or undefined. */
export function routeOf(method: string, path: string): { handler: ApiHandler; ids: string[] } | undefined {
  for (const [routeMethod, pattern, handler] of routes) {
    const match = routeMethod === method ? pattern.exec(path) : null;
    if (match) return { handler, ids: match.slice(1).map(decodeURIComponent) };
  }
  return undefined;
}
