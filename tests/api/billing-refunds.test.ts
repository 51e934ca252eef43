/** Refunds of unused credits by lot, through API, SDK and fake: ledger, money, credit notes, letters. */
import { beforeAll, afterEach, describe, expect, it, vi } from 'vitest';
import { CreditReturn, Invoice, TopUp } from '@db/models/billing.ts';
import { composeFace } from '@/domain/billing/invoice-face.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { issueCreditNote } from '@/server/billing/issue-credit-note.ts';
import { issueInvoice } from '@/server/billing/issue-invoice.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { reconcileTopUps } from '@/server/billing/reconcile-top-ups.ts';
import { refundPurchase, type Refunded } from '@/server/billing/refund-purchase.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { sendOpenRefunds } from '@/server/billing/send-refund.ts';
import { sendReceipts } from '@/server/billing/send-receipts.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { issueBoughtCredits } from '@/server/ledger/issue-bought-credits.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { readOpenLots } from '@/server/ledger/read-open-lots.ts';
import { refundLot } from '@/server/ledger/refund-lot.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { calm } from '@tests/fakes/payment/state.ts';
import { bearerHeaders, makeTeam, makeUser, signedInHeaders, type MadeTeam } from '@tests/factories/people.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { mailsTo } from '@tests/support/mailbox.ts';
import { cards, payByCard, usePaymentFake } from '@tests/support/payment.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const payment = await usePaymentFake();
useTestDatabase(payment.env);
const system = { kind: 'system', reason: 'test' } as const;
const credit = 1_000_000;

let mine: MadeTeam;
let operator: Record<string, string>;
let finance: Record<string, string>;
beforeAll(async () => {
  mine = await makeTeam();
  operator = await signedInHeaders(await makeUser({ operator: true }));
  finance = await bearerHeaders({ user: mine.people.finance, team: mine.team });
});
afterEach(() => void Object.assign(payment.store.state.switches, calm));

/** 100 credits by card: EUR 95 and 20 % tax. Answers the invoice. */
async function bought(): Promise<Invoice> {
  const answer = await callEndpoint({
    method: 'POST',
    path: `/api/v1/teams/${mine.team.slug}/top-ups`,
    headers: finance,
    body: { pack: '100', currency: 'EUR' },
  });
  const { checkoutUrl, topUpId } = (await answer.json()) as { checkoutUrl: string; topUpId: string };
  await payByCard(checkoutUrl, cards.accepted);
  await reconcileTopUps({ which: 'all' });
  return vi.waitFor(async () => (await Invoice.findOne({ where: { topUpId }, rejectOnEmpty: true }))!);
}
const refund = (invoiceId: string, body: unknown, headers = operator) =>
  callEndpoint({ method: 'POST', path: `/api/v1/operate/invoices/${invoiceId}/refunds`, headers, body });
const topUpOf = (teamId: string) => ({
  teamId,
  userId: null,
  state: 'paid' as const,
  paidAt: '2026-12-01T00:00:00.000Z',
  pack: '1',
  priceBookId: 'pricebook_1',
  creditsMicrocredits: credit,
  currency: 'GBP',
  netMinor: 100,
  taxMinor: 20,
  totalMinor: 120,
  tax: { category: 'S' as const, rateHundredths: 2000, country: 'GB', note: null },
  buyer: { name: 'A', address: '', country: 'GB', vatNumber: null },
  createdAt: '2026-12-01T00:00:00.000Z',
  expiresAt: '2026-12-02T00:00:00.000Z',
});
const sentFor = async (invoice: Invoice): Promise<number> => {
  const intent = (await TopUp.findByPk(invoice.topUpId ?? ''))?.paymentIntentId;
  return Object.values(payment.store.state.refunds)
    .filter(({ payment_intent }) => payment_intent === intent)
    .reduce((sum, { amount }) => sum + amount, 0);
};
async function spend(name: string, amount: number): Promise<void> {
  const segment = { teamId: mine.team.id, jobId: `job-${name}`, segmentId: `segment-${name}` };
  await holdCredits({ ...segment, amountMicrocredits: amount, userId: null });
  await settleCharge({ ...segment, settlementId: name, chargeMicrocredits: amount, memo: { events: '1' } });
}

describe('a refund', () => {
  it('takes unused credits back, sends their money once, and issues a credit note in a series of its own', async () => {
    const invoice = await bought();
    const first = await refund(invoice.id, { amountMicrocredits: 33_333_333, reason: 'Bought too many.' });
    expect(first.status).toBe(201);
    const { creditNoteId, total } = (await first.json()) as Refunded;
    // By hand: floor(9500 × 0.33333333) = 3166, tax 633.2 → 633.
    expect(total).toEqual({ amountMinor: 3_799, currency: 'EUR' });
    expect(await sentFor(invoice)).toBe(3_799);
    expect((await readBalance(mine.team.id)).available).toBe(66_666_667);
    const note = await Invoice.findByPk(creditNoteId, { rejectOnEmpty: true });
    expect(note).toMatchObject({
      kind: 'credit_note',
      number: `BCN-${new Date().getUTCFullYear()}-00001`,
      correctsInvoiceId: invoice.id,
      netMinor: 3_166,
      taxMinor: 633,
    });
    const ubl = await callEndpoint({
      path: `/api/v1/teams/${mine.team.slug}/invoices/${creditNoteId}/ubl`,
      headers: finance,
    });
    const xml = await ubl.text();
    expect(xml).toContain('<CreditNote ');
    expect(xml).toContain(`<cbc:ID>${invoice.number}</cbc:ID>`);
    const listed = await callEndpoint({ path: `/api/v1/teams/${mine.team.slug}/invoices`, headers: finance });
    expect(((await listed.json()) as { invoices: unknown[] }).invoices[0]).toMatchObject({
      number: note.number,
      credits: 33.333333,
    });
    // The rest gives back the rest, to the minor unit.
    await refund(invoice.id, { reason: 'And the rest.' });
    expect(await sentFor(invoice)).toBe(11_400);
    const rows = await CreditReturn.findAll({ where: { invoiceId: invoice.id } });
    expect(rows.map(({ state }) => state)).toEqual(['sent', 'sent']);
    const again = await refund(invoice.id, { reason: 'Once more.' });
    expect(again.status).toBe(402);
    expect(await verifyLedger()).toMatchObject({ ok: true });
  });

  it('writes to owner or billing address with the credit note as PDF', async () => {
    await sendReceipts();
    const letter = (await mailsTo(mine.people.owner.email)).find(({ subject }) => subject.startsWith('Credit note'));
    expect(letter?.text).toContain('33.333333 credits');
    expect(letter?.html).toContain('See the credit note');
    expect(JSON.stringify(letter)).toContain('BCN-');
  });

  it('does one refund for a double click with one key, and refuses the key with another body', async () => {
    const invoice = await bought();
    const headers = { ...operator, 'Idempotency-Key': 'refund-twice' };
    const body = { amountMicrocredits: 10 * credit, reason: 'Twice.' };
    const [one, two] = await Promise.all([refund(invoice.id, body, headers), refund(invoice.id, body, headers)]);
    expect(await one.json()).toEqual(await two.json());
    expect(await sentFor(invoice)).toBe(1_140);
    expect((await refund(invoice.id, { ...body, reason: 'Other.' }, headers)).status).toBe(409);
  });

  it('is sent later when the service is away or its answer is lost, and then once', async () => {
    const invoice = await bought();
    // The SDK itself tries once more, so two failures make one outage.
    payment.store.state.switches.failNext = 2;
    await refund(invoice.id, { amountMicrocredits: 10 * credit, reason: 'Away.' });
    expect(await sentFor(invoice)).toBe(0);
    payment.store.state.switches.hangNext = 3;
    await sendOpenRefunds();
    payment.store.state.switches.hangNext = 0;
    await sendOpenRefunds();
    await sendOpenRefunds();
    expect(await sentFor(invoice)).toBe(1_140);
    expect(await CreditReturn.count({ where: { invoiceId: invoice.id, state: 'sent' } })).toBe(1);
  });

  it('never returns what is spent or held, and no more than the lot has', async () => {
    const invoice = await bought();
    const { available } = await readBalance(mine.team.id);
    await spend('most', available - 30 * credit);
    const held = { teamId: mine.team.id, jobId: 'job-held', segmentId: 'segment-held' };
    await holdCredits({ ...held, amountMicrocredits: 20 * credit, userId: null });
    expect((await refund(invoice.id, { amountMicrocredits: 10 * credit + 1, reason: 'Too many.' })).status).toBe(402);
    const all = (await (await refund(invoice.id, { reason: 'All that is free.' })).json()) as Refunded;
    expect(all.amountMicrocredits).toBe(10 * credit);
  });

  it('of a transfer is paid back by hand, and is for operators only', async () => {
    const other = await makeTeam();
    const by = { actor: other.actors.owner, team: other.team.slug };
    await setBillingDetails({
      ...by,
      billingDetails: { name: 'B Ltd', address: '1 Row', country: 'GB', vatNumber: null, email: null },
    });
    const asked = await requestProForma({ ...by, pack: '25', currency: 'GBP', purchaseOrder: 'PO', termsDays: 30 });
    if (!asked.ok) throw new Error(asked.detail);
    const paid = await markTransferReceived({ actor: system, proFormaId: asked.value.proForma.id });
    if (!paid.ok) throw new Error(paid.detail);
    expect((await refund(paid.value.invoiceId, { reason: 'Mine.' }, finance)).status).toBe(404);
    expect(await refundPurchase({ ...by, invoiceId: paid.value.invoiceId, reason: 'Mine.' })).toMatchObject({
      code: 'not_found',
    });
    expect(await refundPurchase({ actor: system, invoiceId: paid.value.invoiceId, reason: 'Closed.' })).toMatchObject({
      ok: true,
    });
    expect(await CreditReturn.findOne({ where: { invoiceId: paid.value.invoiceId } })).toMatchObject({
      state: 'by_transfer',
    });
  });
});

describe('number series', () => {
  it('have no gap and no duplicate when 100 invoices and 100 credit notes are issued at once, some of them undone', async () => {
    const { team } = await makeTeam();
    const party = { name: 'A', address: '', country: 'GB', vatNumber: null };
    const tax = { category: 'S' as const, rateHundredths: 2000, country: 'GB', note: null };
    const face = composeFace({
      seller: party,
      buyer: party,
      credits: 1,
      creditsMicrocredits: credit,
      netMinor: 100,
      currency: 'GBP',
      tax,
    });
    const issue = (place: number) =>
      inWriteTransaction(async () => {
        const purchaseId = `bulk-${place}`;
        await TopUp.create({
          ...topUpOf(team.id),
          id: purchaseId,
          idempotencyKey: purchaseId,
          paymentIntentId: purchaseId,
        });
        await issueBoughtCredits({
          teamId: team.id,
          creditsMicrocredits: credit,
          netMinor: 100,
          currency: 'GBP',
          purchaseId,
        });
        const invoice = await issueInvoice({
          teamId: team.id,
          face,
          paidAt: '2026-12-01T00:00:00.000Z',
          topUpId: purchaseId,
        });
        const lot = (await readOpenLots(team.id)).find((each) => each.purchaseId === purchaseId)!;
        const returnId = `return-${place}`;
        await refundLot({ teamId: team.id, lotId: lot.id, amountMicrocredits: credit, refundId: returnId });
        await issueCreditNote({
          returnId,
          cause: 'refund',
          invoice,
          lot,
          amountMicrocredits: credit,
          reason: 'Bulk.',
          userId: null,
        });
        if (place % 10 === 9) throw new Error('undone');
      });
    const done = await Promise.allSettled(Array.from({ length: 111 }, (_, place) => issue(place)));
    const reasons = done.flatMap((each) =>
      each.status === 'rejected' ? [String((each.reason as { original?: unknown }).original ?? each.reason)] : [],
    );
    expect(reasons).toEqual(Array.from({ length: 11 }, () => 'Error: undone'));
    for (const series of ['BUR', 'BCN']) {
      const rows = await Invoice.findAll({ where: { series }, attributes: ['numberInYear'] });
      const numbers = rows.map(({ numberInYear }) => numberInYear).sort((a, b) => a - b);
      expect(numbers).toEqual(numbers.map((_, place) => place + 1));
      expect(numbers.length).toBeGreaterThanOrEqual(100);
    }
    expect(await CreditReturn.count({ where: { teamId: team.id } })).toBe(100);
  }, 60_000);
});
