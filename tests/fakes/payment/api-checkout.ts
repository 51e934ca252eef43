/** Checkout sessions and setup intents of the fake. */
import { expanded, list, makeIntent, type ApiContext, type ApiHandler, type ApiRoute } from './api-call.ts';
import { ApiFailure, invalid, missing, noSuch } from './failures.ts';
import { formOf, metadataOf, textOf, type Form } from './form-body.ts';
import type { FakeSession, FakeSetup, Line } from './state.ts';

function readLines(form: Form): { lines: Line[]; currency: string } {
  const items = Object.values(formOf(form, 'line_items') ?? {});
  if (items.length === 0) throw missing('line_items');
  let currency = '';
  const lines = items.map((item) => {
    const price = typeof item === 'object' ? formOf(item, 'price_data') : undefined;
    const product = price ? formOf(price, 'product_data') : undefined;
    if (typeof item !== 'object' || !price || !product) throw missing('line_items[0][price_data]');
    const unitAmount = Number(textOf(price, 'unit_amount'));
    if (!Number.isSafeInteger(unitAmount) || unitAmount < 0) throw invalid('unit_amount', 'Invalid integer');
    const itsCurrency = (textOf(price, 'currency') ?? '').toLowerCase();
    if (!/^[a-z]{3}$/.test(itsCurrency)) throw invalid('currency', 'Invalid currency');
    if (currency && currency !== itsCurrency) throw invalid('currency', 'All items must use one currency.');
    currency = itsCurrency;
    return { name: textOf(product, 'name') ?? '', quantity: Number(textOf(item, 'quantity') ?? 1), unitAmount };
  });
  return { lines, currency };
}

const createSession: ApiHandler = ({ store, baseUrl }, { form }) => {
  const mode = textOf(form, 'mode');
  if (mode !== 'payment' && mode !== 'setup') throw invalid('mode', 'Invalid mode: must be payment or setup here.');
  const successUrl = textOf(form, 'success_url');
  if (!successUrl) throw missing('success_url');
  const customer = textOf(form, 'customer') ?? null;
  if (customer && !store.state.customers[customer]) throw noSuch('customer', customer);
  const id = store.id('cs_test');
  const expiresAt = Number(textOf(form, 'expires_at') ?? store.now() + 24 * 3600);
  if (expiresAt < store.now() + 30 * 60 - 5)
    throw invalid('expires_at', 'The session must stay open for at least 30 minutes.');
  const session: FakeSession = {
    id,
    object: 'checkout.session',
    amount_subtotal: null,
    amount_total: null,
    cancel_url: textOf(form, 'cancel_url') ?? null,
    success_url: successUrl,
    client_reference_id: textOf(form, 'client_reference_id') ?? null,
    created: store.now(),
    currency: null,
    customer,
    expires_at: expiresAt,
    livemode: false,
    metadata: metadataOf(form),
    mode,
    payment_intent: null,
    payment_method_types: ['card', 'sepa_debit'],
    payment_status: mode === 'setup' ? 'no_payment_required' : 'unpaid',
    setup_intent: null,
    status: 'open',
    url: `${baseUrl}/pay/${id}`,
  };
  if (mode === 'payment') {
    const { lines, currency } = readLines(form);
    const total = lines.reduce((sum, { quantity, unitAmount }) => sum + quantity * unitAmount, 0);
    const data = formOf(form, 'payment_intent_data') ?? {};
    const intent = makeIntent(store, {
      amount: total,
      currency,
      customer,
      metadata: metadataOf(data),
      description: textOf(data, 'description') ?? null,
    });
    if (textOf(data, 'setup_future_usage') === 'off_session') intent.setup_future_usage = 'off_session';
    Object.assign(session, { amount_subtotal: total, amount_total: total, currency, payment_intent: intent.id });
    store.state.lines[id] = lines;
  } else session.setup_intent = makeSetup(store, customer, metadataOf(formOf(form, 'setup_intent_data') ?? {})).id;
  store.state.sessions[id] = session;
  store.state.openedAtOffset[id] = store.state.clockOffsetSeconds;
  return session;
};

function makeSetup(store: ApiContext['store'], customer: string | null, metadata: Record<string, string>): FakeSetup {
  const id = store.id('seti');
  const setup: FakeSetup = {
    id,
    object: 'setup_intent',
    client_secret: `${id}_secret_local`,
    created: store.now(),
    customer,
    last_setup_error: null,
    livemode: false,
    metadata,
    payment_method: null,
    status: 'requires_payment_method',
    usage: 'off_session',
  };
  store.state.setups[id] = setup;
  return setup;
}

const sessionOf = ({ store }: ApiContext, id: string): FakeSession => {
  const session = store.state.sessions[id];
  if (!session) throw noSuch('checkout.session', id);
  return session;
};

const readSession: ApiHandler = (context, { ids: [id = ''], query }) => {
  const session = sessionOf(context, id);
  const wanted = expanded(query);
  const intent = context.store.state.intents[session.payment_intent ?? ''];
  const setup = context.store.state.setups[session.setup_intent ?? ''];
  return {
    ...session,
    ...(intent && wanted.includes('payment_intent') ? { payment_intent: intent } : {}),
    ...(setup && wanted.includes('setup_intent') ? { setup_intent: setup } : {}),
  };
};

const listSessions: ApiHandler = ({ store }, { query }) => {
  const intent = query.get('payment_intent');
  const customer = query.get('customer');
  return list(
    '/v1/checkout/sessions',
    Object.values(store.state.sessions).filter(
      (session) => (!intent || session.payment_intent === intent) && (!customer || session.customer === customer),
    ),
    query,
  );
};

const expireSession: ApiHandler = (context, { ids: [id = ''] }) => {
  const session = sessionOf(context, id);
  if (session.status !== 'open')
    throw new ApiFailure(400, {
      type: 'invalid_request_error',
      message: 'Only Checkout Sessions with a status in ["open"] can be expired.',
    });
  context.payments.expire(session);
  return session;
};

export const checkoutRoutes: ApiRoute[] = [
  ['POST', /^\/v1\/checkout\/sessions$/, createSession],
  ['GET', /^\/v1\/checkout\/sessions\/([^/]+)$/, readSession],
  ['GET', /^\/v1\/checkout\/sessions$/, listSessions],
  ['POST', /^\/v1\/checkout\/sessions\/([^/]+)\/expire$/, expireSession],
  [
    'POST',
    /^\/v1\/setup_intents$/,
    ({ store }, { form }) => makeSetup(store, textOf(form, 'customer') ?? null, metadataOf(form)),
  ],
  [
    'GET',
    /^\/v1\/setup_intents\/([^/]+)$/,
    ({ store }, { ids: [id = ''] }) => {
      const setup = store.state.setups[id];
      if (!setup) throw noSuch('setup_intent', id);
      return setup;
    },
  ],
];
