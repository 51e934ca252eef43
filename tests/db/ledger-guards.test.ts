/** Tampering by hand: what the triggers refuse, and what verification finds when the triggers were taken away. */
import { beforeAll, describe, expect, it } from 'vitest';
import { database } from '@db/connection.ts';
import { LedgerTransaction } from '@db/models/ledger.ts';
import { flows } from '@/domain/ledger/flows.ts';
import { grantCredits } from '@/server/ledger/grant-credits.ts';
import { holdCredits } from '@/server/ledger/hold-credits.ts';
import { postTransaction, type NewTransaction } from '@/server/ledger/post-transaction.ts';
import { settleCharge } from '@/server/ledger/settle-charge.ts';
import { verifyLedger } from '@/server/ledger/verify-ledger.ts';
import { plainTeam } from '@tests/support/plain-team.ts';
import { useTestDatabase } from '@tests/support/test-database.ts';

useTestDatabase();
let teamId: string;
let otherTeam: string;
beforeAll(async () => {
  teamId = await plainTeam();
  otherTeam = await plainTeam();
  for (const team of [teamId, otherTeam])
    await grantCredits({ teamId: team, amountMicrocredits: 1_000, reason: 'Welcome', grantId: `welcome:${team}` });
  await holdCredits({ teamId, jobId: 'job', segmentId: 'segment', amountMicrocredits: 400, userId: null });
  await settleCharge({
    teamId,
    jobId: 'job',
    segmentId: 'segment',
    settlementId: '1',
    chargeMicrocredits: 100,
    memo: { events: '100' },
  });
});

const message = async (work: Promise<unknown>): Promise<string> =>
  work.then(
    () => 'accepted',
    (error: { parent?: Error } & Error) => error.parent?.message ?? error.message,
  );
const sql = (text: string) => message(database().query(text));
const lot = (id: string, creditsMicrocredits: number) => ({
  id,
  teamId,
  source: 'grant' as const,
  creditsMicrocredits,
  netMinor: 0,
  currency: null,
  purchaseId: null,
});
const post = (more: Partial<NewTransaction>) =>
  message(postTransaction({ transactionKey: 'forged', kind: 'grant', teamId, postings: [], ...more }));

describe('the triggers of the ledger', () => {
  it.each([
    ['UPDATE of a transaction', `UPDATE ledgerTransactions SET memo = '{}'`, /never changed/],
    ['DELETE of a transaction', `DELETE FROM ledgerTransactions`, /never removed/],
    ['UPDATE of a posting', `UPDATE ledgerPostings SET amountMicrocredits = 1`, /never changed/],
    ['DELETE of a posting', `DELETE FROM ledgerPostings`, /never removed/],
    ['UPDATE of a lot', `UPDATE lots SET creditsMicrocredits = 5`, /never changed/],
    ['DELETE of a draw', `DELETE FROM lotDraws`, /never removed/],
    [
      'INSERT OR REPLACE of a transaction',
      `INSERT OR REPLACE INTO ledgerTransactions SELECT * FROM ledgerTransactions WHERE sequence = 1`,
      /must follow the head|never removed/,
    ],
    [
      'INSERT OR REPLACE of a posting',
      `INSERT OR REPLACE INTO ledgerPostings SELECT * FROM ledgerPostings LIMIT 1`,
      /come only from|never removed/,
    ],
    [
      'INSERT OR REPLACE of a draw',
      `INSERT OR REPLACE INTO lotDraws SELECT * FROM lotDraws LIMIT 1`,
      /come only from|never removed/,
    ],
    [
      'INSERT OR REPLACE of a price book',
      `INSERT OR REPLACE INTO priceBooks SELECT * FROM priceBooks`,
      /the next one|never removed/,
    ],
  ])('refuse %s', async (_, statement, refusal) => expect(await sql(statement)).toMatch(refusal));

  it('refuse a posting beside its transaction', async () => {
    expect(await sql(`INSERT INTO ledgerPostings VALUES (1, '${teamId}', 'earned', -5, -5)`)).toMatch(/come only from/);
  });

  it.each<[string, () => Partial<NewTransaction>, RegExp]>([
    [
      'postings that do not sum to zero',
      () => ({ postings: [{ teamId, account: 'available', amountMicrocredits: 5 }] }),
      /sum to zero/,
    ],
    [
      'postings that balance only across teams',
      () => ({
        postings: [
          { teamId, account: 'available', amountMicrocredits: -5 },
          { teamId: otherTeam, account: 'available', amountMicrocredits: 5 },
        ],
      }),
      /sum to zero/,
    ],
    [
      'a holding below zero',
      () => ({ kind: 'refund', postings: flows.disputeWon(teamId, 1) }),
      /drawn or frozen|CHECK/,
    ],
    ['credits without a lot', () => ({ postings: flows.grant(teamId, 5) }), /lots must be issued/],
    ['a lot without credits', () => ({ lots: [lot('free', 5)] }), /lots must be issued/],
    [
      'spending that draws no lot',
      () => ({
        kind: 'settlement',
        segment: { jobId: 'job', segmentId: 'segment', heldMicrocredits: 299, spentMicrocredits: 101 },
        postings: flows.settle(teamId, 1),
      }),
      /lots must be drawn/,
    ],
    [
      'a hold that skips the running total of its segment',
      () => ({
        kind: 'hold',
        segment: { jobId: 'job', segmentId: 'segment', heldMicrocredits: 999, spentMicrocredits: 100 },
        postings: flows.hold(teamId, 1),
      }),
      /running totals/,
    ],
    [
      'a segment taken over by another job',
      () => ({
        kind: 'hold',
        segment: { jobId: 'other', segmentId: 'segment', heldMicrocredits: 301, spentMicrocredits: 100 },
        postings: flows.hold(teamId, 1),
      }),
      /running totals/,
    ],
    [
      'more held than available',
      () => ({
        kind: 'hold',
        segment: { jobId: 'big', segmentId: 'big', heldMicrocredits: 5_000, spentMicrocredits: 0 },
        postings: flows.hold(teamId, 5_000),
      }),
      /CHECK constraint/,
    ],
    [
      'a fraction of a microcredit',
      () => ({
        postings: [
          { teamId, account: 'granted', amountMicrocredits: -0.5 },
          { teamId, account: 'available', amountMicrocredits: 0.5 },
        ],
      }),
      /integer amount/,
    ],
    [
      'amounts beyond 2^53 − 1',
      () => ({
        postings: [
          { teamId, account: 'granted', amountMicrocredits: -(2 ** 53) },
          { teamId, account: 'available', amountMicrocredits: 2 ** 53 },
        ],
        lots: [lot('huge', 2 ** 53)],
      }),
      /CHECK constraint/,
    ],
    [
      'an unknown account',
      () => ({
        postings: [
          { teamId, account: 'pocket' as 'held', amountMicrocredits: 1 },
          { teamId, account: 'available', amountMicrocredits: -1 },
        ],
      }),
      /CHECK constraint/,
    ],
  ])('refuse %s', async (_, more, refusal) => expect(await post(more())).toMatch(refusal));

  it('refuse a transaction that leaves a gap or forks the chain', async () => {
    const head = await LedgerTransaction.findOne({ order: [['sequence', 'DESC']] });
    const row = {
      ...head?.get(),
      id: 'x',
      transactionKey: 'x',
      hash: 'f'.repeat(64),
      kind: 'grant' as const,
      segmentId: null,
      segmentHeldMicrocredits: null,
      segmentSpentMicrocredits: null,
      postings: '[]',
      draws: '[]',
      lots: '[]',
    };
    const create = (more: object) => message(LedgerTransaction.create({ ...row, ...more } as never));
    const sequence = (head?.sequence ?? 0) + 1;
    expect(await create({ sequence: sequence + 1, previousHash: head?.hash })).toMatch(/follow the head/);
    expect(await create({ sequence, previousHash: head?.previousHash })).toMatch(/follow the head/);
  });

  it('leave the ledger whole after all of that', async () => {
    expect(await verifyLedger()).toMatchObject({ ok: true, transactions: 4 });
  });
});

describe('verifyLedger', () => {
  /** Does what only somebody with the file can do: drops the guards, changes something, and looks. */
  async function tampered(statement: string): Promise<unknown> {
    const sequelize = database();
    const triggers = (await sequelize.query(`SELECT name, sql FROM sqlite_master WHERE type = 'trigger'`))[0] as {
      name: string;
      sql: string;
    }[];
    const transaction = await sequelize.transaction();
    try {
      return await sequelize.transaction({ transaction }, async () => {
        await sequelize.query('PRAGMA defer_foreign_keys = ON', { transaction });
        for (const { name } of triggers) await sequelize.query(`DROP TRIGGER ${name}`, { transaction });
        await sequelize.query(statement, { transaction });
        return verifyLedger();
      });
    } finally {
      await transaction.rollback();
    }
  }

  it.each([
    [
      'an amount in a transaction',
      `UPDATE ledgerTransactions SET postings = replace(postings, '1000', '9000') WHERE sequence = 1`,
      1,
      /hash does not fit/,
    ],
    [
      'a moved date',
      `UPDATE ledgerTransactions SET occurredAt = '2020-01-01T00:00:00.000Z' WHERE sequence = 3`,
      3,
      /hash does not fit/,
    ],
    ['a removed transaction', `DELETE FROM ledgerTransactions WHERE sequence = 2`, 3, /transaction 2 is missing/],
    [
      'a posting row',
      `UPDATE ledgerPostings SET balanceMicrocredits = 700 WHERE transactionSequence = 3 AND account = 'available'`,
      3,
      /another balance/,
    ],
    ['a removed draw', `DELETE FROM lotDraws`, 4, /lot or draw rows/],
    ['the size of a lot', `UPDATE lots SET creditsMicrocredits = 7 WHERE transactionSequence = 2`, 2, /row of lot/],
    [
      'an added posting',
      `INSERT INTO ledgerPostings SELECT 99, teamId, 'returned', 5, 5 FROM ledgerPostings LIMIT 1`,
      4,
      /belong to no transaction/,
    ],
  ])('names %s as the first break', async (_, statement, sequence, fault) => {
    expect(await tampered(statement)).toMatchObject({
      ok: false,
      sequence,
      fault: expect.stringMatching(fault) as string,
    });
  });
});
