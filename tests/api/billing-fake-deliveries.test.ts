/** How the payment fake delivers events: signed, in order or reversed, twice, late, never, again with growing pauses. */
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import Stripe from 'stripe';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { startPaymentFake, type PaymentFake } from '@tests/fakes/payment/server.ts';
import { calm } from '@tests/fakes/payment/state.ts';

const secret = 'whsec_tests';
const got: { name: string; at: number }[] = [];
let refuse = 0;
let receiver: Server;
let fake: PaymentFake;
let stripe: Stripe;
let impatient: Stripe;

beforeAll(async () => {
  receiver = createServer((request, response) => {
    const chunks: Buffer[] = [];
    request.on('data', (chunk: Buffer) => chunks.push(chunk));
    request.on('end', () => {
      const body = Buffer.concat(chunks).toString('utf8');
      // The SDK checks the signature as our endpoint does.
      const event = stripe.webhooks.constructEvent(body, String(request.headers['stripe-signature']), secret);
      got.push({ name: (event.data.object as { name: string }).name, at: Date.now() });
      response.writeHead(refuse > 0 ? 500 : 200).end();
      refuse = Math.max(0, refuse - 1);
    });
  });
  await new Promise<void>((resolve) => receiver.listen(0, '127.0.0.1', resolve));
  const { port } = receiver.address() as AddressInfo;
  fake = await startPaymentFake({ port: 0, webhookUrl: `http://127.0.0.1:${port}/`, webhookSecret: secret });
  const { hostname, port: fakePort } = new URL(fake.url);
  const settings = { host: hostname, port: fakePort, protocol: 'http' as const, telemetry: false };
  stripe = new Stripe('practice-key', { ...settings, maxNetworkRetries: 0 });
  impatient = new Stripe('practice-key', { ...settings, maxNetworkRetries: 0, timeout: 500 });
});
afterEach(() => {
  Object.assign(fake.store.state.switches, calm);
  got.length = 0;
});
afterAll(async () => {
  await fake.close();
  receiver.closeAllConnections();
  await new Promise((resolve) => receiver.close(resolve));
});

/** At one instant, however busy the machine is. */
const make = (...names: string[]): void => {
  for (const name of names) fake.webhooks.emit('customer.created', { id: `cus_${name}`, object: 'customer', name });
};
const quiet = () =>
  vi.waitFor(() => expect(fake.store.state.deliveries).toEqual([]), { timeout: 20_000, interval: 20 });
const names = () => got.map(({ name }) => name);

describe('deliveries', () => {
  it('come once, in order', async () => {
    make('a', 'b', 'c');
    await quiet();
    expect(names()).toEqual(['a', 'b', 'c']);
  });
  it('come twice when asked to', async () => {
    fake.store.state.switches.duplicate = 1;
    make('a');
    await quiet();
    expect(names()).toEqual(['a', 'a']);
  });
  it('come in the reverse order when asked to', async () => {
    fake.store.state.switches.reorder = true;
    make('a', 'b', 'c');
    await quiet();
    expect(names()).toEqual(['c', 'b', 'a']);
  });
  it('come late, or never, when asked to', async () => {
    const begun = Date.now();
    fake.store.state.switches.delayMs = 300;
    make('late');
    Object.assign(fake.store.state.switches, calm, { lose: 1 });
    make('lost');
    await quiet();
    expect(names()).toEqual(['late']);
    expect(got[0]!.at - begun).toBeGreaterThanOrEqual(300);
  });
  it('are tried again, each pause twice as long, until they are taken', async () => {
    refuse = 2;
    make('again');
    await quiet();
    expect(names()).toEqual(['again', 'again', 'again']);
    const [first, second, third] = got.map(({ at }) => at);
    // 400 ms doubled once, then twice: published as growing pauses; the lengths are the fake's own.
    expect(second! - first!).toBeGreaterThanOrEqual(800);
    expect(third! - second!).toBeGreaterThanOrEqual(1_600);
  });
});

describe('a call that keeps its caller waiting', () => {
  it('is done all the same, and the same key answers it later', async () => {
    fake.store.state.switches.stallNext = 1;
    const body = { name: 'slow' };
    await expect(impatient.customers.create(body, { idempotencyKey: 'slow' })).rejects.toBeInstanceOf(
      Stripe.errors.StripeConnectionError,
    );
    const { id } = await stripe.customers.create(body, { idempotencyKey: 'slow' });
    const made = Object.values(fake.store.state.customers).filter(({ name }) => name === 'slow');
    expect(made.map((each) => each.id)).toEqual([id]);
  });
});
