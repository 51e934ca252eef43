/** Everything the fake remembers, in memory and, when it has a file, on disk after every change. */
import { readFileSync, renameSync, writeFileSync } from 'node:fs';
import type Stripe from 'stripe';

/** The fields that our billing reads, typed by the SDK's own definitions; the rest of the published shape is left out. */
export type FakeCustomer = Pick<
  Stripe.Customer,
  'id' | 'object' | 'created' | 'livemode' | 'name' | 'email' | 'metadata'
> & {
  invoice_settings: { default_payment_method: string | null };
};
export type FakeIntent = Pick<
  Stripe.PaymentIntent,
  | 'id'
  | 'object'
  | 'amount'
  | 'amount_received'
  | 'created'
  | 'currency'
  | 'livemode'
  | 'metadata'
  | 'status'
  | 'description'
  | 'payment_method_types'
  | 'setup_future_usage'
  | 'canceled_at'
> & {
  customer: string | null;
  payment_method: string | null;
  latest_charge: string | null;
  client_secret: string;
  last_payment_error: {
    type: string;
    code: string;
    decline_code?: string;
    message: string;
    payment_method: FakeMethod | null;
  } | null;
  next_action: { type: 'redirect_to_url'; redirect_to_url: { url: string; return_url: string | null } } | null;
};
export type FakeMethod = Pick<Stripe.PaymentMethod, 'id' | 'object' | 'created' | 'livemode' | 'metadata'> & {
  type: 'card' | 'sepa_debit';
  customer: string | null;
  card?: { brand: string; last4: string; exp_month: number; exp_year: number; country: string };
  sepa_debit?: { last4: string; country: string };
};
export type FakeSession = Pick<
  Stripe.Checkout.Session,
  | 'id'
  | 'object'
  | 'amount_subtotal'
  | 'amount_total'
  | 'cancel_url'
  | 'success_url'
  | 'client_reference_id'
  | 'created'
  | 'currency'
  | 'expires_at'
  | 'livemode'
  | 'metadata'
  | 'payment_status'
  | 'status'
  | 'url'
  | 'payment_method_types'
> & { mode: 'payment' | 'setup'; customer: string | null; payment_intent: string | null; setup_intent: string | null };
export type FakeSetup = Pick<
  Stripe.SetupIntent,
  'id' | 'object' | 'created' | 'livemode' | 'metadata' | 'status' | 'usage'
> & {
  customer: string | null;
  payment_method: string | null;
  client_secret: string;
  last_setup_error: { type: string; code: string; decline_code?: string; message: string } | null;
};
export type FakeRefund = Pick<
  Stripe.Refund,
  'id' | 'object' | 'amount' | 'created' | 'currency' | 'metadata' | 'status' | 'reason'
> & { payment_intent: string; charge: string | null };
export type FakeDispute = Pick<
  Stripe.Dispute,
  | 'id'
  | 'object'
  | 'amount'
  | 'created'
  | 'currency'
  | 'livemode'
  | 'metadata'
  | 'status'
  | 'reason'
  | 'is_charge_refundable'
> & { payment_intent: string; charge: string };
export interface FakeEvent {
  id: string;
  object: 'event';
  api_version: string;
  created: number;
  livemode: false;
  pending_webhooks: number;
  request: { id: null; idempotency_key: string | null };
  type: string;
  data: { object: Record<string, unknown> };
}
export interface Delivery {
  eventId: string;
  attempts: number;
  dueAtMs: number;
}
export interface Line {
  name: string;
  quantity: number;
  unitAmount: number;
}
export interface Switches {
  /** Each event is delivered this many extra times. */
  duplicate: number;
  delayMs: number;
  /** Events that come close together are delivered in the reverse order. */
  reorder: boolean;
  /** This many of the next events are never delivered. */
  lose: number;
  /** This many of the next API calls fail with 500. */
  failNext: number;
  /** This many of the next API calls are done but their answer never arrives. */
  hangNext: number;
  /** This many of the next API calls are done and then keep their caller waiting for ever. */
  stallNext: number;
}

export interface State {
  count: number;
  /** How far the movable clock is ahead of the real one. It moves what waits; dates on objects stay real ones. */
  clockOffsetSeconds: number;
  /** How far it was ahead when a session was opened. */
  openedAtOffset: Record<string, number>;
  customers: Record<string, FakeCustomer>;
  sessions: Record<string, FakeSession>;
  lines: Record<string, Line[]>;
  intents: Record<string, FakeIntent>;
  setups: Record<string, FakeSetup>;
  methods: Record<string, FakeMethod>;
  /** Card numbers decide what a saved card does later. */
  cardNumbers: Record<string, string>;
  refunds: Record<string, FakeRefund>;
  disputes: Record<string, FakeDispute>;
  events: FakeEvent[];
  deliveries: Delivery[];
  /** Bank debits on their way: intent → when they settle and how. */
  debits: Record<string, { settlesAt: number; succeeds: boolean }>;
  answers: Record<string, { request: string; status: number; body: string }>;
  switches: Switches;
}

export const calm: Switches = {
  duplicate: 0,
  delayMs: 0,
  reorder: false,
  lose: 0,
  failNext: 0,
  hangNext: 0,
  stallNext: 0,
};

const empty = (): State => ({
  count: 0,
  clockOffsetSeconds: 0,
  openedAtOffset: {},
  customers: {},
  sessions: {},
  lines: {},
  intents: {},
  setups: {},
  methods: {},
  cardNumbers: {},
  refunds: {},
  disputes: {},
  events: [],
  deliveries: [],
  debits: {},
  answers: {},
  switches: { ...calm },
});

export class Store {
  readonly state: State;
  readonly #file: string | undefined;

  constructor(file?: string) {
    this.#file = file;
    this.state = file ? load(file) : empty();
  }

  save(): void {
    if (!this.#file) return;
    writeFileSync(`${this.#file}.new`, JSON.stringify(this.state));
    renameSync(`${this.#file}.new`, this.#file);
  }

  /** Seconds since the epoch. */
  now(): number {
    return Math.floor(Date.now() / 1000);
  }

  /** Seconds since the epoch on the movable clock. */
  movedNow(): number {
    return this.now() + this.state.clockOffsetSeconds;
  }

  id(prefix: string): string {
    this.state.count += 1;
    const random = Math.random().toString(36).slice(2, 10);
    return `${prefix}_local${String(this.state.count).padStart(6, '0')}${random}`;
  }
}

function load(file: string): State {
  try {
    return { ...empty(), ...(JSON.parse(readFileSync(file, 'utf8')) as State) };
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return empty();
    throw error;
  }
}
