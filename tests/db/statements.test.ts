/**
 * Statements against plain SQL: everything is summed again from the JSON of the transactions alone, with the months cut
 * by SQLite's own date functions at a fixed offset. A random history over four months, seed fixed.
 */
import { QueryTypes } from 'sequelize';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { Segment } from '@db/models/jobs.ts';
import { inWriteTransaction } from '@db/in-write-transaction.ts';
import { setClock } from '@/server/clock.ts';
import { setExecutor } from '@/server/jobs/executor.ts';
import { launchJob } from '@/server/jobs/launch-job.ts';
import { freezeLot } from '@/server/ledger/freeze-lot.ts';
import { decideFrozenLot } from '@/server/ledger/decide-frozen-lot.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { issueBoughtCredits } from '@/server/ledger/issue-bought-credits.ts';
import { refundLot } from '@/server/ledger/refund-lot.ts';
import { releaseHold } from '@/server/ledger/release-hold.ts';
import { readOpenLots } from '@/server/ledger/read-open-lots.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { exportStatement } from '@/server/statements/export-statement.ts';
import { listStatementLines } from '@/server/statements/list-statement-lines.ts';
import { readStatement } from '@/server/statements/read-statement.ts';
import { readYearSummary } from '@/server/statements/read-year-summary.ts';
import { createProjectCode } from '@/server/teams/create-project-code.ts';
import { inProcessExecutor, makeBench, quote, value, type Bench } from '@tests/support/jobs.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
/** India has kept +05:30 without summer time: SQL can cut its months by a constant. */
const zone = 'Asia/Kolkata';
const localMonth = `strftime('%Y-%m', occurredAt, '+330 minutes')`;
const months = ['2027-01', '2027-02', '2027-03', '2027-04'];
let bench: Bench;
let by: { actor: Bench['actors']['finance']; team: string };

/** A small linear congruential generator (Numerical Recipes' constants, from memory): any would do. */
let state = 20270401;
const random = (below: number): number => {
  state = (1664525 * state + 1013904223) >>> 0;
  return state % below;
};

beforeAll(async () => {
  setExecutor(inProcessExecutor());
  let at = Date.parse('2027-01-03T00:00:00Z');
  setClock(() => at);
  bench = await makeBench({ credits: 50 });
  await inWriteTransaction(() => bench.team.update({ timeZone: zone }));
  const { actors, team } = bench;
  by = { actor: actors.finance, team: team.slug };
  for (const code of ['SOUTH-2', 'NORTH-1'])
    value(await createProjectCode({ actor: actors.owner, team: team.slug, code }));
  for (let act = 0; act < 120; act += 1) {
    // Close enough together that each side of a midnight that is not UTC's is met.
    at += 18 * 3_600_000 + random(12 * 3_600_000);
    const teamId = team.id;
    if (act % 20 === 0)
      await issueBoughtCredits({
        teamId,
        creditsMicrocredits: 25_000_000,
        netMinor: 2_200,
        currency: 'GBP',
        purchaseId: `p${act}`,
      });
    if (act % 31 === 0)
      await grantCredits({ teamId, amountMicrocredits: 1 + random(999_999), reason: 'Goodwill', grantId: `g${act}` });
    if (act % 8 === 0) {
      const actor = random(2) === 0 ? actors.modeller : actors.owner;
      const { id } = await quote(bench, {
        lane: random(2) === 0 ? 'steady' : 'express',
        replicates: 100,
        seed: String(act),
      });
      const projectCode = ['SOUTH-2', 'NORTH-1', undefined][random(3)];
      value(
        await launchJob({
          actor,
          team: team.slug,
          quoteId: id,
          name: act === 0 ? '=cmd()' : `Job ${act}`,
          capMicrocredits: 2_000_000,
          projectCode,
        }),
      );
    }
    const segments = await Segment.findAll({ order: [['id', 'ASC']] });
    const segment = segments[random(segments.length)]!;
    const of = { teamId, jobId: segment.jobId, segmentId: segment.id };
    await settleCharge({ ...of, settlementId: `s${act}`, chargeMicrocredits: random(90_001), memo: { events: '5' } });
    if (act % 23 === 22) await releaseHold({ ...of, releaseId: `r${act}`, amountMicrocredits: 1_000 });
    if (act % 40 === 39) {
      const lots = (await readOpenLots(teamId)).filter(({ source }) => source === 'bought');
      value(
        await refundLot({ teamId, lotId: lots[0]!.id, amountMicrocredits: 1 + random(1_000_000), refundId: `f${act}` }),
      );
      await freezeLot({ teamId, lotId: lots.at(-1)!.id, disputeId: `d${act}`, occasion: 'opened' });
      await decideFrozenLot({
        teamId,
        lotId: lots.at(-1)!.id,
        disputeId: `d${act}`,
        outcome: act === 39 ? 'lost' : 'won',
      });
    }
  }
}, 120_000);
afterAll(() => setClock(null));

const select = <T extends object>(sql: string) =>
  database().query<T>(sql, { type: QueryTypes.SELECT, bind: { teamId: bench.team.id } });

/** Σ of one account's postings, from the transactions' JSON. */
const summed = async (account: string, where: string): Promise<number> => {
  const [row] = await select<{ amount: number | null }>(
    `SELECT sum(item.value ->> 'amountMicrocredits') AS amount FROM ledgerTransactions, json_each(postings) AS item
     WHERE teamId = $teamId AND item.value ->> 'account' = '${account}' AND ${where}`,
  );
  return row!.amount ?? 0;
};

describe('statements by month', () => {
  it.each(months)('of %s agree with plain SQL to the microcredit', async (month) => {
    const { statement } = value(await readStatement({ ...by, month }));
    const inMonth = `${localMonth} = '${month}'`;
    const owned = async (where: string) =>
      (await summed('available', where)) + (await summed('held', where)) + (await summed('frozen', where));
    const expected = {
      openingMicrocredits: await owned(`${localMonth} < '${month}'`),
      boughtMicrocredits: 0 - (await summed('bought', inMonth)),
      grantedMicrocredits: 0 - (await summed('granted', inMonth)),
      earnedMicrocredits: 0,
      spentMicrocredits: await summed('spent', inMonth),
      refundedMicrocredits: await summed('returned', `${inMonth} AND kind = 'refund'`),
      takenBackMicrocredits: await summed('returned', `${inMonth} AND kind = 'dispute_lost'`),
      closingMicrocredits: await owned(`${localMonth} <= '${month}'`),
    };
    expect(statement).toMatchObject(expected);
    expect(expected.spentMicrocredits).toBeGreaterThan(0);
    const sums = [statement.byProjectCode, statement.byMember, statement.byLane].map((parts) =>
      parts.reduce((sum, part) => sum + part.spentMicrocredits, 0),
    );
    expect(sums).toEqual(Array(3).fill(expected.spentMicrocredits));
  });

  it.each([
    ['byProjectCode', 'jobs.projectCodeId'],
    ['byMember', 'segments.userId'],
    ['byLane', `quotes.inputs ->> 'lane'`],
  ] as const)('break spending down %s as plain SQL does', async (breakdown, column) => {
    const rows = await select<{ id: string | null; spent: number; jobs: number }>(
      `SELECT ${column} AS id, sum(item.value ->> 'amountMicrocredits') AS spent, count(DISTINCT own.jobId) AS jobs
       FROM ledgerTransactions AS own, json_each(postings) AS item
       JOIN jobs ON jobs.id = own.jobId JOIN segments ON segments.id = own.segmentId JOIN quotes ON quotes.id = segments.quoteId
       WHERE own.teamId = $teamId AND item.value ->> 'account' = 'spent' AND ${localMonth} = '2027-02' GROUP BY 1 ORDER BY 2 DESC`,
    );
    const { statement } = value(await readStatement({ ...by, month: '2027-02' }));
    const found = statement[breakdown].map(({ id, spentMicrocredits: spent, jobs }) => ({ id, spent, jobs }));
    expect(found).toEqual(rows);
    expect(rows.length).toBeGreaterThan(1);
  });

  it('follow each other: each opens where the one before closed, and the year adds up', async () => {
    const { summary } = value(await readYearSummary({ ...by, year: 2027 }));
    const named = summary.months.slice(0, 4);
    for (const [index, each] of named.entries()) {
      const before = named[index - 1];
      if (before) expect(each.openingMicrocredits).toBe(before.closingMicrocredits);
      const { statement } = value(await readStatement({ ...by, month: each.month }));
      expect(statement).toMatchObject(each);
      expect(
        each.openingMicrocredits +
          each.boughtMicrocredits +
          each.grantedMicrocredits +
          each.earnedMicrocredits -
          each.spentMicrocredits -
          each.refundedMicrocredits -
          each.takenBackMicrocredits,
      ).toBe(each.closingMicrocredits);
    }
    expect(summary.total.spentMicrocredits).toBe(await summed('spent', '1'));
    expect(summary.byProjectCode.reduce((sum, { spentMicrocredits }) => sum + spentMicrocredits, 0)).toBe(
      summary.total.spentMicrocredits,
    );
  });

  it('print the head of the chain at their end', async () => {
    const { statement } = value(await readStatement({ ...by, month: '2027-02' }));
    const [row] = await select<{ sequence: number; hash: string }>(
      `SELECT sequence, hash FROM ledgerTransactions WHERE teamId = $teamId AND ${localMonth} <= '2027-02' ORDER BY sequence DESC LIMIT 1`,
    );
    expect(statement.head).toMatchObject(row!);
  });

  it('list every charged segment once by cursor, each with its job, adding up to what was spent', async () => {
    const seen: { segmentId: string; jobId: string; spentMicrocredits: number }[] = [];
    let cursor: string | null | undefined;
    do {
      const page = value(
        await listStatementLines({ ...by, month: '2027-02', limit: 3, ...(cursor ? { cursor } : {}) }),
      );
      seen.push(...page.lines);
      cursor = page.nextCursor;
    } while (cursor);
    expect(new Set(seen.map(({ segmentId }) => segmentId)).size).toBe(seen.length);
    const { statement } = value(await readStatement({ ...by, month: '2027-02' }));
    expect(seen).toHaveLength(statement.lines);
    expect(seen.reduce((sum, line) => sum + line.spentMicrocredits, 0)).toBe(statement.spentMicrocredits);
    for (const { jobId, segmentId } of seen) expect((await Segment.findByPk(segmentId))!.jobId).toBe(jobId);
  });

  it('export rows whose credits add up from opening to closing balance, with no formula among them', async () => {
    const { pieces } = value(await exportStatement({ ...by, month: '2027-01' }));
    let text = '';
    for await (const piece of pieces) text += piece;
    const rows = text
      .trim()
      .split('\r\n')
      .map((line) => line.split(','));
    const micro = (row: string[]) => Math.round(Number(row.at(-1)) * 1_000_000);
    const last = rows.at(-1)!;
    expect(rows.slice(1, -1).reduce((sum, row) => sum + micro(row), 0)).toBe(micro(last));
    expect(last[0]).toBe('Closing balance');
    expect(text).toContain(`,'=cmd(),`);
  });

  it('are refused for a month that has not begun', async () => {
    expect(await readStatement({ ...by, month: '2199-01' })).toMatchObject({ ok: false, code: 'invalid_input' });
    expect(await readYearSummary({ ...by, year: 2199 })).toMatchObject({ ok: false, code: 'invalid_input' });
  });
});
