/** From an invoice to the jobs its credits paid for and back, the ledger's filters, the invoice list's, the bulk zip, the thread. */
import { QueryTypes } from 'sequelize';
import { beforeAll, describe, expect, it } from 'vitest';
import { mkdtemp, readdir, writeFile } from 'node:fs/promises';
import { execFileSync } from 'node:child_process';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { database } from '@db/connection.ts';
import { Job } from '@db/models/jobs.ts';
import { Mail } from '@db/models/teams.ts';
import { Invoice } from '@db/models/billing.ts';
import { downloadInvoices } from '@/server/billing/download-invoices.ts';
import { exportInvoices } from '@/server/billing/export-invoices.ts';
import { listInvoiceMessages } from '@/server/billing/list-invoice-messages.ts';
import { listInvoices } from '@/server/billing/list-invoices.ts';
import { markTransferReceived } from '@/server/billing/mark-transfer-received.ts';
import { readInvoiceTrail } from '@/server/billing/read-invoice-trail.ts';
import { requestProForma } from '@/server/billing/request-pro-forma.ts';
import { reviewInvoice } from '@/server/billing/review-invoice.ts';
import { setBillingDetails } from '@/server/billing/set-billing-details.ts';
import { writeInvoiceMessage } from '@/server/billing/write-invoice-message.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { readJobCost } from '@/server/jobs/read-job-cost.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { exportLedger } from '@/server/ledger/export-ledger.ts';
import { listLedger } from '@/server/ledger/list-ledger.ts';
import { createProjectCode } from '@/server/teams/create-project-code.ts';
import { makeUser } from '@tests/factories/people.ts';
import {
  inProcessExecutor,
  makeBench,
  quote,
  replan,
  startJobs,
  value,
  whenOver,
  type Bench,
} from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

const house = useTestDatabase();
let bench: Bench;
let by: { actor: Bench['actors']['finance']; team: string };
let invoiceId: string;
let otherInvoiceId: string;
let jobs: Job[];

async function buy(purchaseOrder: string, actor: Bench['actors']['finance']): Promise<string> {
  const { proForma } = value(
    await requestProForma({ actor, team: by.team, pack: '25', currency: 'GBP', purchaseOrder, termsDays: 30 }),
  );
  const system = { kind: 'system', reason: 'test' } as const;
  return value(await markTransferReceived({ actor: system, proFormaId: proForma.id })).invoiceId;
}

beforeAll(async () => {
  // Less granted than one job costs, so that the first jobs draw from two lots.
  bench = await makeBench({ credits: 0.01 });
  by = { actor: bench.actors.finance, team: bench.team.slug };
  const details = { name: '=Evil & Sons Ltd', address: '1 Row', country: 'GB', vatNumber: null, email: null };
  value(await setBillingDetails({ ...by, billingDetails: details }));
  invoiceId = await buy('PO-NORTH-7', bench.actors.finance);
  otherInvoiceId = await buy('PO-SOUTH-8', bench.actors.owner);
  value(await createProjectCode({ actor: bench.actors.owner, team: by.team, code: 'TRAIL-1' }));
  setExecutor(inProcessExecutor());
  jobs = [];
  for (const [index, projectCode] of ['TRAIL-1', undefined].entries()) {
    const { id, microcredits } = await quote(bench, { seed: String(index) });
    // Under its expected cost the first one stops at its cap, so that something is absorbed.
    const capMicrocredits = index === 0 ? Math.floor(0.5 * microcredits.expected) : 2 * microcredits.high;
    const name = `Job ${index}`;
    const { job } = value(
      await launchJob({ actor: bench.actors.modeller, team: by.team, quoteId: id, name, capMicrocredits, projectCode }),
    );
    // Small batches, so that some are computed beyond the cap.
    await replan(job.id, 50);
    const stop = await startJobs(inProcessExecutor());
    jobs.push(await whenOver(job.id));
    await stop();
  }
}, 120_000);

const select = <T extends object>(sql: string, bind: Record<string, unknown>) =>
  database().query<T>(sql, { type: QueryTypes.SELECT, bind });

describe('the cost of a job', () => {
  it('explains each segment: floor(events × rate / 10^6) is what the ledger spent, and what was cut off is not charged', async () => {
    for (const job of jobs) {
      const { cost } = value(await readJobCost({ ...by, job: job.id }));
      const [segment] = cost.segments;
      const exact = BigInt(segment!.events) * BigInt(segment!.microcreditsPerMillionEvents);
      expect(BigInt(segment!.chargedMicrocredits)).toBe(exact / 1_000_000n);
      const [spent] = await select<{ amount: number }>(
        `SELECT sum(item.value ->> 'amountMicrocredits') AS amount FROM ledgerTransactions, json_each(postings) AS item
         WHERE jobId = $id AND item.value ->> 'account' = 'spent'`,
        { id: job.id },
      );
      expect(cost.chargedMicrocredits).toBe(spent!.amount);
      expect(cost.lots.reduce((sum, lot) => sum + lot.drawnMicrocredits, 0)).toBe(cost.chargedMicrocredits);
      const { capMicrocredits, heldMicrocredits, releasedMicrocredits } = segment!;
      expect(heldMicrocredits).toBe(0);
      expect(releasedMicrocredits + cost.chargedMicrocredits).toBe(capMicrocredits);
    }
    const [capped] = value(await readJobCost({ ...by, job: jobs[0]!.id })).cost.segments;
    expect(jobs[0]!.state).toBe('stopped_at_cap');
    expect(Number(capped!.absorbedEvents)).toBeGreaterThan(0);
    expect(value(await readJobCost({ ...by, job: jobs[1]!.id })).cost.segments[0]!.absorbedEvents).toBe('0');
  });

  it('leads from the job to the invoice that paid for it, and from the invoice back to the job', async () => {
    const { cost } = value(await readJobCost({ ...by, job: jobs[0]!.id }));
    expect(cost.lots.map(({ source }) => source)).toEqual(['grant', 'bought']);
    expect(cost.lots[1]!.invoice!.id).toBe(invoiceId);
    const { trail } = value(await readInvoiceTrail({ ...by, invoiceId }));
    expect(trail.jobs.map(({ id }) => id).sort()).toEqual(jobs.map(({ id }) => id).sort());
    expect(trail.jobs.find(({ id }) => id === cost.jobId)!.drawnMicrocredits).toBe(cost.lots[1]!.drawnMicrocredits);
    const { lot } = trail;
    expect(lot!.spentMicrocredits).toBe(trail.jobs.reduce((sum, job) => sum + job.drawnMicrocredits, 0));
    expect(lot!.remainingMicrocredits).toBe(25_000_000 - lot!.spentMicrocredits);
    expect(trail.timeline.map(({ words }) => words)).toEqual([
      expect.stringMatching(/^Pro-forma PF-\d{4}-00001 asked for/),
      'Transfer received, credits issued',
      'Invoice issued',
    ]);
  });

  it('pages through the jobs of an invoice by cursor', async () => {
    const first = value(await readInvoiceTrail({ ...by, invoiceId, limit: 1 })).trail;
    const second = value(await readInvoiceTrail({ ...by, invoiceId, limit: 1, cursor: first.nextCursor! })).trail;
    expect([first.jobs[0]!.id, second.jobs[0]!.id]).toEqual(jobs.map(({ id }) => id).reverse());
    expect(second.nextCursor).toBeNull();
  });
});

describe('the ledger explorer', () => {
  const all = async (filters: object) => {
    const entries = [];
    let cursor: string | null | undefined;
    do {
      const page = value(await listLedger({ ...by, ...filters, limit: 4, ...(cursor ? { cursor } : {}) }));
      entries.push(...page.entries);
      cursor = page.nextCursor;
    } while (cursor);
    return entries;
  };

  it('filters by kind, job and lot as plain SQL does', async () => {
    const { cost } = value(await readJobCost({ ...by, job: jobs[0]!.id }));
    const lotId = cost.lots[1]!.id;
    const sequences = async (where: string, bind: Record<string, unknown>) =>
      (
        await select<{ sequence: number }>(
          `SELECT sequence FROM ledgerTransactions WHERE teamId = $teamId AND ${where} ORDER BY sequence DESC`,
          { teamId: bench.team.id, ...bind },
        )
      ).map(({ sequence }) => sequence);
    const found = async (filters: object) => (await all(filters)).map(({ sequence }) => sequence);
    expect(await found({ kind: 'settlement' })).toEqual(await sequences(`kind = 'settlement'`, {}));
    expect(await found({ job: jobs[1]!.id })).toEqual(await sequences(`jobId = $job`, { job: jobs[1]!.id }));
    const ofLot = await sequences(`(lots LIKE '%' || $lot || '%' OR draws LIKE '%' || $lot || '%')`, { lot: lotId });
    expect(await found({ lot: lotId })).toEqual(ofLot);
    expect(ofLot.length).toBeGreaterThan(2);
  });

  it('filters by days in the time zone of the team, both included', async () => {
    const day = (offset: number) => new Date(Date.now() + offset * 86_400_000).toISOString().slice(0, 10);
    const everything = (await all({})).length;
    expect((await all({ from: day(-1), to: day(1) })).length).toBe(everything);
    expect((await all({ to: day(-2) })).length).toBe(0);
    expect((await all({ from: day(2) })).length).toBe(0);
  });

  it('exports every entry, its changes summing to what is available', async () => {
    let text = '';
    for await (const piece of value(await exportLedger(by)).pieces) text += piece;
    const rows = text.trim().split('\r\n').slice(1);
    expect(rows).toHaveLength((await all({})).length);
    const micro = rows.map((row) => Math.round(Number(row.split(',').at(-6)) * 1e6));
    const newest = Math.round(Number(rows[0]!.split(',').at(-3)) * 1e6);
    expect(micro.reduce((sum, change) => sum + change, 0)).toBe(newest);
  });
});

describe('the invoice list', () => {
  const ids = async (filters: object) => value(await listInvoices({ ...by, ...filters })).invoices.map(({ id }) => id);

  it('filters by words, buyer, project code, kind and day', async () => {
    expect(await ids({})).toEqual([otherInvoiceId, invoiceId]);
    expect(await ids({ search: 'po-north' })).toEqual([invoiceId]);
    expect(await ids({ search: '%' })).toEqual([]);
    expect(await ids({ search: 'evil & sons' })).toHaveLength(2);
    expect(await ids({ member: bench.people.owner.id })).toEqual([otherInvoiceId]);
    expect(await ids({ projectCode: 'TRAIL-1' })).toEqual([invoiceId]);
    expect(await ids({ projectCode: 'NONE' })).toEqual([]);
    expect(await ids({ kind: 'credit_note' })).toEqual([]);
    expect(await ids({ to: '2020-01-01' })).toEqual([]);
    expect(await ids({ from: '2020-01-01' })).toHaveLength(2);
  });

  it('is exported with a buyer whose name begins like a formula made harmless, and totals in minor units', async () => {
    let text = '';
    for await (const piece of value(await exportInvoices(by)).pieces) text += piece;
    expect(text).toContain(`,'=Evil & Sons Ltd,`);
    const invoice = (await Invoice.findByPk(invoiceId))!;
    expect(text).toContain(`,${(invoice.totalMinor / 100).toFixed(2)},`);
  });

  it('is downloaded as a zip that unzip finds whole, with PDF and UBL of each, and leaves no file behind', async () => {
    const { stream, bytes } = value(await downloadInvoices(by));
    const content = Buffer.from(await new Response(stream).arrayBuffer());
    expect(content.length).toBe(bytes);
    const file = path.join(await mkdtemp(path.join(tmpdir(), 'burette-zip-')), 'invoices.zip');
    await writeFile(file, content);
    expect(execFileSync('unzip', ['-t', file]).toString()).toContain('No errors');
    const names = execFileSync('unzip', ['-Z1', file]).toString().trim().split('\n');
    const numbers = (await Invoice.findAll()).map(({ number }) => number);
    expect(names.sort()).toEqual(['invoices.csv', ...numbers.flatMap((each) => [`${each}.pdf`, `${each}.xml`])].sort());
    await expect.poll(() => readdir(path.join(house.folder(), 'downloads'))).toEqual([]);
  });
});

describe('a questioned invoice', () => {
  it('has a thread with the operator, who is told by mail', async () => {
    const operator = await makeUser({ operator: true });
    value(await reviewInvoice({ ...by, invoiceId, state: 'questioned', comment: 'Which order is this?' }));
    value(await writeInvoiceMessage({ ...by, invoiceId, body: 'It has no PO of ours.' }));
    const { messages } = value(await listInvoiceMessages({ ...by, invoiceId }));
    expect(messages.map(({ side, body, person }) => [side, body, person])).toEqual([
      ['team', 'Which order is this?', bench.people.finance.name],
      ['team', 'It has no PO of ours.', bench.people.finance.name],
    ]);
    const mails = await Mail.findAll({ where: { recipient: operator.email } });
    expect(mails.map(({ subject }) => subject)).toEqual(
      Array(2).fill(expect.stringMatching(/^Question about invoice BUR-/)),
    );
    await expect(database().query(`UPDATE invoiceMessages SET body = 'x'`)).rejects.toThrow();
  });
});
