/** Disputes through the whole house: fake, signed webhooks, ledger, credit notes, receivables, launching, letters. */
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { CreditReturn, Invoice, TopUp } from '@db/models/billing.ts';
import { Dispute, Receivable } from '@db/models/cards.ts';
import { OperatorAct } from '@db/models/finance.ts';
import type { DisputesAnswer, InvoiceTrail } from '@/contracts/billing.ts';
import { findUnheardDisputes, reconcileDisputes } from '@/server/billing/reconcile-disputes.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { refreshDispute } from '@/server/billing/refresh-dispute.ts';
import { readStanding } from '@/server/billing/read-standing.ts';
import { nowMs, setClock } from '@/server/clock.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { extendJob } from '@/server/jobs/extend-job.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { bearerHeaders, makeTeam, makeUser, signedInHeaders, type MadeTeam } from '@tests/factories/people.ts';
import { decideDispute, openDispute } from '@tests/fakes/payment/api-reversals.ts';
import { calm } from '@tests/fakes/payment/state.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { inProcessExecutor, makeBench, quote } from '@tests/support/jobs.ts';
import { mailsTo } from '@tests/support/mailbox.ts';
import { cards, payByCard, usePaymentFake } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);
const credit = 1_000_000;

let mine: MadeTeam;
let finance: Record<string, string>;
let operator: Record<string, string>;
let welcome: number;
beforeAll(async () => {
  setExecutor(inProcessExecutor());
  operator = await signedInHeaders(await makeUser({ operator: true }));
});
beforeEach(async () => {
  mine = await makeTeam();
  finance = await bearerHeaders({ user: mine.people.finance, team: mine.team });
  welcome = (await balance()).available;
});
afterEach(() => {
  Object.assign(payment.store.state.switches, calm);
  setClock(null);
});
// What is still being delivered needs the database.
afterAll(async () => {
  await vi.waitFor(() => expect(payment.store.state.deliveries).toEqual([]), { timeout: 10_000 });
});

const balance = () => readBalance(mine.team.id);
/** 100 credits by card: EUR 95 and 20 % tax, 114.00. Answers the invoice and the payment. */
async function bought(): Promise<{ invoice: Invoice; intent: string }> {
  const answer = await callEndpoint({
    method: 'POST',
    path: `/api/v1/teams/${mine.team.slug}/top-ups`,
    headers: finance,
    body: { pack: '100', currency: 'EUR' },
  });
  const { checkoutUrl, topUpId } = (await answer.json()) as { checkoutUrl: string; topUpId: string };
  await payByCard(checkoutUrl, cards.accepted);
  await reconcileTopUps({ which: 'all' });
  const invoice = await vi.waitFor(async () => (await Invoice.findOne({ where: { topUpId }, rejectOnEmpty: true }))!);
  return { invoice, intent: (await TopUp.findByPk(topUpId, { rejectOnEmpty: true })).paymentIntentId! };
}
const dispute = (intent: string, amount?: number) => openDispute(payment.store, payment.webhooks, intent, amount).id;
const decide = (id: string, how: 'won' | 'lost') => decideDispute(payment.store, payment.webhooks, id, how);
const becomes = (id: string, state: Dispute['state']) =>
  vi.waitFor(async () => expect((await Dispute.findByPk(id))?.state).toBe(state), { timeout: 10_000, interval: 20 });
const quiet = () =>
  vi.waitFor(() => expect(payment.store.state.deliveries).toEqual([]), { timeout: 10_000, interval: 20 });
const segment = (name: string) => ({
  teamId: mine.team.id,
  jobId: `${mine.team.id}-job-${name}`,
  segmentId: `${mine.team.id}-segment-${name}`,
});
const hold = (name: string, amountMicrocredits: number) =>
  holdCredits({ ...segment(name), amountMicrocredits, userId: null });
const charge = (name: string, chargeMicrocredits: number) =>
  settleCharge({
    ...segment(name),
    settlementId: `${mine.team.id}-${name}`,
    chargeMicrocredits,
    memo: { events: '1' },
  });
const release = (name: string) => releaseHold({ ...segment(name), releaseId: `${mine.team.id}-${name}` });
/** Grants are drawn first, so that what is spent beyond them comes from the purchase. */
async function spendOfPurchase(name: string, amount: number): Promise<void> {
  await hold(name, welcome + amount);
  await charge(name, welcome + amount);
}
const owed = () => Receivable.findOne({ where: { teamId: mine.team.id } });
const decision = (id: string, body: unknown, headers = operator) =>
  callEndpoint({ method: 'POST', path: `/api/v1/operate/receivables/${id}/decision`, headers, body });
const subjects = async () => (await mailsTo(mine.people.owner.email)).map(({ subject }) => subject);
const notes = (invoice: Invoice) => Invoice.findAll({ where: { correctsInvoiceId: invoice.id } });

describe('a dispute', () => {
  it('freezes what is unused, and thaws it when it is won', async () => {
    const { invoice, intent } = await bought();
    const id = dispute(intent);
    await becomes(id, 'open');
    expect(await balance()).toMatchObject({ available: welcome, frozen: 100 * credit });
    expect(await readStanding(mine.team.id)).toMatchObject({ disputed: [{ invoiceNumber: invoice.number }], owed: [] });
    decide(id, 'won');
    await becomes(id, 'won');
    expect(await balance()).toMatchObject({ available: welcome + 100 * credit, frozen: 0 });
    expect(await notes(invoice)).toEqual([]);
    expect(await owed()).toBe(null);
    expect(await subjects()).toEqual(
      expect.arrayContaining([expect.stringContaining('is disputed'), expect.stringContaining('stands')]),
    );
  });

  it('lost takes unused credits back with a credit note over them alone, and what was spent is owed', async () => {
    const { invoice, intent } = await bought();
    await spendOfPurchase('a', 40 * credit);
    const id = dispute(intent);
    await becomes(id, 'open');
    decide(id, 'lost');
    await becomes(id, 'lost');
    expect(await balance()).toMatchObject({ available: 0, frozen: 0, returned: 60 * credit });
    // By hand: 60 of 100 credits of EUR 95.00 are 57.00; 20 % tax 11.40; note 68.40; owed 114.00 − 68.40 = 45.60.
    expect(await notes(invoice)).toMatchObject([{ netMinor: 5_700, taxMinor: 1_140, totalMinor: 6_840 }]);
    expect(await CreditReturn.findOne({ where: { invoiceId: invoice.id } })).toMatchObject({
      cause: 'dispute',
      state: 'taken',
    });
    expect(await owed()).toMatchObject({ state: 'open', totalMinor: 4_560, currency: 'EUR' });
    const letter = (await mailsTo(mine.people.owner.email)).find(({ subject }) => subject.includes('took the payment'));
    expect(letter?.text).toContain('EUR 45.60');
    expect(letter?.text).toContain('No job can be launched');
    const answer = await callEndpoint({
      path: `/api/v1/teams/${mine.team.slug}/invoices/${invoice.id}/trail`,
      headers: finance,
    });
    const { trail } = (await answer.json()) as { trail: InvoiceTrail };
    expect(trail.timeline.map(({ words }) => words)).toEqual(
      expect.arrayContaining([
        'The bank disputes EUR 114.00; unused credits are frozen',
        'Dispute lost: the bank took EUR 114.00 back',
        'EUR 45.60 of it are owed for what was spent; launching is suspended',
      ]),
    );
    expect(await verifyLedger()).toMatchObject({ ok: true });
  });

  it('leaves what jobs hold alone and freezes their remainder on release, never other credits', async () => {
    const { intent } = await bought();
    await hold('b', welcome + 70 * credit);
    const id = dispute(intent);
    await becomes(id, 'open');
    expect(await balance()).toMatchObject({ available: 0, held: welcome + 70 * credit, frozen: 30 * credit });
    await bought();
    expect((await balance()).available).toBe(100 * credit);
    await charge('b', welcome + 20 * credit);
    await release('b');
    // 50 came back and are frozen; 20 were spent of the disputed purchase; the second purchase stays free.
    expect(await balance()).toMatchObject({ available: 100 * credit, held: 0, frozen: 80 * credit });
    await release('b');
    expect((await balance()).frozen).toBe(80 * credit);
    decide(id, 'won');
    await becomes(id, 'won');
    expect(await balance()).toMatchObject({ available: 180 * credit, frozen: 0 });
  });

  it('lost while a job runs takes its remainder too, with a second credit note, and less is owed', async () => {
    const { invoice, intent } = await bought();
    await hold('c', welcome + 70 * credit);
    const id = dispute(intent);
    await becomes(id, 'open');
    decide(id, 'lost');
    await becomes(id, 'lost');
    // 30 of 100 taken: 34.20 of 114.00; owed 79.80 until the job ends.
    expect(await owed()).toMatchObject({ state: 'open', totalMinor: 7_980 });
    await charge('c', welcome + 20 * credit);
    await release('c');
    expect(await balance()).toMatchObject({ available: 0, frozen: 0, returned: 80 * credit });
    // 20 of 100 spent: 22.80.
    expect(await owed()).toMatchObject({ state: 'open', totalMinor: 2_280 });
    expect((await notes(invoice)).map(({ totalMinor }) => totalMinor)).toEqual([3_420, 5_700]);
    expect(await verifyLedger()).toMatchObject({ ok: true });
  });

  it('lost while a job runs that gives everything back leaves nothing owed', async () => {
    const { intent } = await bought();
    await hold('d', welcome + 70 * credit);
    const id = dispute(intent);
    await becomes(id, 'open');
    decide(id, 'lost');
    await becomes(id, 'lost');
    await release('d');
    expect(await owed()).toMatchObject({ state: 'settled', totalMinor: 0 });
    // The welcome grant came back with the rest and is nobody's but the team's.
    expect(await balance()).toMatchObject({ available: welcome, returned: 100 * credit });
  });

  it('lost after a refund takes what is left and owes nothing twice', async () => {
    const { invoice, intent } = await bought();
    const refunded = await callEndpoint({
      method: 'POST',
      path: `/api/v1/operate/invoices/${invoice.id}/refunds`,
      headers: operator,
      body: { amountMicrocredits: 25 * credit, reason: 'Too many.' },
    });
    expect(refunded.status).toBe(201);
    await spendOfPurchase('e', 25 * credit);
    const id = dispute(intent);
    await becomes(id, 'open');
    // What is disputed is not refunded, by us or by the service.
    const again = await callEndpoint({
      method: 'POST',
      path: `/api/v1/operate/invoices/${invoice.id}/refunds`,
      headers: operator,
      body: { reason: 'And the rest.' },
    });
    expect(again.status).toBe(402);
    decide(id, 'lost');
    await becomes(id, 'lost');
    // By hand: 114.00 − 28.50 refunded = 85.50 disputed; 50 credits taken are 57.00; 25 spent are 28.50 owed.
    expect(await owed()).toMatchObject({ totalMinor: 2_850 });
    expect((await notes(invoice)).reduce((sum, { totalMinor }) => sum + totalMinor, 0)).toBe(2_850 + 5_700);
    expect((await balance()).returned).toBe(75 * credit);
  });

  it('over a part of a payment freezes what that part bought', async () => {
    const { intent } = await bought();
    const id = dispute(intent, 3_800);
    await becomes(id, 'open');
    expect((await balance()).frozen).toBe(33_333_334);
    decide(id, 'lost');
    await becomes(id, 'lost');
    expect(await owed()).toBe(null);
  });

  it.each(['won', 'lost'] as const)(
    'is decided once whatever is duplicated, reordered and repeated (%s)',
    async (how) => {
      const { invoice, intent } = await bought();
      await spendOfPurchase(`f-${how}`, 10 * credit);
      await quiet();
      Object.assign(payment.store.state.switches, { duplicate: 2, reorder: true });
      const id = dispute(intent);
      decide(id, how);
      await Promise.all([refreshDispute(id), refreshDispute(id), reconcileDisputes(), findUnheardDisputes()]);
      await quiet();
      await becomes(id, how);
      await refreshDispute(id);
      const after = await balance();
      expect(after).toMatchObject(
        how === 'won' ? { available: 90 * credit, frozen: 0 } : { available: 0, frozen: 0, returned: 90 * credit },
      );
      expect(await notes(invoice)).toHaveLength(how === 'won' ? 0 : 1);
      expect(await Receivable.count({ where: { teamId: mine.team.id } })).toBe(how === 'won' ? 0 : 1);
      expect((await subjects()).filter((subject) => subject.includes('is disputed'))).toHaveLength(1);
      expect(await verifyLedger()).toMatchObject({ ok: true });
    },
  );

  it('closed before its opening was heard of is opened and decided at once', async () => {
    const { intent } = await bought();
    await quiet();
    payment.store.state.switches.lose = 1;
    const id = dispute(intent);
    decide(id, 'lost');
    await becomes(id, 'lost');
    expect((await balance()).returned).toBe(100 * credit);
    expect(await owed()).toBe(null);
  });

  it('that no event told of is found by the reconciler, and its decision too', async () => {
    const { intent } = await bought();
    await quiet();
    payment.store.state.switches.lose = 100;
    const id = dispute(intent);
    expect(await findUnheardDisputes()).toBe(1);
    expect(await findUnheardDisputes()).toBe(0);
    decide(id, 'won');
    const later = nowMs() + 2 * 3600 * 1000;
    setClock(() => later);
    await reconcileDisputes();
    expect((await Dispute.findByPk(id))?.state).toBe('won');
  });

  it('of a payment whose success we have not heard of looks that up first', async () => {
    payment.store.state.switches.lose = 100;
    const answer = await callEndpoint({
      method: 'POST',
      path: `/api/v1/teams/${mine.team.slug}/top-ups`,
      headers: finance,
      body: { pack: '100', currency: 'EUR' },
    });
    const { checkoutUrl, topUpId } = (await answer.json()) as { checkoutUrl: string; topUpId: string };
    await payByCard(checkoutUrl, cards.accepted);
    const intent = Object.values(payment.store.state.intents).find(({ metadata }) => metadata['topUpId'] === topUpId)!;
    const id = dispute(intent.id);
    expect(await refreshDispute(id)).toEqual({ ok: true, value: 'open' });
    expect(await balance()).toMatchObject({ available: welcome, frozen: 100 * credit });
  });

  it('decided again otherwise stays as it is and is shown to the operator', async () => {
    const { intent } = await bought();
    const id = dispute(intent);
    await becomes(id, 'open');
    decide(id, 'lost');
    await becomes(id, 'lost');
    const after = await balance();
    decide(id, 'won');
    await vi.waitFor(async () => expect((await Dispute.findByPk(id))?.problem).toContain('says won'), {
      timeout: 10_000,
    });
    expect(await balance()).toEqual(after);
    const listed = await callEndpoint({ path: '/api/v1/operate/disputes', headers: operator });
    const { disputes } = (await listed.json()) as DisputesAnswer;
    expect(disputes.find((each) => each.id === id)).toMatchObject({ state: 'lost', team: { slug: mine.team.slug } });
  });

  it('of somebody else’s payment concerns nothing of ours', async () => {
    const { intent } = await bought();
    const stranger = { ...payment.store.state.intents[intent]!, id: 'pi_stranger', metadata: {} };
    payment.store.state.intents['pi_stranger'] = stranger;
    const id = dispute('pi_stranger');
    expect(await refreshDispute(id)).toEqual({ ok: true, value: 'concerns nothing of ours' });
    expect(await Dispute.findByPk(id)).toBe(null);
  });
});

describe('what is owed', () => {
  it.each(['settled', 'written_off'] as const)(
    'suspends launching until an operator says it is %s',
    async (outcome) => {
      const bench = await makeBench();
      mine = bench;
      const by = { actor: bench.actors.owner, team: bench.team.slug };
      finance = await bearerHeaders({ user: bench.people.finance, team: bench.team });
      const { invoice, intent } = await bought();
      await hold('g', (await balance()).available);
      await charge('g', (await balance()).held);
      const id = dispute(intent);
      await becomes(id, 'open');
      decide(id, 'lost');
      await becomes(id, 'lost');
      const { id: quoteId } = await quote(bench, { replicates: 100 });
      const refused = await launchJob({ ...by, quoteId, name: 'No' });
      expect(refused).toMatchObject({ ok: false, code: 'payment_owed' });
      expect(refused.ok ? '' : refused.detail).toContain(`invoice ${invoice.number}`);
      expect(await extendJob({ ...by, job: 'job_any', quoteId })).toMatchObject({ code: 'payment_owed' });

      const row = (await owed())!;
      expect((await decision(row.id, { outcome, reason: 'Paid.' }, finance)).status).toBe(404);
      expect((await decision(row.id, { outcome, reason: '' })).status).toBe(422);
      const twice = await Promise.all([
        decision(row.id, { outcome, reason: 'By transfer of today.' }),
        decision(row.id, { outcome, reason: 'By transfer of today.' }),
      ]);
      expect(twice.map(({ status }) => status)).toEqual([200, 200]);
      const other = outcome === 'settled' ? 'written_off' : 'settled';
      expect((await decision(row.id, { outcome: other, reason: 'No.' })).status).toBe(422);
      expect(await row.reload()).toMatchObject({ state: outcome, totalMinor: 11_400, reason: 'By transfer of today.' });
      expect(await OperatorAct.count({ where: { subjectId: row.id } })).toBe(1);
      // Nothing is owed, so the launch goes as far as the credits: none are left.
      expect(await launchJob({ ...by, quoteId, name: 'Yes' })).toMatchObject({ code: 'insufficient_credits' });
    },
  );
});
