/** Buying credits by card through the whole house: API, SDK, fake, signed webhooks, ledger, invoice, receipt. */
import Stripe from 'stripe';
import { afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { Invoice, PaymentEvent, TopUp } from '@db/models/billing.ts';
import { calm, type FakeSession } from '@tests/fakes/payment/state.ts';
import { bearerHeaders, makeTeam, type MadeTeam } from '@tests/factories/people.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { cards, payByCard, submit, usePaymentFake, webhookPath, webhookSecret } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { refreshTopUp } from '@/server/billing/refresh-top-up.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);

let mine: MadeTeam;
let other: MadeTeam;
let headers: Record<string, string>;
beforeAll(async () => {
  mine = await makeTeam();
  other = await makeTeam();
  headers = await bearerHeaders({ user: mine.people.finance, team: mine.team });
});
afterEach(() => {
  Object.assign(payment.store.state.switches, calm);
});

const api = (path: string) => `/api/v1/teams/${mine.team.slug}/${path}`;
const start = (body: unknown = { pack: '100', currency: 'EUR' }, more: Record<string, string> = {}) =>
  callEndpoint({ method: 'POST', path: api('top-ups'), headers: { ...headers, ...more }, body });
const started = async (): Promise<{ checkoutUrl: string; topUpId: string }> =>
  (await (await start()).json()) as { checkoutUrl: string; topUpId: string };
const read = async (topUpId: string): Promise<{ state: string; problem: string | null; invoiceId: string | null }> => {
  const answer = await callEndpoint({ path: api(`top-ups/${topUpId}`), headers });
  return ((await answer.json()) as { topUp: { state: string; problem: string | null; invoiceId: string | null } })
    .topUp;
};
const becomes = (topUpId: string, state: string) =>
  vi.waitFor(async () => expect((await read(topUpId)).state).toBe(state), { timeout: 10_000, interval: 20 });
const available = async () => (await readBalance(mine.team.id)).available;
const sessionOf = async (topUpId: string): Promise<FakeSession> => {
  const session = payment.store.state.sessions[(await TopUp.findByPk(topUpId))?.sessionId ?? ''];
  if (!session) throw new Error('The fake has no such session.');
  return session;
};
const quiet = () =>
  vi.waitFor(() => expect(payment.store.state.deliveries).toEqual([]), { timeout: 10_000, interval: 20 });

describe('a top-up by card', () => {
  it('issues credits and the first invoice once the accepted card is reported', async () => {
    const before = await available();
    const answer = await start();
    expect(answer.status).toBe(201);
    const { checkoutUrl, topUpId } = (await answer.json()) as { checkoutUrl: string; topUpId: string };
    expect(await read(topUpId)).toMatchObject({ state: 'pending', invoiceId: null });
    const page = await (await fetch(checkoutUrl)).text();
    expect(page).toContain('No money moves');
    const paid = await payByCard(checkoutUrl, cards.accepted);
    expect(paid).toMatchObject({
      status: 303,
      location: `http://burette.test/t/${mine.team.slug}/credits?topUp=${topUpId}`,
    });
    await becomes(topUpId, 'paid');
    expect((await available()) - before).toBe(100_000_000);
    const { invoiceId } = await read(topUpId);
    expect(await Invoice.findByPk(invoiceId ?? '')).toMatchObject({
      number: `BUR-${new Date().getUTCFullYear()}-00001`,
      netMinor: 9_500,
      taxMinor: 1_900,
      totalMinor: 11_400,
      currency: 'EUR',
    });
  });

  it('says that a card was declined, keeps the checkout open, and takes another card', async () => {
    const { checkoutUrl, topUpId } = await started();
    const declined = await payByCard(checkoutUrl, cards.declined);
    expect(declined.status).toBe(402);
    expect(declined.text).toContain('Your card was declined. Nothing was charged.');
    await vi.waitFor(async () => expect((await read(topUpId)).problem).toBe('Your card was declined.'), {
      timeout: 10_000,
    });
    expect((await read(topUpId)).state).toBe('pending');
    expect((await payByCard(checkoutUrl, cards.accepted)).status).toBe(303);
    await becomes(topUpId, 'paid');
    expect((await read(topUpId)).problem).toBe(null);
  });

  it('waits for authentication, which may fail and then pass', async () => {
    const { checkoutUrl, topUpId } = await started();
    const asked = await payByCard(checkoutUrl, cards.authentication);
    expect(asked.location).toMatch(/authenticate$/);
    expect((await submit(`${checkoutUrl}/authenticate`, { passed: '0' })).status).toBe(402);
    expect((await read(topUpId)).state).toBe('pending');
    await payByCard(checkoutUrl, cards.authentication);
    expect((await submit(`${checkoutUrl}/authenticate`, { passed: '1' })).status).toBe(303);
    await becomes(topUpId, 'paid');
  });

  it.each([
    ['1', 'paid'],
    ['0', 'failed'],
  ])('follows a bank debit that settles days later (%s → %s)', async (succeeds, state) => {
    const before = await available();
    const { checkoutUrl, topUpId } = await started();
    expect((await submit(checkoutUrl, { way: 'debit', succeeds })).status).toBe(303);
    await becomes(topUpId, 'processing');
    expect(await available()).toBe(before);
    payment.store.state.clockOffsetSeconds += 4 * 24 * 3600;
    payment.payments.passTime();
    await becomes(topUpId, state);
    expect((await available()) - before).toBe(state === 'paid' ? 100_000_000 : 0);
  });

  it('expires when it is abandoned', async () => {
    const { topUpId } = await started();
    payment.payments.expire(await sessionOf(topUpId));
    await becomes(topUpId, 'expired');
  });

  it('is healed by the reconciler when the webhooks are lost', async () => {
    const { checkoutUrl, topUpId } = await started();
    payment.store.state.switches.lose = 10;
    await payByCard(checkoutUrl, cards.accepted);
    await quiet();
    expect((await read(topUpId)).state).toBe('pending');
    await reconcileTopUps({ which: 'all' });
    expect((await read(topUpId)).state).toBe('paid');
  });

  it('issues once for duplicated and reordered webhooks, a webhook beside the reconciler, and repeated refreshes', async () => {
    const before = await available();
    const { checkoutUrl, topUpId } = await started();
    Object.assign(payment.store.state.switches, { duplicate: 2, reorder: true });
    await payByCard(checkoutUrl, cards.accepted);
    await Promise.all([refreshTopUp(topUpId), reconcileTopUps({ which: 'all' }), refreshTopUp(topUpId)]);
    await quiet();
    await becomes(topUpId, 'paid');
    expect((await available()) - before).toBe(100_000_000);
    expect(await Invoice.count({ where: { topUpId } })).toBe(1);
    expect(await verifyLedger()).toMatchObject({ ok: true });
  });
});

describe('a webhook', () => {
  const signer = new Stripe('tests');
  const event = (object: object, type = 'checkout.session.completed') =>
    JSON.stringify({ id: `evt_${Math.random()}`, object: 'event', type, data: { object } });
  const send = (payload: string, signature: string | null) =>
    callEndpoint({
      method: 'POST',
      path: webhookPath,
      body: payload,
      headers: { 'Content-Type': 'application/json', ...(signature === null ? {} : { 'Stripe-Signature': signature }) },
    });
  const sign = (payload: string, more: { secret?: string; timestamp?: number } = {}) =>
    signer.webhooks.generateTestHeaderString({ payload, secret: webhookSecret, ...more });

  // Source: the service's published signature scheme (HMAC-SHA256 over timestamp and body, five minutes' tolerance).
  it.each<[string, (payload: string) => [string, string | null]]>([
    ['signed with another secret', (payload) => [payload, sign(payload, { secret: 'whsec_other' })]],
    ['without a signature', (payload) => [payload, null]],
    ['with a signature that is none', (payload) => [payload, 't=1,v1=zz']],
    ['changed after signing', (payload) => [payload.replace('9500', '1'), sign(payload)]],
    ['truncated', (payload) => [payload.slice(0, -9), sign(payload)]],
    ['six minutes old', (payload) => [payload, sign(payload, { timestamp: Math.floor(Date.now() / 1000) - 360 })]],
    ['signed, but no JSON', () => ['{', sign('{')]],
    ['signed, but no event', () => ['{"data":{"object":{}}}', sign('{"data":{"object":{}}}')]],
    ['empty', () => ['', sign('')]],
  ])('%s is refused with 400 and leaves nothing', async (_, forge) => {
    const { topUpId } = await started();
    const count = await PaymentEvent.count();
    const [payload, signature] = forge(event({ ...(await sessionOf(topUpId)), amount_total: 9500 }));
    const answer = await send(payload, signature);
    expect(answer.status).toBe(400);
    expect(await answer.json()).toMatchObject({ code: 'bad_signature' });
    expect(await PaymentEvent.count()).toBe(count);
    expect((await read(topUpId)).state).toBe('pending');
  });

  it('that claims a payment which the service does not know issues nothing, however well signed', async () => {
    const before = await available();
    const { topUpId } = await started();
    const payload = event({ ...(await sessionOf(topUpId)), status: 'complete', payment_status: 'paid' });
    expect((await send(payload, sign(payload))).status).toBe(200);
    expect((await read(topUpId)).state).toBe('pending');
    expect(await available()).toBe(before);
  });

  it('replayed after it was handled changes nothing', async () => {
    const { checkoutUrl, topUpId } = await started();
    await payByCard(checkoutUrl, cards.accepted);
    await becomes(topUpId, 'paid');
    await quiet();
    const before = await available();
    const handled = payment.store.state.events.findLast(({ type }) => type === 'checkout.session.completed');
    payment.webhooks.redeliver(handled?.id ?? '');
    await quiet();
    expect(await available()).toBe(before);
    expect(await PaymentEvent.count({ where: { id: handled?.id ?? '' } })).toBe(1);
  });

  it('of an unknown type or about somebody else is acknowledged and recorded as ignored', async () => {
    const payload = event({ id: 'xx_1', object: 'thing' }, 'thing.invented');
    expect((await send(payload, sign(payload))).status).toBe(200);
    const { id } = JSON.parse(payload) as { id: string };
    expect(await PaymentEvent.findByPk(id)).toMatchObject({ state: 'ignored', type: 'thing.invented' });
  });

  it('that comes while the service cannot be asked is kept and handled later', async () => {
    const { checkoutUrl, topUpId } = await started();
    payment.store.state.switches.failNext = 50;
    await payByCard(checkoutUrl, cards.accepted);
    await quiet();
    expect((await read(topUpId)).state).toBe('pending');
    payment.store.state.switches.failNext = 0;
    await reconcileTopUps();
    expect((await read(topUpId)).state).toBe('paid');
  }, 60_000);
});

describe('a payment that is not the one we asked for', () => {
  it.each<[string, (session: FakeSession) => void]>([
    ['of another amount', (session) => void (session.amount_total = 1)],
    ['in another currency', (session) => void (session.currency = 'usd')],
    ['of another customer', (session) => void (session.customer = 'cus_other')],
    ['for another team', (session) => void (session.metadata = { ...session.metadata, teamId: other.team.id })],
    ['for another top-up', (session) => void (session.metadata = { ...session.metadata, topUpId: 'topup_other' })],
    [
      'received only in part',
      (session) => {
        const intent = payment.store.state.intents[session.payment_intent ?? ''];
        if (intent) intent.amount_received = 1;
      },
    ],
  ])('(%s) issues no credits and says so', async (_, change) => {
    const before = await available();
    const { checkoutUrl, topUpId } = await started();
    payment.store.state.switches.lose = 10;
    await payByCard(checkoutUrl, cards.accepted);
    change(await sessionOf(topUpId));
    expect(await refreshTopUp(topUpId)).toEqual({ ok: true, value: 'mismatch' });
    expect(await read(topUpId)).toMatchObject({
      state: 'pending',
      problem: expect.stringContaining('no credits were issued') as string,
    });
    expect(await available()).toBe(before);
  });

  it('(a paid session of another team, named in a signed event) issues nothing here', async () => {
    const theirs = await bearerHeaders({ user: other.people.owner, team: other.team });
    const answer = await callEndpoint({
      method: 'POST',
      path: `/api/v1/teams/${other.team.slug}/top-ups`,
      headers: theirs,
      body: { pack: '2000', currency: 'EUR' },
    });
    const { checkoutUrl, topUpId: theirTopUp } = (await answer.json()) as { checkoutUrl: string; topUpId: string };
    payment.store.state.switches.lose = 10;
    await payByCard(checkoutUrl, cards.accepted);
    const { topUpId } = await started();
    const before = await available();
    const session = await sessionOf(theirTopUp);
    const payload = JSON.stringify({
      id: 'evt_cross',
      object: 'event',
      type: 'payment_intent.succeeded',
      data: { object: { id: session.payment_intent, object: 'payment_intent', metadata: { topUpId } } },
    });
    const signature = new Stripe('tests').webhooks.generateTestHeaderString({ payload, secret: webhookSecret });
    const headersOfEvent = { 'Content-Type': 'application/json', 'Stripe-Signature': signature };
    expect(
      (await callEndpoint({ method: 'POST', path: webhookPath, body: payload, headers: headersOfEvent })).status,
    ).toBe(200);
    expect((await read(topUpId)).state).toBe('pending');
    expect(await available()).toBe(before);
    expect((await callEndpoint({ path: api(`top-ups/${theirTopUp}`), headers })).status).toBe(404);
  });
});

describe('starting a top-up', () => {
  it('opens one checkout for a double click with one key, and refuses the key for another pack', async () => {
    const key = { 'Idempotency-Key': 'double-click' };
    const answers = await Promise.all([start(undefined, key), start(undefined, key), start(undefined, key)]);
    const bodies = (await Promise.all(answers.map((answer) => answer.json()))) as { topUpId: string }[];
    expect(answers.map(({ status }) => status)).toEqual([201, 201, 201]);
    expect(new Set(bodies.map(({ topUpId }) => topUpId)).size).toBe(1);
    const sessions = Object.values(payment.store.state.sessions).filter(
      ({ metadata }) => metadata?.['topUpId'] === bodies[0]?.topUpId,
    );
    expect(sessions).toHaveLength(1);
    const reused = await start({ pack: '500', currency: 'EUR' }, key);
    expect(reused.status).toBe(409);
  });

  it('takes the pack as a number and the currency in any case', async () => {
    expect((await start({ pack: 25, currency: 'gbp' })).status).toBe(201);
  });

  it.each([
    [{ pack: '7', currency: 'EUR' }, 422, 'unknown_pack'],
    [{ pack: '100', currency: 'CHF' }, 422, 'invalid_input'],
    [{ pack: '100' }, 422, 'invalid_input'],
    [{ pack: 1e99, currency: 'EUR' }, 422, 'invalid_input'],
    [{ pack: '__proto__', currency: 'EUR' }, 422, 'unknown_pack'],
  ])('refuses %j', async (body, status, code) => {
    const answer = await start(body);
    expect(answer.status).toBe(status);
    expect(await answer.json()).toMatchObject({ code });
  });

  it('is for finance and owners only', async () => {
    for (const role of ['modeller', 'viewer'] as const) {
      const theirs = await bearerHeaders({ user: mine.people[role], team: mine.team });
      expect((await start(undefined, theirs)).status).toBe(403);
    }
  });

  it('says when the service is out and opens one checkout when the same request is repeated', async () => {
    const key = { 'Idempotency-Key': 'outage' };
    payment.store.state.switches.failNext = 2;
    const failed = await start(undefined, key);
    expect(failed.status).toBe(503);
    expect(await failed.json()).toMatchObject({ code: 'payment_service_unavailable' });
    payment.store.state.switches.failNext = 0;
    payment.store.state.switches.hangNext = 1;
    const answer = await start(undefined, key);
    expect(answer.status).toBe(201);
    const { topUpId } = (await answer.json()) as { topUpId: string };
    const sessions = Object.values(payment.store.state.sessions).filter(
      ({ metadata }) => metadata?.['topUpId'] === topUpId,
    );
    expect(sessions).toHaveLength(1);
  }, 60_000);
});
