/** Moves payment intents and checkout sessions through their published states, emitting the service's events in its order. */
import { asksHolder, declines, makeCard, makeDebit, outcomeOf, type CardOutcome } from './cards.ts';
import type { FakeIntent, FakeMethod, FakeSession, FakeSetup, Store } from './state.ts';
import type { Webhooks } from './webhooks.ts';

const debitSettlesAfterSeconds = 3 * 24 * 3600;

export type Attempt = 'paid' | 'declined' | 'authenticate' | 'processing' | 'unknown_card';

export class Payments {
  constructor(
    private readonly store: Store,
    private readonly webhooks: Webhooks,
  ) {}

  /** A card typed into the hosted page. */
  payWithCard(session: FakeSession, number: string): Attempt {
    const outcome = outcomeOf(number);
    if (!outcome) return 'unknown_card';
    const method = makeCard(this.store, number, null);
    if (session.mode === 'setup') return this.#saveCard(session, method, outcome);
    const intent = this.intentOf(session);
    intent.payment_method = method.id;
    if (asksHolder(outcome)) {
      intent.status = 'requires_action';
      this.webhooks.emit('payment_intent.requires_action', intent);
      return 'authenticate';
    }
    if (outcome === 'declined' || outcome === 'insufficient') {
      this.fail(intent, declines[outcome], method);
      return 'declined';
    }
    this.succeed(intent);
    this.#complete(session, 'paid');
    return 'paid';
  }

  authenticate(session: FakeSession, passed: boolean): Attempt {
    if (session.mode === 'setup') return this.#authenticateSetup(session, passed);
    const intent = this.intentOf(session);
    const method = this.store.state.methods[intent.payment_method ?? ''] ?? null;
    if (intent.status !== 'requires_action') return intent.status === 'succeeded' ? 'paid' : 'declined';
    if (!passed) {
      this.fail(intent, declines.failedAuthentication, method);
      return 'declined';
    }
    this.succeed(intent);
    this.#complete(session, 'paid');
    return 'paid';
  }

  payByDebit(session: FakeSession, succeeds: boolean): Attempt {
    const intent = this.intentOf(session);
    intent.payment_method = makeDebit(this.store, null).id;
    intent.status = 'processing';
    this.webhooks.emit('payment_intent.processing', intent);
    this.store.state.debits[intent.id] = { settlesAt: this.store.movedNow() + debitSettlesAfterSeconds, succeeds };
    this.#complete(session, 'unpaid');
    return 'processing';
  }

  /** Settles every debit and expires every session whose time has come on the movable clock. */
  passTime(): void {
    const { state } = this.store;
    for (const [intentId, { settlesAt, succeeds }] of Object.entries(state.debits)) {
      if (settlesAt > this.store.movedNow()) continue;
      delete state.debits[intentId];
      this.#settleDebit(intentId, succeeds);
    }
    for (const session of Object.values(state.sessions)) {
      const moved = this.store.movedNow() - (state.openedAtOffset[session.id] ?? 0);
      if (session.status === 'open' && session.expires_at <= moved) this.expire(session);
    }
  }

  #settleDebit(intentId: string, succeeds: boolean): void {
    const { state } = this.store;
    const intent = state.intents[intentId];
    const session = Object.values(state.sessions).find(({ payment_intent }) => payment_intent === intentId);
    if (!intent) return;
    if (succeeds) this.succeed(intent);
    else
      this.fail(
        intent,
        {
          type: 'invalid_request_error',
          code: 'payment_intent_payment_attempt_failed',
          message: 'The bank returned the debit unpaid.',
        },
        state.methods[intent.payment_method ?? ''] ?? null,
      );
    if (!session) return;
    if (succeeds) session.payment_status = 'paid';
    this.webhooks.emit(`checkout.session.async_payment_${succeeds ? 'succeeded' : 'failed'}`, session);
  }

  cancel(intent: FakeIntent): FakeIntent {
    if (intent.status === 'succeeded' || intent.status === 'canceled') return intent;
    intent.status = 'canceled';
    intent.canceled_at = this.store.now();
    this.webhooks.emit('payment_intent.canceled', intent);
    return intent;
  }

  expire(session: FakeSession): void {
    session.status = 'expired';
    session.url = null;
    const intent = this.store.state.intents[session.payment_intent ?? ''];
    if (intent) this.cancel(intent);
    this.webhooks.emit('checkout.session.expired', session);
  }

  /** Charges a saved card without its holder. */
  confirmOffSession(intent: FakeIntent): void {
    const method = this.store.state.methods[intent.payment_method ?? ''];
    if (!method) throw new Error('An intent without a payment method cannot be confirmed.');
    const outcome = outcomeOf(this.store.state.cardNumbers[method.id] ?? '') ?? 'accepted';
    if (outcome === 'accepted' || (outcome === 'authentication' && method.customer)) this.succeed(intent);
    else if (asksHolder(outcome)) this.fail(intent, declines.authentication, method);
    else this.fail(intent, outcome === 'insufficient' ? declines.insufficient : declines.declined, method);
  }

  succeed(intent: FakeIntent): void {
    intent.status = 'succeeded';
    intent.amount_received = intent.amount;
    intent.latest_charge = this.store.id('ch');
    intent.last_payment_error = null;
    intent.next_action = null;
    const method = this.store.state.methods[intent.payment_method ?? ''];
    if (method && intent.setup_future_usage) method.customer = intent.customer;
    this.webhooks.emit('payment_intent.succeeded', intent);
  }

  fail(
    intent: FakeIntent,
    error: Omit<NonNullable<FakeIntent['last_payment_error']>, 'payment_method'>,
    method: FakeMethod | null,
  ): void {
    intent.status = 'requires_payment_method';
    intent.payment_method = null;
    intent.last_payment_error = { ...error, payment_method: method };
    this.webhooks.emit('payment_intent.payment_failed', intent);
  }

  /** The intent of a session is made when the buyer first tries to pay. */
  intentOf(session: FakeSession): FakeIntent {
    const intent = this.store.state.intents[session.payment_intent ?? ''];
    if (!intent) throw new Error(`Session ${session.id} has no intent.`);
    return intent;
  }

  #saveCard(session: FakeSession, method: FakeMethod, outcome: CardOutcome): Attempt {
    const setup = this.#setupOf(session);
    setup.payment_method = method.id;
    if (asksHolder(outcome)) {
      setup.status = 'requires_action';
      this.webhooks.emit('setup_intent.requires_action', setup);
      return 'authenticate';
    }
    if (outcome === 'declined' || outcome === 'insufficient') return this.#failSetup(setup, declines[outcome]);
    return this.#succeedSetup(session, setup);
  }

  #authenticateSetup(session: FakeSession, passed: boolean): Attempt {
    const setup = this.#setupOf(session);
    if (setup.status !== 'requires_action') return setup.status === 'succeeded' ? 'paid' : 'declined';
    return passed ? this.#succeedSetup(session, setup) : this.#failSetup(setup, declines.failedSetup);
  }

  #setupOf(session: FakeSession): FakeSetup {
    const setup = this.store.state.setups[session.setup_intent ?? ''];
    if (!setup) throw new Error(`Session ${session.id} has no setup intent.`);
    return setup;
  }

  #failSetup(setup: FakeSetup, error: NonNullable<FakeSetup['last_setup_error']>): Attempt {
    setup.status = 'requires_payment_method';
    setup.payment_method = null;
    setup.last_setup_error = { ...error };
    this.webhooks.emit('setup_intent.setup_failed', setup);
    return 'declined';
  }

  #succeedSetup(session: FakeSession, setup: FakeSetup): Attempt {
    const method = this.store.state.methods[setup.payment_method ?? ''];
    if (!method) throw new Error(`Setup ${setup.id} has no payment method.`);
    method.customer = session.customer;
    setup.status = 'succeeded';
    setup.last_setup_error = null;
    this.webhooks.emit('payment_method.attached', method);
    this.webhooks.emit('setup_intent.succeeded', setup);
    this.#complete(session, 'no_payment_required');
    return 'paid';
  }

  #complete(session: FakeSession, paymentStatus: FakeSession['payment_status']): void {
    session.status = 'complete';
    session.payment_status = paymentStatus;
    session.url = null;
    this.webhooks.emit('checkout.session.completed', session);
  }
}
