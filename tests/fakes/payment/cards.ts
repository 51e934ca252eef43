/** What each sample card does. The numbers are the ones that the hosted service publishes for trying things out. */
import type { FakeIntent, FakeMethod, Store } from './state.ts';

export type CardOutcome =
  | 'accepted'
  | 'declined'
  | 'insufficient'
  /** Confirmed once by its holder, it can be charged later without them. */
  | 'authentication'
  /** Asks its holder each time, so it cannot be charged without them. */
  | 'authentication_always'
  | 'accepted_then_declined';

/** The holder is asked while the hosted page is open. */
export const asksHolder = (outcome: CardOutcome): boolean =>
  outcome === 'authentication' || outcome === 'authentication_always';

export const sampleCards: { number: string; outcome: CardOutcome; says: string }[] = [
  { number: '4242 4242 4242 4242', outcome: 'accepted', says: 'Accepted' },
  { number: '5555 5555 5555 4444', outcome: 'accepted', says: 'Accepted, of another brand' },
  { number: '4000 0000 0000 0002', outcome: 'declined', says: 'Declined by the bank' },
  { number: '4000 0000 0000 9995', outcome: 'insufficient', says: 'Declined: not enough money' },
  { number: '4000 0025 0000 3155', outcome: 'authentication', says: 'Asks the holder to confirm' },
  {
    number: '4000 0027 6000 3184',
    outcome: 'authentication_always',
    says: 'Asks the holder each time; fails when charged later',
  },
  {
    number: '4000 0000 0000 0341',
    outcome: 'accepted_then_declined',
    says: 'Can be saved; declined when charged later',
  },
];

const digits = (number: string): string => number.replaceAll(/\D/g, '');

/** Undefined: not a card number that the fake knows. */
export const outcomeOf = (number: string): CardOutcome | undefined =>
  sampleCards.find((card) => digits(card.number) === digits(number))?.outcome;

export const declines = {
  declined: {
    type: 'card_error',
    code: 'card_declined',
    decline_code: 'generic_decline',
    message: 'Your card was declined.',
  },
  insufficient: {
    type: 'card_error',
    code: 'card_declined',
    decline_code: 'insufficient_funds',
    message: 'Your card has insufficient funds.',
  },
  authentication: {
    type: 'card_error',
    code: 'authentication_required',
    decline_code: 'authentication_required',
    message: 'Your card was declined. This transaction requires authentication.',
  },
  failedSetup: {
    type: 'card_error',
    code: 'setup_intent_authentication_failure',
    message: 'The latest attempt to set up the payment method has failed because authentication failed.',
  },
  failedAuthentication: {
    type: 'card_error',
    code: 'payment_intent_authentication_failure',
    message:
      'The provided payment method has failed authentication. You can provide payment_method_data or a new PaymentMethod to attempt to fulfill this PaymentIntent again.',
  },
} as const satisfies Record<string, Omit<NonNullable<FakeIntent['last_payment_error']>, 'payment_method'>>;

export function makeCard(store: Store, number: string, customer: string | null): FakeMethod {
  const method: FakeMethod = {
    id: store.id('pm'),
    object: 'payment_method',
    created: store.now(),
    livemode: false,
    metadata: {},
    type: 'card',
    customer,
    card: {
      brand: digits(number).startsWith('5') ? 'mastercard' : 'visa',
      last4: digits(number).slice(-4),
      exp_month: 12,
      exp_year: 2031,
      country: 'GB',
    },
  };
  store.state.methods[method.id] = method;
  store.state.cardNumbers[method.id] = digits(number);
  return method;
}

export function makeDebit(store: Store, customer: string | null): FakeMethod {
  const method: FakeMethod = {
    id: store.id('pm'),
    object: 'payment_method',
    created: store.now(),
    livemode: false,
    metadata: {},
    type: 'sepa_debit',
    customer,
    sepa_debit: { last4: '3000', country: 'DE' },
  };
  store.state.methods[method.id] = method;
  return method;
}
