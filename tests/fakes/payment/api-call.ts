/** What the API handlers share: the shape of a call, lists, amounts, a new payment intent. */
import { invalid, missing } from './failures.ts';
import { textOf, type Form } from './form-body.ts';
import type { Payments } from './payments.ts';
import type { FakeIntent, Store } from './state.ts';
import type { Webhooks } from './webhooks.ts';

export interface ApiContext {
  store: Store;
  payments: Payments;
  webhooks: Webhooks;
  /** Where the hosted page is reached. */
  baseUrl: string;
}
export interface ApiCall {
  /** Variable parts of the path, in order. */
  ids: string[];
  form: Form;
  query: URLSearchParams;
  idempotencyKey: string | null;
}
export type ApiHandler = (context: ApiContext, call: ApiCall) => unknown;
export type ApiRoute = [method: 'GET' | 'POST' | 'DELETE', path: RegExp, handler: ApiHandler];

/** One page of records, newest first, by the service's own parameters: `limit`, `starting_after`, `created[gte]`. */
export function list<T extends { id: string; created: number }>(url: string, records: T[], query: URLSearchParams) {
  const from = Number(query.get('created[gte]') ?? 0);
  const newest = records.filter(({ created }) => created >= from).reverse();
  const after = query.get('starting_after');
  const rest = newest.slice(after ? newest.findIndex(({ id }) => id === after) + 1 : 0);
  const limit = Math.min(100, Number(query.get('limit') ?? 10));
  return { object: 'list', url, has_more: rest.length > limit, data: rest.slice(0, limit) };
}

/** `expand[]=payment_intent` puts the object where its id stands. */
export const expanded = (query: URLSearchParams): string[] =>
  [...query].filter(([name]) => name.startsWith('expand')).map(([, value]) => value);

export const positiveAmount = (form: Form, name: string): number => {
  const text = textOf(form, name);
  if (text === undefined) throw missing(name);
  if (!/^\d+$/.test(text) || Number(text) < 1) throw invalid(name, `Invalid positive integer: ${text}`);
  return Number(text);
};

export function makeIntent(
  store: Store,
  fields: Pick<FakeIntent, 'amount' | 'currency' | 'customer' | 'metadata' | 'description'>,
): FakeIntent {
  const id = store.id('pi');
  const intent: FakeIntent = {
    id,
    object: 'payment_intent',
    amount_received: 0,
    canceled_at: null,
    client_secret: `${id}_secret_local`,
    created: store.now(),
    last_payment_error: null,
    latest_charge: null,
    livemode: false,
    next_action: null,
    payment_method: null,
    payment_method_types: ['card', 'sepa_debit'],
    setup_future_usage: null,
    status: 'requires_payment_method',
    ...fields,
  };
  store.state.intents[id] = intent;
  return intent;
}
