/** Saved cards and automatic top-ups through the whole house: API, SDK, fake, signed webhooks, ledger, letters. */
import { afterAll, afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { QueryTypes } from 'sequelize';
import { database } from '@db/connection.ts';
import { Invoice, TopUp } from '@db/models/billing.ts';
import { AutomaticTopUp, CardSetup, SavedCard } from '@db/models/cards.ts';
import type { AutomaticTopUpDocument, CardAnswer } from '@/contracts/billing.ts';
import { forgetCards } from '@/server/billing/discard-card.ts';
import { refreshCardSetup } from '@/server/billing/refresh-card-setup.ts';
import { reconcileCardSetups } from '@/server/billing/reconcile-card-setups.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { refreshTopUp } from '@/server/billing/refresh-top-up.ts';
import { runAutomaticTopUps } from '@/server/billing/run-automatic-top-ups.ts';
import { sendReceipts } from '@/server/billing/send-receipts.ts';
import { nowMs, setClock } from '@/server/clock.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { bearerHeaders, makeTeam, type MadeTeam } from '@tests/factories/people.ts';
import { calm } from '@tests/fakes/payment/state.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { mailsTo } from '@tests/support/mailbox.ts';
import { cards, payByCard, submit, usePaymentFake } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);
const credit = 1_000_000;

let mine: MadeTeam;
let headers: Record<string, string>;
beforeEach(async () => {
  mine = await makeTeam();
  headers = await bearerHeaders({ user: mine.people.finance, team: mine.team });
});
afterEach(() => {
  Object.assign(payment.store.state.switches, calm);
  setClock(null);
});
// What is still being delivered needs the database.
afterAll(async () => {
  await vi.waitFor(() => expect(payment.store.state.deliveries).toEqual([]), { timeout: 10_000 });
});

const api = (path: string) => `/api/v1/teams/${mine.team.slug}/${path}`;
const call = async <T>(
  method: 'GET' | 'POST' | 'PUT' | 'DELETE',
  path: string,
  body?: unknown,
  more = {},
): Promise<T> => {
  const answer = await callEndpoint({
    method,
    path: api(path),
    headers: { ...headers, ...more },
    ...(body ? { body } : {}),
  });
  return (await answer.json()) as T;
};
const readCard = () => call<CardAnswer>('GET', 'card');
const openPage = async () => (await call<{ pageUrl: string }>('POST', 'card', {})).pageUrl;
async function save(number: string): Promise<void> {
  const before = await SavedCard.count({ where: { teamId: mine.team.id } });
  const pageUrl = await openPage();
  const paid = await payByCard(pageUrl, number);
  if (paid.location.endsWith('/authenticate')) await submit(`${pageUrl}/authenticate`, { passed: '1' });
  await vi.waitFor(async () => expect(await SavedCard.count({ where: { teamId: mine.team.id } })).toBe(before + 1), {
    timeout: 10_000,
  });
}
const settings = {
  on: true,
  thresholdMicrocredits: 20 * credit,
  pack: '100',
  currency: 'EUR',
  // By hand: a pack is EUR 95 and 20 % tax, 114.00; three fit under 350.
  monthlyCeilingMinor: 35_000,
};
const set = (change: Partial<typeof settings> = {}) =>
  callEndpoint({ method: 'PUT', path: api('automatic-top-up'), headers, body: { ...settings, ...change } });
const read = async () =>
  (await call<{ automaticTopUp: AutomaticTopUpDocument }>('GET', 'automatic-top-up')).automaticTopUp;
const attempts = () => TopUp.findAll({ where: { teamId: mine.team.id, way: 'automatic' }, order: [['id', 'ASC']] });
const available = async () => (await readBalance(mine.team.id)).available;
const charges = () =>
  Object.values(payment.store.state.intents).filter(({ metadata }) => metadata['teamId'] === mine.team.id);

describe('a saved card', () => {
  it('is saved on the service’s page and shown by brand, last four digits and expiry, and nothing more is kept', async () => {
    const pageUrl = await openPage();
    expect(await readCard()).toMatchObject({ card: null, openPageUrl: pageUrl });
    const page = await (await fetch(pageUrl)).text();
    expect(page).toContain('No money moves');
    const done = await payByCard(pageUrl, cards.accepted);
    expect(done.location).toBe(`http://burette.test/t/${mine.team.slug}/billing/automatic-top-up?card=saved`);
    await vi.waitFor(async () => expect((await readCard()).card).not.toBe(null), { timeout: 10_000 });
    expect(await readCard()).toMatchObject({
      card: { brand: 'visa', lastFour: '4242', expiryMonth: 12, expiryYear: 2031, expired: false },
      openPageUrl: null,
    });
    // Every text of every table: the number is nowhere.
    const tables = await database().query<{ name: string }>(`SELECT name FROM sqlite_master WHERE type = 'table'`, {
      type: QueryTypes.SELECT,
    });
    const everything = await Promise.all(
      tables.map(({ name }) => database().query(`SELECT * FROM "${name}"`, { type: QueryTypes.SELECT })),
    );
    const text = JSON.stringify(everything);
    expect(text).toContain('4242');
    expect(text).not.toMatch(/4242[ -]?4242/);
  });

  it('that the bank wants confirmed is saved once it is, and not when it is not', async () => {
    const pageUrl = await openPage();
    expect((await payByCard(pageUrl, cards.authentication)).location).toMatch(/authenticate$/);
    const refused = await submit(`${pageUrl}/authenticate`, { passed: '0' });
    expect(refused.text).toContain('authentication failed');
    await reconcileCardSetups({ which: 'all' });
    expect((await readCard()).card).toBe(null);
    await payByCard(pageUrl, cards.authentication);
    await submit(`${pageUrl}/authenticate`, { passed: '1' });
    await vi.waitFor(async () => expect((await readCard()).card?.lastFour).toBe('3155'), { timeout: 10_000 });
  });

  it('is replaced by the next one, and the service forgets the first', async () => {
    await save(cards.accepted);
    await save('5555 5555 5555 4444');
    expect((await readCard()).card).toMatchObject({ brand: 'mastercard', lastFour: '4444' });
    await forgetCards();
    const old = await SavedCard.findOne({ where: { teamId: mine.team.id, lastFour: '4242' }, rejectOnEmpty: true });
    expect(old.forgottenAt).not.toBe(null);
    expect(payment.store.state.methods[old.paymentMethodId]?.customer).toBe(null);
  });

  it('of the visit begun later stands, whichever answer comes last', async () => {
    const first = await openPage();
    const second = await openPage();
    payment.store.state.switches.lose = 100;
    await payByCard(first, cards.accepted);
    await payByCard(second, '5555 5555 5555 4444');
    const setups = await CardSetup.findAll({ where: { teamId: mine.team.id }, order: [['id', 'DESC']] });
    payment.store.state.switches.lose = 0;
    for (const { id } of setups) expect(await refreshCardSetup(id)).toMatchObject({ value: 'saved' });
    expect((await readCard()).card?.lastFour).toBe('4444');
    expect(await SavedCard.count({ where: { teamId: mine.team.id, removedAt: null } })).toBe(1);
  });

  it('is found by the reconciler when the webhooks are lost', async () => {
    payment.store.state.switches.lose = 100;
    await payByCard(await openPage(), cards.accepted);
    expect((await readCard()).card).toBe(null);
    await reconcileCardSetups({ which: 'all' });
    expect((await readCard()).card?.lastFour).toBe('4242');
  });

  it('is removed, with automatic top-up, and the service is told again when its answer was lost', async () => {
    await save(cards.accepted);
    expect((await set()).status).toBe(200);
    const [card] = await SavedCard.findAll({ where: { teamId: mine.team.id } });
    expect(await call('DELETE', 'card')).toMatchObject({ card: null });
    expect(await call('DELETE', 'card')).toMatchObject({ card: null });
    expect((await read()).state).toBe('off');
    payment.store.state.switches.hangNext = 100;
    await forgetCards();
    payment.store.state.switches.hangNext = 0;
    expect((await card!.reload()).forgottenAt).toBe(null);
    await forgetCards();
    expect((await card!.reload()).forgottenAt).not.toBe(null);
    expect((await set()).status).toBe(409);
  });

  it('opens one page for a double click, and none for another team’s visit', async () => {
    const key = { 'Idempotency-Key': 'save-once' };
    const [one, two] = await Promise.all([call('POST', 'card', {}, key), call('POST', 'card', {}, key)]);
    expect(one).toEqual(two);
    expect(await CardSetup.count({ where: { teamId: mine.team.id } })).toBe(1);
    const setup = (await CardSetup.findOne({ where: { teamId: mine.team.id } }))!;
    const session = payment.store.state.sessions[setup.sessionId!]!;
    session.metadata = { ...session.metadata, teamId: 'team_of_somebody_else' };
    await payByCard(session.url!, cards.accepted);
    await reconcileCardSetups({ which: 'all' });
    expect((await readCard()).card).toBe(null);
  });
});

describe('automatic top-up', () => {
  it('charges the saved card once when little is left: credits, invoice and receipt as by hand', async () => {
    await save(cards.accepted);
    const before = await available();
    expect(before).toBeLessThan(20 * credit);
    await set();
    const begun = await Promise.all([runAutomaticTopUps(), runAutomaticTopUps(), runAutomaticTopUps()]);
    expect(begun.reduce((sum, one) => sum + one)).toBe(1);
    expect(await available()).toBe(before + 100 * credit);
    const [topUp] = await attempts();
    expect(topUp).toMatchObject({ state: 'paid', way: 'automatic', totalMinor: 11_400 });
    expect(charges()).toMatchObject([{ amount: 11_400, status: 'succeeded' }]);
    expect(await Invoice.findOne({ where: { topUpId: topUp!.id } })).toMatchObject({ totalMinor: 11_400 });
    await sendReceipts();
    const letters = await mailsTo(mine.people.owner.email);
    expect(letters.some(({ subject }) => subject.startsWith('Receipt BUR-'))).toBe(true);
    expect(await runAutomaticTopUps()).toBe(0);
    expect(await read()).toMatchObject({
      state: 'on',
      spentThisMonth: { amountMinor: 11_400 },
      attempts: [{ state: 'paid' }],
    });
    expect(await verifyLedger()).toMatchObject({ ok: true });
  });

  it.each([
    ['declined', '4000 0000 0000 0341', 'Your card was declined.', 'Save another card, or look at the settings'],
    ['in need of its holder', '4000 0027 6000 3184', 'requires authentication', 'confirm each payment'],
  ])(
    'is switched off by a card that is %s, says so by mail once, and a new card cures it',
    async (_, number, words, todo) => {
      const billingAddress = `accounts-${mine.team.slug}@payer.example`;
      await call('PUT', 'billing-details', { name: 'A Ltd', address: '1 Row', country: 'GB', email: billingAddress });
      await save(number);
      await set();
      await runAutomaticTopUps();
      const [failed] = await attempts();
      expect(failed).toMatchObject({ state: 'failed' });
      expect(failed!.problem).toContain(words);
      expect(await read()).toMatchObject({ state: 'stopped', problem: failed!.problem });
      for (const to of [mine.people.owner.email, billingAddress]) {
        const letters = (await mailsTo(to)).filter(({ subject }) => subject.includes('did not pass'));
        expect(letters).toHaveLength(1);
        expect(letters[0]!.text).toContain(todo);
        expect(letters[0]!.text).toContain(`ending ${number.slice(-4)}`);
      }
      expect(await runAutomaticTopUps()).toBe(0);

      await save(cards.accepted);
      expect((await read()).state).toBe('stopped');
      await set();
      // The failure is reported again: it must not switch off what was switched on since.
      await refreshTopUp(failed!.id);
      expect((await read()).state).toBe('on');
      await runAutomaticTopUps();
      expect((await attempts()).map(({ state }) => state)).toEqual(['failed', 'paid']);
    },
  );

  it('stops at the month’s ceiling and says so once, and begins again in the next month of the team’s time zone', async () => {
    await save(cards.accepted);
    await set({ thresholdMicrocredits: 1_000 * credit });
    while ((await runAutomaticTopUps()) > 0);
    expect((await attempts()).map(({ state }) => state)).toEqual(['paid', 'paid', 'paid']);
    await runAutomaticTopUps();
    expect(await read()).toMatchObject({ ceilingReached: true, spentThisMonth: { amountMinor: 34_200 } });
    const letters = async () =>
      (await mailsTo(mine.people.owner.email)).filter(({ subject }) => subject.includes('reached its ceiling'));
    expect(await letters()).toHaveLength(1);
    expect((await letters())[0]!.text).toContain('EUR');
    const nextMonth = nowMs() + 32 * 24 * 3600 * 1000;
    setClock(() => nextMonth);
    expect(await runAutomaticTopUps()).toBe(1);
    expect(await attempts()).toHaveLength(4);
    expect(await letters()).toHaveLength(1);
  });

  it('is one at a time, by the database too', async () => {
    await save(cards.accepted);
    await set();
    payment.store.state.switches.failNext = 100;
    expect(await runAutomaticTopUps()).toBe(1);
    expect(await runAutomaticTopUps()).toBe(0);
    const [open] = await attempts();
    expect(open!.state).toBe('pending');
    const { id: _id, ...rest } = open!.get({ plain: true });
    await expect(TopUp.create({ ...rest, id: 'topup_second', idempotencyKey: 'second' })).rejects.toThrow();
    payment.store.state.switches.failNext = 0;
    await reconcileTopUps({ which: 'all' });
    expect((await attempts()).map(({ state }) => state)).toEqual(['paid']);
  });

  it.each(['within the day', 'after the key is forgotten'])(
    'heals a charge whose answer was lost, %s',
    async (when) => {
      await save(cards.accepted);
      await set();
      Object.assign(payment.store.state.switches, { hangNext: 100, lose: 100 });
      await runAutomaticTopUps();
      payment.store.state.switches.hangNext = 0;
      expect((await attempts()).map(({ state }) => state)).toEqual(['pending']);
      expect(charges()).toHaveLength(1);
      if (when !== 'within the day') {
        payment.store.state.answers = {};
        const later = nowMs() + 25 * 3600 * 1000;
        setClock(() => later);
      }
      await reconcileTopUps({ which: 'all' });
      await reconcileTopUps({ which: 'all' });
      expect((await attempts()).map(({ state }) => state)).toEqual(['paid']);
      expect(charges()).toHaveLength(1);
    },
  );

  it('that never reached the service expires, and the next one begins', async () => {
    await save(cards.accepted);
    await set();
    payment.store.state.switches.failNext = 100;
    await runAutomaticTopUps();
    payment.store.state.switches.failNext = 0;
    const later = nowMs() + 25 * 3600 * 1000;
    setClock(() => later);
    await reconcileTopUps({ which: 'all' });
    expect((await attempts()).map(({ state }) => state)).toEqual(['expired']);
    expect(await runAutomaticTopUps()).toBe(1);
    expect(charges()).toHaveLength(1);
  });

  it('issues nothing for a payment of another amount, currency, customer, team or top-up', async () => {
    await save(cards.accepted);
    await set();
    Object.assign(payment.store.state.switches, { hangNext: 100, lose: 100 });
    await runAutomaticTopUps();
    payment.store.state.switches.hangNext = 0;
    const [charge] = charges();
    const before = await available();
    for (const change of [
      { amount_received: 11_399 },
      { currency: 'usd' },
      { customer: 'cus_other' },
      { metadata: { ...charge!.metadata, teamId: 'team_other' } },
      { metadata: { ...charge!.metadata, topUpId: 'topup_other' } },
    ]) {
      const kept = structuredClone(charge!);
      Object.assign(charge!, change);
      await reconcileTopUps({ which: 'all' });
      expect((await attempts()).map(({ state }) => state)).toEqual(['pending']);
      Object.assign(charge!, kept);
    }
    expect(await available()).toBe(before);
    await reconcileTopUps({ which: 'all' });
    expect(await available()).toBe(before + 100 * credit);
  });

  it('refuses settings that could never work', async () => {
    await save(cards.accepted);
    const low = await set({ monthlyCeilingMinor: 11_399 });
    expect(low.status).toBe(422);
    expect(await low.json()).toMatchObject({ errors: [{ path: 'monthlyCeilingMinor' }] });
    expect((await set({ pack: '7' })).status).toBe(422);
    expect((await set({ thresholdMicrocredits: 0 })).status).toBe(422);
    expect(await AutomaticTopUp.count({ where: { teamId: mine.team.id } })).toBe(0);
  });
});
