import { describe, expect, it } from 'vitest';
import { decideTopUp, type FetchedCheckout } from './decide-top-up.ts';

const stored = {
  id: 'topup_1',
  teamId: 'team_1',
  customerId: 'cus_1',
  sessionId: 'cs_1',
  totalMinor: 9_500,
  currency: 'EUR',
};
const payment = {
  id: 'pi_1',
  status: 'succeeded' as const,
  receivedMinor: 9_500,
  currency: 'eur',
  customerId: 'cus_1',
  topUpId: 'topup_1',
  lastError: null,
};
const fetched: FetchedCheckout = {
  sessionId: 'cs_1',
  status: 'complete',
  paid: true,
  totalMinor: 9_500,
  currency: 'eur',
  customerId: 'cus_1',
  topUpId: 'topup_1',
  teamId: 'team_1',
  payment,
};

describe('decideTopUp', () => {
  it('is paid when everything agrees', () =>
    expect(decideTopUp(stored, fetched)).toEqual({ kind: 'paid', paymentIntentId: 'pi_1' }));

  it.each<[string, Partial<FetchedCheckout>]>([
    ['session', { sessionId: 'cs_2' }],
    ['top-up', { topUpId: 'topup_2' }],
    ['team', { teamId: 'team_2' }],
    ['customer', { customerId: 'cus_2' }],
    ['amount', { totalMinor: 9_499 }],
    ['currency', { currency: 'usd' }],
    ['top-up of the payment', { payment: { ...payment, topUpId: null } }],
    ['customer of the payment', { payment: { ...payment, customerId: 'cus_2' } }],
    ['currency of the payment', { payment: { ...payment, currency: 'usd' } }],
    ['amount of the payment', { payment: { ...payment, receivedMinor: 1 } }],
  ])('is a mismatch when the %s differs', (field, more) =>
    expect(decideTopUp(stored, { ...fetched, ...more })).toEqual({ kind: 'mismatch', fields: [field] }),
  );

  it.each<[string, Partial<FetchedCheckout>, string]>([
    [
      'an open checkout',
      { status: 'open', paid: false, payment: { ...payment, status: 'waiting', receivedMinor: 0 } },
      'pending',
    ],
    ['an expired one', { status: 'expired', paid: false, payment: null }, 'expired'],
    [
      'a debit on its way',
      { paid: false, payment: { ...payment, status: 'processing', receivedMinor: 0 } },
      'processing',
    ],
    ['a debit that came back', { paid: false, payment: { ...payment, status: 'waiting', receivedMinor: 0 } }, 'failed'],
    ['a paid checkout without its payment', { payment: null }, 'pending'],
    ['a succeeded payment of a checkout that is not said to be paid', { paid: false }, 'pending'],
  ])('does not issue credits for %s', (_, more, kind) =>
    expect(decideTopUp(stored, { ...fetched, ...more }).kind).toBe(kind),
  );
});
