/** Invoices, their review, receipts and pro-formas over the API. */
import { QueryTypes } from 'sequelize';
import { beforeAll, describe, expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { Invoice, ProForma } from '@db/models/billing.ts';
import type { InvoiceDocument, ProFormaDocument } from '@/contracts/billing.ts';
import { composeFace } from '@/domain/billing/invoice-face.ts';
import { issueInvoice } from '@/server/billing/issue-invoice.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { sendReceipts } from '@/server/billing/send-receipts.ts';
import { readBalance } from '@/server/ledger/read-balance.ts';
import { bearerHeaders, makeTeam, makeUser, signedInHeaders, type MadeTeam } from '@tests/factories/people.ts';
import { callEndpoint } from '@tests/support/call-endpoint.ts';
import { mailsTo } from '@tests/support/mailbox.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let mine: MadeTeam;
let other: MadeTeam;
let finance: Record<string, string>;
let stranger: Record<string, string>;
beforeAll(async () => {
  mine = await makeTeam();
  other = await makeTeam();
  finance = await bearerHeaders({ user: mine.people.finance, team: mine.team });
  stranger = await bearerHeaders({ user: other.people.owner, team: other.team });
});
const call = (path: string, method = 'GET', body?: unknown, headers = finance) =>
  callEndpoint({
    method,
    path: `/api/v1/teams/${mine.team.slug}/${path}`,
    headers,
    ...(body === undefined ? {} : { body }),
  });
const json = async <T>(answer: Response | Promise<Response>): Promise<T> => (await (await answer).json()) as T;

const details = { name: 'Tarn GmbH', address: 'Ufer 1\n10115 Berlin', country: 'de', vatNumber: 'DE 136 695 976' };
const order = { pack: '500', currency: 'EUR', purchaseOrder: 'PO-77', termsDays: 30 };

describe('billing details', () => {
  it('are absent until set, and a pro-forma needs them', async () => {
    expect(await json(call('billing-details'))).toEqual({ billingDetails: null });
    const refused = await call('pro-formas', 'POST', order);
    expect(refused.status).toBe(409);
    expect(await json(refused)).toMatchObject({ code: 'billing_details_missing' });
  });

  it.each([
    [{ ...details, vatNumber: 'DE136695977' }, 'vatNumber'],
    [{ ...details, country: 'Germany' }, 'country'],
    [{ ...details, name: '  ' }, 'name'],
    [{ ...details, address: 'a\nb\nc\nd\ne\nf\ng' }, 'address'],
    [{ ...details, email: 'nobody' }, 'email'],
  ])('refuse %j at %s', async (body, path) => {
    const answer = await call('billing-details', 'PUT', body);
    expect(answer.status).toBe(422);
    expect(await json(answer)).toMatchObject({ errors: [{ path }] });
  });

  it('are kept with the VAT number as it is written officially', async () => {
    await call('billing-details', 'PUT', details);
    expect(await json(call('billing-details'))).toMatchObject({
      billingDetails: { country: 'DE', vatNumber: 'DE136695976' },
    });
  });
});

describe('a pro-forma', () => {
  let proForma: ProFormaDocument;
  it('has a number series of its own, a due date by its terms, and reverse charge for a business abroad', async () => {
    const answer = await call('pro-formas', 'POST', order);
    expect(answer.status).toBe(201);
    ({ proForma } = await json<{ proForma: ProFormaDocument }>(answer));
    expect(proForma).toMatchObject({
      number: `PF-${new Date().getUTCFullYear()}-00001`,
      state: 'open',
      overdue: false,
      purchaseOrder: 'PO-77',
      credits: 500,
      net: { amountMinor: 45_000, currency: 'EUR' },
      tax: { amountMinor: 0 },
      total: { amountMinor: 45_000 },
      invoiceId: null,
    });
    expect(Date.parse(proForma.dueAt) - Date.parse(proForma.createdAt)).toBeGreaterThan(29.9 * 86_400_000);
  });

  it('prints as a PDF that another team cannot have', async () => {
    const pdf = await call(`pro-formas/${proForma.id}/pdf`);
    expect(pdf.headers.get('content-type')).toBe('application/pdf');
    expect(
      Buffer.from(await pdf.arrayBuffer())
        .subarray(0, 8)
        .toString(),
    ).toBe('%PDF-1.7');
    expect((await call(`pro-formas/${proForma.id}/pdf`, 'GET', undefined, stranger)).status).toBe(404);
    const own = await callEndpoint({
      path: `/api/v1/teams/${other.team.slug}/pro-formas/${proForma.id}/pdf`,
      headers: stranger,
    });
    expect(own.status).toBe(404);
  });

  it('becomes credits and one invoice when an operator marks the transfer received, however often', async () => {
    const operator = await makeUser({ operator: true });
    const path = `/api/v1/operate/pro-formas/${proForma.id}/received`;
    expect(
      (await callEndpoint({ method: 'POST', path, headers: await signedInHeaders(mine.people.owner) })).status,
    ).toBe(404);
    const headers = await signedInHeaders(operator);
    const answers = await Promise.all([0, 1, 2].map(() => callEndpoint({ method: 'POST', path, headers })));
    const bodies = await Promise.all(answers.map((answer) => json<{ invoiceId: string }>(answer)));
    expect(new Set(bodies.map(({ invoiceId }) => invoiceId)).size).toBe(1);
    expect((await readBalance(mine.team.id)).available).toBe(500_000_000);
    const { proFormas } = await json<{ proFormas: ProFormaDocument[] }>(call('pro-formas'));
    expect(proFormas).toMatchObject([{ state: 'paid', invoiceId: bodies[0]?.invoiceId }]);
  });

  it('that is not open is refused', async () => {
    await call('pro-formas', 'POST', order);
    const row = await ProForma.findOne({ where: { state: 'open' } });
    await inWriteTransaction(async () => row?.update({ state: 'cancelled' }));
    const result = await markTransferReceived({ actor: { kind: 'system', reason: 'test' }, proFormaId: row?.id ?? '' });
    expect(result).toMatchObject({ ok: false, code: 'invalid_input' });
  });
});

describe('an invoice', () => {
  const newest = async (): Promise<string> =>
    (await json<{ invoices: { id: string }[] }>(call('invoices'))).invoices[0]?.id ?? '';

  it('shows what art. 226 of the VAT Directive asks for in a sale with reverse charge', async () => {
    // Source: Directive 2006/112/EC art. 226 (points 1 to 11a), as summed up in the design's references.
    const { invoice } = await json<{ invoice: InvoiceDocument }>(call(`invoices/${await newest()}`));
    expect(invoice).toMatchObject({
      number: `BUR-${new Date().getUTCFullYear()}-00001`,
      seller: { vatNumber: 'GB999999973' },
      buyer: { name: 'Tarn GmbH', address: 'Ufer 1\n10115 Berlin', country: 'DE', vatNumber: 'DE136695976' },
      lines: [{ quantity: 1, net: { amountMinor: 45_000, currency: 'EUR' } }],
      taxes: [{ category: 'AE', ratePercent: '0', base: { amountMinor: 45_000 }, tax: { amountMinor: 0 } }],
      purchaseOrder: 'PO-77',
      reviewState: 'to_review',
    });
    expect(invoice.issuedAt).toMatch(/^\d{4}-/);
    expect(invoice.taxPoint).toMatch(/^\d{4}-/);
    expect(invoice.notes.join(' ')).toMatch(/Reverse charge/);
  });

  it('prints the same bytes every time, and for nobody else', async () => {
    const id = await newest();
    const [first, second] = await Promise.all(
      [0, 1].map(async () => Buffer.from(await (await call(`invoices/${id}/pdf`)).arrayBuffer())),
    );
    expect(first?.equals(second ?? Buffer.alloc(0))).toBe(true);
    for (const path of ['', '/pdf']) {
      expect((await call(`invoices/${id}${path}`, 'GET', undefined, stranger)).status).toBe(404);
      const own = await callEndpoint({
        path: `/api/v1/teams/${other.team.slug}/invoices/${id}${path}`,
        headers: stranger,
      });
      expect(own.status).toBe(404);
    }
  });

  it('is questioned only with words, then approved; every step is kept and filters the list', async () => {
    const id = await newest();
    expect((await call(`invoices/${id}/review`, 'POST', { state: 'questioned' })).status).toBe(422);
    await call(`invoices/${id}/review`, 'POST', { state: 'questioned', comment: 'Which order is this?' });
    const { invoice } = await json<{ invoice: InvoiceDocument }>(
      call(`invoices/${id}/review`, 'POST', { state: 'approved' }),
    );
    expect(invoice.review.map(({ state, person }) => [state, person])).toEqual([
      ['questioned', mine.people.finance.name],
      ['approved', mine.people.finance.name],
    ]);
    const count = async (review: string) =>
      (await json<{ invoices: unknown[] }>(call(`invoices?review=${review}`))).invoices.length;
    expect([await count('approved'), await count('to_review'), await count('questioned')]).toEqual([1, 0, 0]);
  });

  it('is mailed once with its PDF to the owners and whoever ordered it', async () => {
    await sendReceipts();
    await sendReceipts();
    for (const { email } of [mine.people.owner, mine.people.finance]) {
      const mails = await mailsTo(email);
      expect(mails.map(({ subject }) => subject)).toEqual([
        expect.stringMatching(/^Receipt BUR-\d{4}-00001: 500 credits$/),
      ]);
      expect(mails[0]?.attachments?.[0]).toMatchObject({ contentType: 'application/pdf' });
    }
    expect(await mailsTo(mine.people.modeller.email)).toEqual([]);
  });

  it('cannot be changed, removed, replaced or numbered with a gap, not even by hand', async () => {
    const refusal = async (sql: string) =>
      database()
        .query(sql)
        .then(
          () => 'accepted',
          (error: { parent: Error }) => error.parent.message,
        );
    expect(await refusal(`UPDATE invoices SET totalMinor = 1, netMinor = 1`)).toMatch(/never changed/);
    expect(await refusal(`DELETE FROM invoices`)).toMatch(/never removed/);
    expect(await refusal(`INSERT OR REPLACE INTO invoices SELECT * FROM invoices`)).toMatch(
      /without a gap|never removed/,
    );
    expect(await refusal(`UPDATE proFormas SET netMinor = 1, totalMinor = 1`)).toMatch(/only an open one/);
    expect(await refusal(`DELETE FROM invoiceReviews`)).toMatch(/never removed/);
  });
});

describe('100 invoices issued at once', () => {
  it('have consecutive numbers without a gap or a double, also when some are rolled back', async () => {
    const party = { name: 'A', address: '', country: 'GB', vatNumber: null };
    const face = composeFace({
      seller: party,
      buyer: party,
      credits: 25,
      creditsMicrocredits: 25_000_000,
      netMinor: 2_200,
      currency: 'GBP',
      tax: { category: 'S', rateHundredths: 2_000, country: 'GB', note: null },
    });
    const actor = mine.actors.finance;
    const proFormaIds = await inWriteTransaction(async () => {
      const ids: string[] = [];
      for (let count = 0; count < 100; count += 1) {
        const opened = await requestProForma({ ...order, currency: 'EUR', actor, team: mine.team.slug });
        if (opened.ok) ids.push(opened.value.proForma.id);
      }
      return ids;
    });
    const before = await Invoice.count();
    const paidAt = new Date().toISOString();
    const results = await Promise.allSettled(
      proFormaIds.map((proFormaId, place) =>
        inWriteTransaction(async () => {
          await issueInvoice({ teamId: mine.team.id, face, paidAt, proFormaId });
          if (place % 10 === 3) throw new Error('crash after the number was taken');
        }),
      ),
    );
    expect(results.filter(({ status }) => status === 'rejected')).toHaveLength(10);
    const rows = await database().query<{ numberInYear: number }>(
      'SELECT numberInYear FROM invoices ORDER BY numberInYear',
      { type: QueryTypes.SELECT },
    );
    expect(rows.map(({ numberInYear }) => numberInYear)).toEqual(
      [...Array(before + 90).keys()].map((place) => place + 1),
    );
  }, 120_000);
});

it('lists by cursor without missing or repeating one', async () => {
  const seen: string[] = [];
  let cursor: string | null = null;
  do {
    const page: { invoices: { id: string }[]; nextCursor: string | null } = await json(
      call(`invoices?limit=40${cursor ? `&cursor=${cursor}` : ''}`),
    );
    seen.push(...page.invoices.map(({ id }) => id));
    cursor = page.nextCursor;
  } while (cursor);
  expect(seen).toHaveLength(await Invoice.count({ where: { teamId: mine.team.id } }));
  expect(new Set(seen).size).toBe(seen.length);
});
