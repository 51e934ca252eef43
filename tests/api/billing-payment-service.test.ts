/**
 * Every call that our modules make to the payment service, driven through the SDK against the fake, with the parsed
 * result. The SDK's own types and parsing are the contract. A call in the source without a case here fails.
 */
import { readdirSync, readFileSync } from 'node:fs';
import path from 'node:path';
import { afterAll, afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import {
  chargeCard,
  fetchCharge,
  fetchSetup,
  findCharge,
  forgetCard,
  openCardPage,
} from '@/server/billing/payment-cards.ts';
import { fetchDispute, listDisputeIds } from '@/server/billing/payment-disputes.ts';
import { createCustomer, createRefund, fetchCheckout, openCheckout } from '@/server/billing/payment-service.ts';
import { nowText } from '@/server/clock.ts';
import { projectRoot } from '@/server/project-root.ts';
import { decideDispute, openDispute } from '@tests/fakes/payment/api-reversals.ts';
import { calm } from '@tests/fakes/payment/state.ts';
import { value } from '@tests/support/jobs.ts';
import { cards, payByCard, usePaymentFake } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);
afterEach(() => void Object.assign(payment.store.state.switches, calm));
// What is still being delivered needs the database.
afterAll(async () => {
  await vi.waitFor(() => expect(payment.store.state.deliveries).toEqual([]), { timeout: 10_000 });
});

const calledInSource = (): string[] => {
  const folder = path.join(projectRoot, 'src/server/billing');
  const source = readdirSync(folder)
    .filter((name) => name.startsWith('payment-'))
    .map((name) => readFileSync(path.join(folder, name), 'utf8'))
    .join('\n');
  return [...new Set([...source.matchAll(/\bstripe\.((?:\w+\.)+\w+)\(/g)].map(([, name]) => name ?? ''))].sort();
};

let customerId: string;
beforeEach(async () => {
  const made = await createCustomer({ teamId: 'team_1', name: 'Ä & Söhne', idempotencyKey: crypto.randomUUID() });
  customerId = value(made);
});
const checkout = async (idempotencyKey: string = crypto.randomUUID()) =>
  value(
    await openCheckout({
      topUpId: 'topup_1',
      teamId: 'team_1',
      customerId,
      description: '100 Burette credits',
      totalMinor: 11_400,
      currency: 'EUR',
      successUrl: 'http://burette.test/back',
      cancelUrl: 'http://burette.test/away',
      expiresAt: nowText(23 * 3600 * 1000),
      idempotencyKey,
    }),
  );
const paid = async (): Promise<string> => {
  const { sessionId, url } = await checkout();
  await payByCard(url, cards.accepted);
  return value(await fetchCheckout(sessionId)).payment!.id;
};
const saved = async (number: string) => {
  const { sessionId, url } = value(
    await openCardPage({
      setupId: 'setup_1',
      teamId: 'team_1',
      customerId,
      successUrl: 'http://burette.test/back',
      cancelUrl: 'http://burette.test/away',
      idempotencyKey: crypto.randomUUID(),
    }),
  );
  await payByCard(url, number);
  return value(await fetchSetup(sessionId));
};
const charge = (paymentMethodId: string, idempotencyKey: string = crypto.randomUUID()) =>
  chargeCard({
    topUpId: 'topup_2',
    teamId: 'team_1',
    customerId,
    paymentMethodId,
    description: '25 Burette credits',
    totalMinor: 3_000,
    currency: 'GBP',
    idempotencyKey,
  });

/** What each call of the SDK is proved by. */
const cases: Record<string, () => Promise<void>> = {
  'customers.create': async () => {
    expect(payment.store.state.customers[customerId]).toMatchObject({
      name: 'Ä & Söhne',
      metadata: { teamId: 'team_1' },
    });
  },
  'checkout.sessions.create': async () => {
    const first = await checkout('one');
    expect(await checkout('one')).toEqual(first);
    expect(payment.store.state.sessions[first.sessionId]).toMatchObject({ amount_total: 11_400, currency: 'eur' });
  },
  'checkout.sessions.retrieve': async () => {
    const { sessionId, url } = await checkout();
    expect(value(await fetchCheckout(sessionId))).toMatchObject({ status: 'open', paid: false });
    await payByCard(url, cards.declined);
    expect(value(await fetchCheckout(sessionId)).payment?.lastError).toBe('Your card was declined.');
    await payByCard(url, cards.accepted);
    expect(value(await fetchCheckout(sessionId))).toEqual({
      sessionId,
      status: 'complete',
      paid: true,
      totalMinor: 11_400,
      currency: 'eur',
      customerId,
      topUpId: 'topup_1',
      teamId: 'team_1',
      payment: {
        id: expect.stringMatching(/^pi_/),
        status: 'succeeded',
        receivedMinor: 11_400,
        currency: 'eur',
        customerId,
        topUpId: 'topup_1',
        lastError: null,
      },
    });
  },
  'refunds.create': async () => {
    const paymentIntentId = await paid();
    const refund = {
      returnId: 'return_1',
      paymentIntentId,
      totalMinor: 5_700,
      idempotencyKey: `refund:${paymentIntentId}`,
    };
    const first = value(await createRefund(refund));
    expect(first).toEqual({ refundId: expect.stringMatching(/^re_/), failed: false });
    expect(value(await createRefund(refund))).toEqual(first);
    await expect(createRefund({ ...refund, totalMinor: 5_701 })).rejects.toThrow(/same parameters/);
  },
  'paymentMethods.retrieve': async () => {
    expect(await saved('5555 5555 5555 4444')).toMatchObject({
      status: 'complete',
      customerId,
      setupId: 'setup_1',
      teamId: 'team_1',
      card: { customerId, brand: 'mastercard', lastFour: '4444', expiryMonth: 12, expiryYear: 2031 },
    });
    expect(await saved(cards.declined)).toMatchObject({ status: 'open', card: null });
  },
  'paymentIntents.create': async () => {
    const { card } = await saved(cards.accepted);
    const first = value(await charge(card!.paymentMethodId, 'charge-1'));
    expect(value(await charge(card!.paymentMethodId, 'charge-1'))).toEqual(first);
    const declined = await saved('4000 0000 0000 0341');
    const second = value(await charge(declined.card!.paymentMethodId));
    expect(second.paymentIntentId).toMatch(/^pi_/);
    expect(value(await charge('pm_of_nobody'))).toEqual({ paymentIntentId: null });
  },
  'paymentIntents.retrieve': async () => {
    const { card } = await saved(cards.accepted);
    const { paymentIntentId } = value(await charge(card!.paymentMethodId));
    expect(value(await fetchCharge(paymentIntentId!))).toEqual({
      id: paymentIntentId,
      status: 'succeeded',
      amountMinor: 3_000,
      receivedMinor: 3_000,
      currency: 'gbp',
      customerId,
      topUpId: 'topup_2',
      teamId: 'team_1',
      lastError: null,
      needsHolder: false,
    });
    const other = await saved('4000 0000 0000 0341');
    const failed = value(await charge(other.card!.paymentMethodId));
    expect(value(await fetchCharge(failed.paymentIntentId!))).toMatchObject({ status: 'failed', receivedMinor: 0 });
  },
  'paymentIntents.list': async () => {
    const { card } = await saved(cards.accepted);
    expect(value(await findCharge({ customerId, topUpId: 'topup_2' }))).toBe(null);
    const { paymentIntentId } = value(await charge(card!.paymentMethodId));
    expect(value(await findCharge({ customerId, topUpId: 'topup_2' }))).toMatchObject({ id: paymentIntentId });
  },
  'paymentMethods.detach': async () => {
    const { card } = await saved(cards.accepted);
    const { paymentMethodId } = card!;
    expect(value(await forgetCard({ paymentMethodId, idempotencyKey: 'forget-1' }))).toBe(true);
    expect(payment.store.state.methods[paymentMethodId]?.customer).toBe(null);
    // Forgotten already, under another key: the service objects, we do not.
    expect(value(await forgetCard({ paymentMethodId, idempotencyKey: 'forget-2' }))).toBe(true);
  },
  'disputes.retrieve': async () => {
    const paymentIntentId = await paid();
    const { id } = openDispute(payment.store, payment.webhooks, paymentIntentId);
    expect(value(await fetchDispute(id))).toEqual({
      id,
      state: 'open',
      totalMinor: 11_400,
      currency: 'eur',
      reason: 'general',
      paymentIntentId,
      topUpId: 'topup_1',
    });
    decideDispute(payment.store, payment.webhooks, id, 'lost');
    expect(value(await fetchDispute(id)).state).toBe('lost');
  },
  'disputes.list': async () => {
    const { id } = openDispute(payment.store, payment.webhooks, await paid());
    expect(value(await listDisputeIds(nowText(-60_000)))).toContain(id);
    expect(value(await listDisputeIds(nowText(60_000)))).toEqual([]);
  },
  // Signed events and their refusals: billing-webhooks.test.ts and billing-top-ups.test.ts.
  'webhooks.constructEvent': async () => undefined,
};

describe('our calls to the payment service', () => {
  it('all have a case', () => expect(calledInSource()).toEqual(Object.keys(cases).sort()));
  it.each(Object.entries(cases))('%s', (_, run) => run());

  it('answer an outage as a refusal: failures and lost answers', async () => {
    // More than the SDK's own second try takes: webhooks of the cases above may still be asking.
    payment.store.state.switches.failNext = 100;
    expect(await fetchCheckout('cs_any')).toMatchObject({ code: 'payment_service_unavailable' });
    Object.assign(payment.store.state.switches, calm, { hangNext: 100 });
    expect(await listDisputeIds(nowText())).toMatchObject({ code: 'payment_service_unavailable' });
  });
});
