/** Our own books against plain SQL, the price book that cannot start in the past, and the record of operators' acts. */
import { QueryTypes } from 'sequelize';
import { beforeAll, describe, expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { PriceBookRow } from '@db/models/ledger.ts';
import { OperatorAct } from '@db/models/finance.ts';
import { Mail } from '@db/models/teams.ts';
import type { Actor } from '@/domain/teams/actor.ts';
import { setClock } from '@/server/clock.ts';
import { listInvoiceMessages } from '@/server/billing/list-invoice-messages.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { presentPriceBook } from '@/server/billing/present-price-book.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { reviewInvoice } from '@/server/billing/review-invoice.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { readOpenLots } from '@/server/ledger/read-open-lots.ts';
import { refundLot } from '@/server/ledger/refund-lot.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { addPriceBook } from '@/server/operate/add-price-book.ts';
import { answerInvoice } from '@/server/operate/answer-invoice.ts';
import { grantGoodwill } from '@/server/operate/grant-goodwill.ts';
import { listOpenTransfers } from '@/server/operate/list-open-transfers.ts';
import { listOperatorActs } from '@/server/operate/list-operator-acts.ts';
import { listQuestionedInvoices } from '@/server/operate/list-questioned-invoices.ts';
import { readBooks } from '@/server/operate/read-books.ts';
import { actorOf, makeTeam, makeUser, type MadeTeam } from '@tests/factories/people.ts';
import { value } from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let operator: Actor;
let german: MadeTeam;
let british: MadeTeam;

async function buy(made: MadeTeam, currency: 'EUR' | 'GBP'): Promise<string> {
  const by = { actor: made.actors.finance, team: made.team.slug };
  const { proForma } = value(
    await requestProForma({ ...by, pack: '25', currency, purchaseOrder: 'PO 1', termsDays: 30 }),
  );
  return value(await markTransferReceived({ actor: operator, proFormaId: proForma.id })).invoiceId;
}

beforeAll(async () => {
  operator = actorOf(await makeUser({ operator: true, name: 'Olive' }));
  [german, british] = [await makeTeam(), await makeTeam()];
  for (const [made, country] of [
    [german, 'DE'],
    [british, 'GB'],
  ] as const) {
    const billingDetails = { name: 'A', address: '1 Row', country, vatNumber: null, email: null };
    value(await setBillingDetails({ actor: made.actors.finance, team: made.team.slug, billingDetails }));
  }
  let at = Date.parse('2027-01-20T00:00:00Z');
  setClock(() => at);
  await buy(german, 'EUR');
  await buy(british, 'GBP');
  const of = (made: MadeTeam) => ({ teamId: made.team.id, jobId: made.team.id, segmentId: made.team.id });
  for (const made of [german, british])
    value(await holdCredits({ ...of(made), amountMicrocredits: 25_000_000, userId: null }));
  for (let act = 0; act < 30; act += 1) {
    at += 4 * 86_400_000;
    const made = act % 3 === 0 ? british : german;
    await settleCharge({
      ...of(made),
      settlementId: String(act),
      chargeMicrocredits: 333_333 + act,
      memo: { events: '1' },
    });
    // What is given back is not earned.
    if (act === 10) {
      await releaseHold({ ...of(german), releaseId: 'refund', amountMicrocredits: 2_000_000 });
      const [lot] = (await readOpenLots(german.team.id)).filter(({ source }) => source === 'bought');
      const refund = { teamId: german.team.id, lotId: lot!.id, amountMicrocredits: 2_000_000, refundId: 'refund' };
      value(await refundLot(refund));
    }
  }
  setClock(null);
}, 60_000);

const select = <T extends object>(sql: string) => database().query<T>(sql, { type: QueryTypes.SELECT });

describe('our books', () => {
  it('owe what the lots still hold and have not earned what is left of their money', async () => {
    const { owed, months } = value(await readBooks({ actor: operator })).books;
    const [left] = await select<{ amount: number }>(
      `SELECT -sum(item.value ->> 'amountMicrocredits') AS amount FROM ledgerTransactions, json_each(postings) AS item
       WHERE item.value ->> 'account' IN ('bought', 'spent', 'returned') AND kind <> 'grant'`,
    );
    expect(owed.boughtMicrocredits).toBe(left!.amount);
    for (const currency of ['EUR', 'GBP']) {
      const [lot] = await select<{ net: number; credits: number; drawn: number }>(
        `SELECT netMinor AS net, creditsMicrocredits AS credits,
           (SELECT sum(item.value ->> 'amountMicrocredits') FROM ledgerTransactions, json_each(draws) AS item
            WHERE item.value ->> 'lotId' = lots.id AND kind = 'settlement') AS drawn FROM lots WHERE currency = '${currency}'`,
      );
      const earned = months
        .flatMap((month) => month.earned)
        .filter((money) => money.currency === currency)
        .reduce((sum, { amountMinor }) => sum + amountMinor, 0);
      expect(earned).toBe(Number((BigInt(lot!.net) * BigInt(lot!.drawn)) / BigInt(lot!.credits)));
      expect(owed.unearned).toContainEqual({ currency, amountMinor: lot!.net - earned });
      expect(earned).toBeGreaterThan(0);
    }
    expect(months.filter(({ earned }) => earned.length > 0).length).toBeGreaterThan(3);
  });

  it('list tax by country as the invoices have it', async () => {
    const { taxes } = value(await readBooks({ actor: operator })).books;
    const invoices = await select<{ country: string; tax: number; net: number }>(
      `SELECT buyer ->> 'country' AS country, sum(taxMinor) AS tax, sum(netMinor) AS net FROM invoices GROUP BY 1 ORDER BY 1`,
    );
    expect(invoices.map(({ country }) => country)).toEqual(['DE', 'GB']);
    for (const { country, tax, net } of invoices) {
      const rows = taxes.filter((row) => row.country === country);
      expect(rows.reduce((sum, row) => sum + row.tax.amountMinor, 0)).toBe(tax);
      expect(rows.reduce((sum, row) => sum + row.base.amountMinor, 0)).toBe(net);
    }
  });

  it('are for operators alone', async () => {
    expect(await readBooks({ actor: german.actors.owner })).toMatchObject({ ok: false, code: 'not_found' });
    expect(await readBooks({ actor: { kind: 'anonymous' } })).toMatchObject({ ok: false, code: 'not_signed_in' });
  });
});

describe('the price book', () => {
  const next = async (startsAt: string) => {
    const { microcreditsPerMillionEvents } = await presentPriceBook();
    const packs = [{ credits: 25, netMinor: { EUR: 2_600, GBP: 2_300, USD: 2_800 } }];
    return addPriceBook({ actor: operator, startsAt, microcreditsPerMillionEvents, packs });
  };

  it('refuses a version that starts in the past or before the newest one, and takes one of the future', async () => {
    expect(await next('2020-01-01T00:00:00Z')).toMatchObject({ ok: false, code: 'invalid_input' });
    const { priceBook } = value(await next('2199-01-01T00:00:00Z'));
    expect(priceBook).toMatchObject({ version: 2, startsAt: '2199-01-01T00:00:00.000Z' });
    expect(await next('2198-01-01T00:00:00Z')).toMatchObject({ ok: false, code: 'invalid_input' });
    expect((await presentPriceBook()).version).toBe(1);
    expect((await presentPriceBook('2199-01-01T00:00:00.000Z')).version).toBe(2);
    expect(await PriceBookRow.count()).toBe(2);
  });

  it('cannot be given a past by hand either', async () => {
    const columns = 'version + 1, startsAt, microcreditsPerMillionEvents, packs, createdAt';
    const insert = `INSERT INTO priceBooks SELECT 'x', ${columns} FROM priceBooks WHERE version = 2`;
    const broken = insert.replace(', createdAt FROM', `, '2199-01-01T00:00:00.000Z' FROM`);
    await expect(database().query(broken)).rejects.toMatchObject({
      parent: { message: expect.stringMatching(/starts after it was made/) as string },
    });
  });
});

describe('operators', () => {
  it('give goodwill with a reason, answer questions by mail, see open transfers; each act is on record with them', async () => {
    const before = (await readBalance(british.team.id)).available;
    const { slug } = british.team;
    value(await grantGoodwill({ actor: operator, team: slug, microcredits: 1_500_000, reason: 'Slow queue in May' }));
    expect((await readBalance(british.team.id)).available).toBe(before + 1_500_000);
    expect(await grantGoodwill({ actor: operator, team: 'nobody', microcredits: 1, reason: 'x' })).toMatchObject({
      code: 'invalid_input',
    });

    const finance = { actor: british.actors.finance, team: slug };
    const invoiceId = await buy(british, 'GBP');
    value(await reviewInvoice({ ...finance, invoiceId, state: 'questioned', comment: 'Why twice?' }));
    const listed = value(await listQuestionedInvoices({ actor: operator })).invoices;
    expect(listed.map(({ id, team }) => [id, team.slug])).toEqual([[invoiceId, slug]]);
    value(await answerInvoice({ actor: operator, invoiceId, body: 'You ordered twice.' }));
    const { messages } = value(await listInvoiceMessages({ ...finance, invoiceId }));
    expect(messages.map(({ side, person, body }) => [side, person, body])).toEqual([
      ['team', british.people.finance.name, 'Why twice?'],
      ['operator', 'Burette', 'You ordered twice.'],
    ]);
    const mails = await Mail.findAll({ where: { recipient: british.people.finance.email } });
    expect(mails.map(({ subject }) => subject)).toContainEqual(
      expect.stringMatching(/^Answer about your invoice BUR-/),
    );
    value(await reviewInvoice({ ...finance, invoiceId, state: 'approved', comment: '' }));
    expect(value(await listQuestionedInvoices({ actor: operator })).invoices).toEqual([]);

    const order = { pack: '25', currency: 'GBP', purchaseOrder: 'PO 9', termsDays: 30 } as const;
    value(await requestProForma({ ...finance, ...order }));
    const { proFormas } = value(await listOpenTransfers({ actor: operator }));
    expect(proFormas.map(({ purchaseOrder, team }) => [purchaseOrder, team.slug])).toEqual([['PO 9', slug]]);

    const { acts } = value(await listOperatorActs({ actor: operator }));
    expect(acts.map(({ act, person }) => [act, person]).reverse()).toEqual(
      [
        'mark_transfer_received',
        'mark_transfer_received',
        'add_price_book',
        'grant_goodwill',
        'mark_transfer_received',
        'answer_invoice',
      ].map((act) => [act, 'Olive']),
    );
  });

  it('cannot change or remove the record, and a refused act leaves none', async () => {
    const count = await OperatorAct.count();
    for (const sql of [
      `UPDATE operatorActs SET act = 'x'`,
      `DELETE FROM operatorActs`,
      `INSERT OR REPLACE INTO operatorActs SELECT * FROM operatorActs`,
    ])
      await expect(database().query(sql)).rejects.toMatchObject({
        parent: { message: expect.stringMatching(/never (changed|removed)/) as string },
      });
    await grantGoodwill({ actor: operator, team: 'nobody', microcredits: 1, reason: 'x' });
    expect(await OperatorAct.count()).toBe(count);
  });
});
