/** The invariants of the design by plain SQL over the rows: independent of the code that wrote them. */
import { QueryTypes } from 'sequelize';
import { expect } from 'vitest';
import { database } from '@db/connection.ts';
import { accounts } from '@/domain/ledger/accounts.ts';
import type { MoneyWorld } from './money-world.ts';

const select = <T extends object>(sql: string, teamId: string): Promise<T[]> =>
  database().query<T>(sql, { type: QueryTypes.SELECT, bind: { teamId } });

const accountSums = accounts
  .map((account) => `coalesce(sum(amountMicrocredits) FILTER (WHERE account = '${account}'), 0) AS ${account}`)
  .join(', ');

/** The latest transaction of each of a team's segments carries the segment's running totals. */
const lastOfSegment = `sequence IN (SELECT max(sequence) FROM ledgerTransactions
  WHERE teamId = $teamId AND segmentId IS NOT NULL GROUP BY segmentId)`;

/** Holds after every step, whatever was lost, repeated, reordered or cut off so far. */
export async function expectInvariants(world: MoneyWorld): Promise<void> {
  const { teamId, fake } = world;
  const [sums] = await select<Record<(typeof accounts)[number], number>>(
    `SELECT ${accountSums} FROM ledgerPostings WHERE teamId = $teamId`,
    teamId,
  );
  const { available, held, frozen, spent, returned, bought, granted, earned } = sums!;
  expect(Math.min(available, held, frozen, spent, returned), 'holdings').toBeGreaterThanOrEqual(0);
  expect(Math.max(bought, granted, earned), 'sources').toBeLessThanOrEqual(0);
  expect(available + held + frozen + spent + returned + bought + granted + earned, 'double entry').toBe(0);

  const [totals] = await select<
    Record<'issued' | 'drawn' | 'segmentHeld' | 'segmentSpent' | 'creditsReturned', number>
  >(
    `SELECT
       (SELECT coalesce(sum(creditsMicrocredits), 0) FROM lots WHERE teamId = $teamId) AS issued,
       (SELECT coalesce(sum(amountMicrocredits), 0) FROM lotDraws
        WHERE lotId IN (SELECT id FROM lots WHERE teamId = $teamId)) AS drawn,
       (SELECT coalesce(sum(segmentHeldMicrocredits), 0) FROM ledgerTransactions WHERE ${lastOfSegment}) AS segmentHeld,
       (SELECT coalesce(sum(segmentSpentMicrocredits), 0) FROM ledgerTransactions WHERE ${lastOfSegment}) AS segmentSpent,
       (SELECT coalesce(sum(amountMicrocredits), 0) FROM creditReturns WHERE teamId = $teamId) AS creditsReturned`,
    teamId,
  );
  expect(totals!.issued - totals!.drawn, 'what lots hold').toBe(available + held + frozen);
  expect(totals!.drawn, 'what lots gave').toBe(spent + returned);
  expect([totals!.segmentHeld, totals!.segmentSpent], 'segments').toEqual([held, spent]);
  expect(totals!.creditsReturned, 'credit notes for what went back').toBe(returned);

  // Credits follow from a payment that the service has, once each, and from nothing else.
  const purchases = await select<{
    state: string;
    paymentIntentId: string | null;
    creditsMicrocredits: number;
    totalMinor: number;
    lots: number;
    lotCredits: number;
    invoices: number;
  }>(
    `SELECT state, paymentIntentId, creditsMicrocredits, totalMinor,
       (SELECT count(*) FROM lots WHERE purchaseId = topUps.id) AS lots,
       (SELECT coalesce(sum(creditsMicrocredits), 0) FROM lots WHERE purchaseId = topUps.id) AS lotCredits,
       (SELECT count(*) FROM invoices WHERE topUpId = topUps.id) AS invoices
     FROM topUps WHERE teamId = $teamId`,
    teamId,
  );
  for (const { state, paymentIntentId, creditsMicrocredits, totalMinor, ...made } of purchases) {
    const paid = state === 'paid';
    expect(made, `a top-up that is ${state}`).toEqual({
      lots: paid ? 1 : 0,
      lotCredits: paid ? creditsMicrocredits : 0,
      invoices: paid ? 1 : 0,
    });
    if (paid)
      expect(fake.store.state.intents[paymentIntentId!]).toMatchObject({
        status: 'succeeded',
        amount_received: totalMinor,
      });
  }

  // What is frozen is frozen for an open dispute, and what a lost one took has its credit notes; no dispute takes more than it covers.
  const disputes = await select<{
    state: string;
    totalMinor: number;
    coveredMicrocredits: number;
    frozenMicrocredits: number;
    takenMicrocredits: number;
    owedMinor: number | null;
  }>(
    `SELECT d.state, d.totalMinor, d.coveredMicrocredits, d.frozenMicrocredits, d.takenMicrocredits, r.totalMinor AS owedMinor
     FROM disputes d LEFT JOIN receivables r ON r.disputeId = d.id WHERE d.teamId = $teamId`,
    teamId,
  );
  const [taken] = await select<{ sum: number }>(
    `SELECT coalesce(sum(amountMicrocredits), 0) AS sum FROM creditReturns WHERE teamId = $teamId AND cause = 'dispute'`,
    teamId,
  );
  const over = (field: 'frozenMicrocredits' | 'takenMicrocredits') =>
    disputes.reduce((sum, row) => sum + row[field], 0);
  expect([over('frozenMicrocredits'), over('takenMicrocredits')], 'disputes').toEqual([frozen, taken!.sum]);
  for (const { state, totalMinor, coveredMicrocredits, frozenMicrocredits, takenMicrocredits, owedMinor } of disputes) {
    expect(frozenMicrocredits + takenMicrocredits).toBeLessThanOrEqual(coveredMicrocredits);
    if (state !== 'open') expect(frozenMicrocredits).toBe(0);
    if (state !== 'lost') expect([takenMicrocredits, owedMinor]).toEqual([0, null]);
    expect(owedMinor ?? 0).toBeLessThanOrEqual(totalMinor);
    if (takenMicrocredits === coveredMicrocredits) expect(owedMinor ?? 0, 'owed though all was taken').toBe(0);
  }

  // A credit note never gives back more than its invoice took, nor the service more than our notes say.
  const invoices = await select<{ paymentIntentId: string; totalMinor: number; noted: number; fellDue: number }>(
    `SELECT t.paymentIntentId, i.totalMinor,
       (SELECT coalesce(sum(totalMinor), 0) FROM invoices n WHERE n.correctsInvoiceId = i.id) AS noted,
       (SELECT coalesce(sum(totalMinor), 0) FROM creditReturns r WHERE r.invoiceId = i.id AND r.cause = 'refund') AS fellDue
     FROM invoices i JOIN topUps t ON t.id = i.topUpId WHERE i.teamId = $teamId AND i.kind = 'invoice'`,
    teamId,
  );
  for (const { paymentIntentId, totalMinor, noted, fellDue } of invoices) {
    expect(noted, 'credit notes of an invoice').toBeLessThanOrEqual(totalMinor);
    expect(world.refundedOf(paymentIntentId), 'money sent back').toBeLessThanOrEqual(fellDue);
  }
}

/** Holds once everything has arrived: no payment without credits, and no refund that was not sent. */
export async function expectHealed(world: MoneyWorld): Promise<void> {
  const { teamId, fake } = world;
  const topUps = await world.topUps();
  const received = Object.values(fake.store.state.intents).filter(({ status }) => status === 'succeeded');
  expect(received.map(({ id }) => id).sort()).toEqual(
    topUps
      .filter(({ state }) => state === 'paid')
      .map(({ paymentIntentId }) => paymentIntentId)
      .sort(),
  );
  const decided = Object.values(fake.store.state.disputes).map(({ id, status }) => [
    id,
    status === 'needs_response' ? 'open' : status,
  ]);
  const ours = await select<{ id: string; state: string }>(
    'SELECT id, state FROM disputes WHERE teamId = $teamId',
    teamId,
  );
  expect(ours.map(({ id, state }) => [id, state]).sort()).toEqual(decided.sort());
  const due = await select<{ paymentIntentId: string; totalMinor: number }>(
    `SELECT paymentIntentId, sum(totalMinor) AS totalMinor FROM creditReturns
     WHERE teamId = $teamId AND cause = 'refund' AND state = 'sent' GROUP BY paymentIntentId`,
    teamId,
  );
  for (const { paymentIntentId, totalMinor } of due) expect(world.refundedOf(paymentIntentId)).toBe(totalMinor);
  // The service refuses to refund what is disputed; such a refund waits for an operator or for the dispute's end.
  const waiting = await select<{ state: string; paymentIntentId: string }>(
    `SELECT state, paymentIntentId FROM creditReturns WHERE teamId = $teamId AND state NOT IN ('sent', 'taken')`,
    teamId,
  );
  const disputed = new Set(Object.values(fake.store.state.disputes).map(({ payment_intent }) => payment_intent));
  const unsent = waiting.filter(({ state, paymentIntentId }) => state !== 'failed' || !disputed.has(paymentIntentId));
  expect(unsent, 'refunds not sent').toEqual([]);
}

/** Over all teams: every series of documents counts from 1 without a gap. */
export async function expectGaplessSeries(): Promise<void> {
  const series = await database().query<{ series: string; documents: number; last: number }>(
    'SELECT series, count(*) AS documents, max(numberInYear) AS last FROM invoices GROUP BY series, year',
    { type: QueryTypes.SELECT },
  );
  expect(series.length).toBeGreaterThan(0);
  for (const { series: name, documents, last } of series) expect(last, name).toBe(documents);
}
