/**
 * The payment fake as the SDK sees it: the SDK's own types and parsing are the contract. Every call that billing makes
 * or will make is driven through it, and the fake runs once as the process that `npm start` starts.
 */
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import Stripe from 'stripe';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { projectRoot } from '@/server/project-root.ts';
import { startPaymentFake, type PaymentFake } from '@tests/fakes/payment/server.ts';
import { calm } from '@tests/fakes/payment/state.ts';
import { cards, payByCard, submit } from '@tests/support/payment.ts';

let fake: PaymentFake;
let stripe: Stripe;
const sdkFor = (url: string) => {
  const { hostname, port } = new URL(url);
  return new Stripe('practice-key', { host: hostname, port, protocol: 'http', telemetry: false, maxNetworkRetries: 0 });
};
beforeAll(async () => {
  // Nobody listens to the webhooks here: they wait for their retries.
  fake = await startPaymentFake({ port: 0, webhookUrl: 'http://127.0.0.1:9/', webhookSecret: 'whsec_tests' });
  stripe = sdkFor(fake.url);
});
afterEach(() => void Object.assign(fake.store.state.switches, calm));
afterAll(() => fake.close());

const customer = () => stripe.customers.create({ name: 'Ä & Söhne', metadata: { teamId: 'team_1' } });
const checkout = (customerId: string) =>
  stripe.checkout.sessions.create({
    mode: 'payment',
    customer: customerId,
    metadata: { topUpId: 'topup_1' },
    payment_intent_data: { metadata: { topUpId: 'topup_1' }, setup_future_usage: 'off_session' },
    line_items: [
      { quantity: 2, price_data: { currency: 'eur', unit_amount: 9_500, product_data: { name: '100 credits' } } },
    ],
    success_url: 'http://burette.test/back?session={CHECKOUT_SESSION_ID}',
    cancel_url: 'http://burette.test/cancelled',
  });

describe('the payment fake', () => {
  it('keeps customers with their metadata, whatever their letters', async () => {
    const { id } = await customer();
    expect(await stripe.customers.retrieve(id)).toMatchObject({ name: 'Ä & Söhne', metadata: { teamId: 'team_1' } });
    await stripe.customers.update(id, { email: 'a@b.example', invoice_settings: { default_payment_method: 'pm_1' } });
    expect(await stripe.customers.retrieve(id)).toMatchObject({ email: 'a@b.example' });
  });

  it('takes a checkout from open to paid, with the intent expanded on request', async () => {
    const { id } = await customer();
    const session = await checkout(id);
    expect(session).toMatchObject({ status: 'open', payment_status: 'unpaid', amount_total: 19_000, currency: 'eur' });
    const paid = await payByCard(session.url ?? '', cards.accepted);
    expect(paid.location).toBe(`http://burette.test/back?session=${session.id}`);
    const fetched = await stripe.checkout.sessions.retrieve(session.id, { expand: ['payment_intent'] });
    expect(fetched).toMatchObject({
      status: 'complete',
      payment_status: 'paid',
      url: null,
      payment_intent: { status: 'succeeded', amount_received: 19_000, customer: id, metadata: { topUpId: 'topup_1' } },
    });
    expect((await submit(session.url ?? '', { way: 'card', card: cards.accepted })).text).toContain(
      'This has been paid',
    );
  });

  it('saves the card of a checkout and charges it later without its holder, or declines with the intent in the error', async () => {
    const { id } = await customer();
    await payByCard((await checkout(id)).url ?? '', cards.accepted);
    const [method] = (await stripe.customers.listPaymentMethods(id)).data;
    const off = { amount: 500, currency: 'eur', customer: id, off_session: true, confirm: true } as const;
    expect(await stripe.paymentIntents.create({ ...off, payment_method: method?.id ?? '' })).toMatchObject({
      status: 'succeeded',
    });

    const setup = await stripe.checkout.sessions.create({
      mode: 'setup',
      currency: 'eur',
      customer: id,
      success_url: 'http://burette.test/',
    });
    await payByCard(setup.url ?? '', '4000 0000 0000 0341');
    const saved = await stripe.checkout.sessions.retrieve(setup.id, { expand: ['setup_intent'] });
    const bad = typeof saved.setup_intent === 'object' ? saved.setup_intent?.payment_method : null;
    const failure = await stripe.paymentIntents
      .create({ ...off, payment_method: String(bad) })
      .catch((error: unknown) => error);
    expect(failure).toBeInstanceOf(Stripe.errors.StripeCardError);
    expect(failure).toMatchObject({ code: 'card_declined', payment_intent: { status: 'requires_payment_method' } });
    await stripe.paymentMethods.detach(method?.id ?? '');
    expect((await stripe.customers.listPaymentMethods(id)).data.map((each) => each.id)).not.toContain(method?.id);
  });

  it('refunds in parts and no more than was paid, and keeps the balance of what it holds', async () => {
    const { id } = await customer();
    const session = await checkout(id);
    await payByCard(session.url ?? '', cards.accepted);
    const intent = String((await stripe.checkout.sessions.retrieve(session.id)).payment_intent);
    const held = async () =>
      (await stripe.balance.retrieve()).available.find(({ currency }) => currency === 'eur')?.amount ?? 0;
    const before = await held();
    expect(await stripe.refunds.create({ payment_intent: intent, amount: 7_000 })).toMatchObject({
      status: 'succeeded',
    });
    await expect(stripe.refunds.create({ payment_intent: intent, amount: 12_001 })).rejects.toThrow(/greater than/);
    expect(await stripe.refunds.create({ payment_intent: intent })).toMatchObject({ amount: 12_000 });
    await expect(stripe.refunds.create({ payment_intent: intent })).rejects.toMatchObject({
      code: 'charge_already_refunded',
    });
    expect((await held()) - before).toBe(-19_000);
    expect((await stripe.refunds.list({ payment_intent: intent })).data).toHaveLength(2);
  });

  it('opens and decides disputes', async () => {
    const { id } = await customer();
    const session = await checkout(id);
    await payByCard(session.url ?? '', cards.accepted);
    const intent = String((await stripe.checkout.sessions.retrieve(session.id)).payment_intent);
    await submit(`${fake.url}/_fake/disputes`, { paymentIntent: intent });
    const [dispute] = (await stripe.disputes.list({ payment_intent: intent })).data;
    expect(dispute).toMatchObject({ status: 'needs_response', amount: 19_000 });
    await submit(`${fake.url}/_fake/disputes/decide`, { dispute: dispute?.id ?? '', status: 'won' });
    expect(await stripe.disputes.retrieve(dispute?.id ?? '')).toMatchObject({ status: 'won' });
  });

  it('answers the first result for a repeated key and refuses the key with another body', async () => {
    const first = await stripe.customers.create({ name: 'A' }, { idempotencyKey: 'key-1' });
    expect((await stripe.customers.create({ name: 'A' }, { idempotencyKey: 'key-1' })).id).toBe(first.id);
    await expect(stripe.customers.create({ name: 'B' }, { idempotencyKey: 'key-1' })).rejects.toBeInstanceOf(
      Stripe.errors.StripeIdempotencyError,
    );
  });

  it('fails as the service fails: unknown ids, missing parameters, no key, outages, lost answers', async () => {
    await expect(stripe.customers.retrieve('cus_none')).rejects.toMatchObject({
      statusCode: 404,
      code: 'resource_missing',
    });
    await expect(stripe.checkout.sessions.create({ mode: 'payment' })).rejects.toMatchObject({
      code: 'parameter_missing',
    });
    expect((await fetch(`${fake.url}/v1/balance`)).status).toBe(401);
    fake.store.state.switches.failNext = 1;
    await expect(customer()).rejects.toBeInstanceOf(Stripe.errors.StripeAPIError);
    // The SDK itself tries once more after a closed connection.
    fake.store.state.switches.hangNext = 2;
    await expect(customer()).rejects.toBeInstanceOf(Stripe.errors.StripeConnectionError);
  });

  it('lists its events, newest first, each retrievable', async () => {
    const { data } = await stripe.events.list({ limit: 3 });
    expect(data).toHaveLength(3);
    expect(await stripe.events.retrieve(data[0]?.id ?? '')).toMatchObject({ id: data[0]?.id, object: 'event' });
  });
});

describe('the payment fake as a process', () => {
  const start = (stateFile: string): Promise<{ child: ChildProcess; url: string }> =>
    new Promise((resolve, reject) => {
      const child = spawn(
        process.execPath,
        ['--import', 'tsx', path.join(projectRoot, 'tests/fakes/payment/main.ts')],
        {
          cwd: projectRoot,
          env: {
            ...process.env,
            PORT: '0',
            WEBHOOK_URL: 'http://127.0.0.1:9/',
            WEBHOOK_SECRET: 'whsec_tests',
            STATE_FILE: stateFile,
          },
          stdio: ['ignore', 'ignore', 'inherit', 'ipc'],
        },
      );
      child.once('message', (message) => resolve({ child, url: (message as { url: string }).url }));
      child.once('exit', (code) => reject(new Error(`The fake ended with ${code}.`)));
    });

  it('keeps what it knows over a kill, and ends when its parent lets go of it', async () => {
    const folder = await mkdtemp(path.join(tmpdir(), 'burette-fake-'));
    const stateFile = path.join(folder, 'payments.json');
    const first = await start(stateFile);
    const { id } = await sdkFor(first.url).customers.create({ name: 'Lasting' });
    const killed = new Promise((resolve) => first.child.once('exit', resolve));
    first.child.kill('SIGKILL');
    await killed;
    const second = await start(stateFile);
    expect(await sdkFor(second.url).customers.retrieve(id)).toMatchObject({ name: 'Lasting' });
    const ended = new Promise((resolve) => second.child.once('exit', resolve));
    second.child.disconnect();
    expect(await ended).toBe(0);
    await rm(folder, { recursive: true });
  }, 60_000);
});
